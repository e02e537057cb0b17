"""Read by mypy and pyright, never run: the types that correct use has."""

from typing import assert_type

from fourthrank import Ordering

assert_type(Ordering("11 22 33 23 13 12"), Ordering)
assert_type(Ordering("11 22 33 23 13 12").size, int)
