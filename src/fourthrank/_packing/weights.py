"""The data of a notation: an ordering, two shear weights and a sign; and what follows from them exactly."""

import math
from fractions import Fraction
from numbers import Real
from typing import Final, Literal, TypeAlias

from .._frozen import Frozen
from .._gather import Gather
from ..errors import NotationError
from ..ordering import Ordering

Side: TypeAlias = Literal["stress", "strain"]

# Weights that are square roots of 2 times a power of two are taken for what they stand for, so that products of
# them come out exact.
_SQUARE_OF_WEIGHT: Final = {
    math.sqrt(2.0): Fraction(2),
    math.sqrt(0.5): Fraction(1, 2),
    2.0 * math.sqrt(2.0): Fraction(8),
}


class Weights(Frozen):
    """An ordering with a weight for the shear components of stress, one for those of strain, and a sign."""

    __slots__ = ("_compression_positive", "_gathers", "_hash", "_ordering", "_strain_shear", "_stress_shear")

    _ordering: Ordering
    _stress_shear: float
    _strain_shear: float
    _compression_positive: bool
    # Index tables, made on first use; a race between threads makes the same table twice and loses nothing.
    _gathers: dict[tuple[str, ...], Gather]
    _hash: int

    def __init__(
        self, ordering: Ordering, *, stress_shear: float, strain_shear: float, compression_positive: bool = False
    ) -> None:
        if not isinstance(ordering, Ordering):  # pyright: ignore[reportUnnecessaryIsInstance]  # callers without a checker
            raise NotationError(f"ordering must be an Ordering, got {ordering!r}: write Ordering({ordering!r})")
        if not isinstance(compression_positive, bool):  # pyright: ignore[reportUnnecessaryIsInstance]  # as above
            raise NotationError(f"compression_positive must be True or False, got {compression_positive!r}")
        object.__setattr__(self, "_ordering", ordering)
        object.__setattr__(self, "_stress_shear", _read_weight("stress_shear", stress_shear))
        object.__setattr__(self, "_strain_shear", _read_weight("strain_shear", strain_shear))
        object.__setattr__(self, "_compression_positive", compression_positive)
        object.__setattr__(self, "_gathers", {})
        key = (ordering, self._stress_shear, self._strain_shear, compression_positive)
        object.__setattr__(self, "_hash", hash(key))

    @property
    def ordering(self) -> Ordering:
        """Which pair stands where."""
        return self._ordering

    @property
    def stress_shear(self) -> float:
        """The weight of the shear components of stress."""
        return self._stress_shear

    @property
    def strain_shear(self) -> float:
        """The weight of the shear components of strain."""
        return self._strain_shear

    @property
    def compression_positive(self) -> bool:
        """Whether stress and strain carry the opposite sign."""
        return self._compression_positive

    @property
    def work_conjugate(self) -> bool:
        """Whether the dot product of the two vectors is twice the energy density: a * b = 2, exactly."""
        return _square(self._stress_shear) * _square(self._strain_shear) == 4

    def side_squares(self, side: Side) -> list[Fraction]:
        """Return the exact squares of the weights of one kind of vector, place by place."""
        square = _square(self._stress_shear if side == "stress" else self._strain_shear)
        return [Fraction(1) if i == j else square for i, j in self._ordering.pairs]

    def multiplicities(self) -> list[int]:
        """Return how often each pair occurs in the full tensor: 1 or 2."""
        return [1 if i == j else 2 for i, j in self._ordering.pairs]

    def sign(self) -> int:
        """Return the factor common to all components of stress and strain."""
        return -1 if self._compression_positive else 1

    def matrix_squares(self, rows: Side, columns: Side) -> list[Fraction]:
        """Return the exact squares of the factors w_I * m_J / w_J of a linear map's matrix, row by row."""
        return [
            row * m * m / column
            for row in self.side_squares(rows)
            for m, column in zip(self.multiplicities(), self.side_squares(columns), strict=True)
        ]

    def label_places(self, index: tuple[int, ...]) -> str:
        """Return how the caller names a place of a vector ('23') or a matrix ('[23, 12]')."""
        labels = self._ordering.labels()
        names = ", ".join(labels[i] for i in index)
        return f"[{names}]" if len(index) > 1 else names


def label_indices(index: tuple[int, ...]) -> str:
    """Return how a component of a full tensor is named, for example '1123'."""
    return "".join(str(i + 1) for i in index)


def read_side(name: str, side: Side) -> Side:
    """Return `side` if it is one of the two kinds."""
    if side not in ("stress", "strain"):
        raise NotationError(f"{name} must be 'stress' or 'strain', got {name}={side!r}")
    return side


def _read_weight(name: str, weight: float) -> float:
    if isinstance(weight, Real) and not isinstance(weight, bool):  # pyright: ignore[reportUnnecessaryIsInstance]  # callers without a checker
        value = float(weight)
        if 0.0 < value < math.inf:
            return value
    raise NotationError(f"{name} must be a positive finite number, got {name}={weight!r}")


def _square(weight: float) -> Fraction:
    return _SQUARE_OF_WEIGHT.get(weight) or Fraction(weight) ** 2
