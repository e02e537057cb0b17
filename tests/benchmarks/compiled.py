"""The compiled reference: plain loops, one thread, no fast-math."""

import importlib
from collections.abc import Callable
from typing import Any

_numba: Any = importlib.import_module("numba")


def compiled(function: Callable[..., Any]) -> Callable[..., Any]:
    """Return `function` compiled to machine code on its first call."""
    result: Callable[..., Any] = _numba.njit(function)
    return result
