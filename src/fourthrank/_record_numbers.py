"""The numbers of a record: decimals that give back every bit of the held form, whatever factor lies between."""

from collections.abc import Iterator, Sequence
from decimal import Context, Decimal
from fractions import Fraction
from typing import Final

import numpy as np
from numpy.typing import NDArray

from ._arrays import Inexact
from ._mandel import WORKING
from ._packing import Side
from ._strict_json import Json, excerpt
from .errors import RecordError
from .notation import Notation

_EXACT: Final = Context(prec=60)
# 18 digits tell any two neighbouring doubles apart, whatever factor they were multiplied by.
_LENGTHS: Final = tuple(Context(prec=digits) for digits in range(15, 19))

PLAIN: Final = (Decimal(1),)
"""The factors of an array that is written as it is."""


def places(notation: Notation) -> NDArray[np.intp]:
    """Return the places in the working form of the components that a notation lists."""
    return np.array([WORKING.ordering.position(i, j) for i, j in notation.ordering.pairs])


def factors(sides: tuple[Side, ...], notation: Notation) -> list[Decimal]:
    """Return what each component of the working form is multiplied by in a notation, to 60 digits.

    `sides` is what a vector is, or what the rows and the columns of a matrix stand for.
    """
    where: list[int] = places(notation).tolist()
    if len(sides) == 1:
        ours, theirs = WORKING.side_squares(sides[0]), notation.side_squares(sides[0])
        roots = [_root(theirs[n] / ours[place]) for n, place in enumerate(where)]
        return [root.copy_negate() for root in roots] if notation.compression_positive else roots
    ours, theirs = WORKING.matrix_squares(*sides), notation.matrix_squares(*sides)
    index = [6 * i + j for i in where for j in where]
    return [_root(theirs[n] / ours[place]) for n, place in enumerate(index)]


def write_array(values: Inexact, by: Sequence[Decimal]) -> str:
    """Return an array as JSON, one axis a level; a complex number is a pair. `by` are the factors of the last axes."""
    flat: list[float] = np.ascontiguousarray(values).view(np.float64).ravel().tolist()
    per = 2 if values.dtype.kind == "c" else 1
    literals = (_literal(value, by[n // per % len(by)]) for n, value in enumerate(flat))
    return _nested(literals, values.shape + (2,) * (per - 1), per)


def read_array(value: Json, shape: tuple[int, ...], is_complex: bool, by: Sequence[Decimal], name: str) -> Inexact:
    """Return the array of a known shape that `write_array` wrote, or raise `RecordError`."""
    per = 2 if is_complex else 1
    flat = [
        _double(decimal, by[n // per % len(by)], name)
        for n, decimal in enumerate(_leaves(value, shape + (2,) * (per - 1), name))
    ]
    array = np.array(flat, np.float64)
    return (array.view(np.complex128) if is_complex else array).reshape(shape)


def _root(square: Fraction) -> Decimal:
    return _EXACT.sqrt(_EXACT.divide(Decimal(square.numerator), Decimal(square.denominator)))


def _literal(value: float, factor: Decimal) -> str:
    """Return the shortest of the decimals, from 15 digits on, that give `value` back when divided by `factor`."""
    if factor == 1:
        return repr(value)
    exact = _EXACT.multiply(Decimal(value), factor)
    written = [context.normalize(exact) for context in _LENGTHS]
    return str(next(decimal for decimal in written if float(_EXACT.divide(decimal, factor)) == value))


def _double(decimal: Decimal, factor: Decimal, name: str) -> float:
    value = float(_EXACT.divide(decimal, factor))
    if value - value != 0.0 or (value == 0.0) != decimal.is_zero():
        raise RecordError(f"{name}: {excerpt(decimal)} is beyond the range of double precision")
    return value


def _nested(literals: Iterator[str], shape: tuple[int, ...], in_line: int) -> str:
    """Return lists in lists; so many of the last axes stand in one line."""
    if not shape:
        return next(literals)
    between = ", " if len(shape) <= in_line else ",\n    "
    return f"[{between.join(_nested(literals, shape[1:], in_line) for _ in range(shape[0]))}]"


def _leaves(value: Json, shape: tuple[int, ...], name: str) -> Iterator[Decimal]:
    """Yield the numbers in nested lists, whose lengths must be those of `shape`."""
    if not shape:
        if not isinstance(value, Decimal):
            raise RecordError(f"{name}: expected a number, got {excerpt(value)}")
        yield value
        return
    if not isinstance(value, list) or len(value) != shape[0]:
        found = f"a list of {len(value)}" if isinstance(value, list) else excerpt(value)
        raise RecordError(f"{name}: expected a list of {shape[0]} by the shape of the record, got {found}")
    for part in value:
        yield from _leaves(part, shape[1:], name)
