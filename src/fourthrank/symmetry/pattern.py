"""Patterns: which elements of a matrix vanish, are equal, or follow from others under a symmetry."""

from fractions import Fraction
from typing import Final

import numpy as np
from numpy.typing import NDArray

from .._table import Table
from .._value import make
from ..notation import Notation
from ..tensors import Compliance, Stiffness

__all__: list[str] = []

_ZERO: Final = 1e-9
_LARGEST_DENOMINATOR: Final = 24


def pattern_table(
    name: str, basis: NDArray[np.float64], notation: Notation, kind: type[Stiffness] | type[Compliance]
) -> Table:
    """Return the pattern of the matrices in the span of a basis (k, 6, 6), written in a notation."""
    elements = make(kind, basis.copy()).matrix(notation).reshape(-1, 36)
    symbol = "C" if kind is Stiffness else "S"
    labels = [f"{symbol}{row}{column}" for row in range(1, 7) for column in range(1, 7)]
    coefficients, places = _reduce(elements)
    independent = [labels[place] for place in places]
    cells = [_cell(column, independent) for column in coefficients.T.tolist()]
    titles = notation.ordering.labels()
    return Table(
        [f"{name} {kind.__name__}, {len(basis)} independent constants", repr(notation)],
        titles,
        [(title, cells[6 * row : 6 * row + 6]) for row, title in enumerate(titles)],
    )


def _reduce(elements: NDArray[np.float64]) -> tuple[NDArray[np.float64], list[int]]:
    """Return the coefficients (k, 36) of all elements in the independent ones, and where these stand.

    The reduced row echelon form: an element that is no combination of earlier ones is independent.
    """
    rows = elements.copy()
    places: list[int] = []
    for place in range(36):
        found = len(places)
        if found == len(rows):
            break
        pivot = found + int(np.abs(rows[found:, place]).argmax())
        if abs(rows[pivot, place]) > _ZERO:
            rows[[found, pivot]] = rows[[pivot, found]]
            rows[found] /= rows[found, place]
            others = np.arange(len(rows)) != found
            rows[others] -= rows[others, place, None] * rows[found]
            places.append(place)
    return rows, places


def _cell(coefficients: list[float], names: list[str]) -> str:
    """Return a sum of constants as text: '.', 'C11', '-C14', '1/2 C11-1/2 C12'."""
    text = "".join(
        f"{'-' if factor < 0.0 else '+'}{_factor(abs(factor))}{name}"
        for factor, name in zip(coefficients, names, strict=True)
        if abs(factor) > _ZERO
    )
    return text.removeprefix("+") or "."


def _factor(size: float) -> str:
    """Return a factor as text: nothing for 1, a fraction, a fraction times sqrt2, or four digits."""
    for root, suffix in ((1.0, ""), (np.sqrt(2.0), "sqrt2")):
        fraction = Fraction(size / root).limit_denominator(_LARGEST_DENOMINATOR)
        if abs(float(fraction) - size / root) < _ZERO:
            parts = [str(fraction)] * (fraction != 1) + [suffix] * bool(suffix)
            return " ".join([*parts, ""])
    return f"{size:.4g} "
