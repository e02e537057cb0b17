"""Misuse of orderings; every line that ends in `# rejected` must be an error to a type checker, no other may."""

from fourthrank import Ordering

Ordering()  # rejected
Ordering(6)  # rejected
Ordering("11 22 33 23 13 12").size = 6  # rejected
