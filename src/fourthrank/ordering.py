"""Orderings: which index pair of a symmetric tensor stands at which place of its vector form.

A symmetric 3x3 tensor has six distinct components, and every program and paper lists them in an order of its own. An
`Ordering` is such a list as an object: it is always named by the caller, compared strictly, and shown in every error.
"""

from collections.abc import Iterable
from numbers import Integral
from typing import Final, Literal, final

import numpy as np
from numpy.typing import NDArray

from ._frozen import Frozen
from .errors import OrderingError

__all__ = ["COLUMN_BY_COLUMN_ORDER", "ROW_BY_ROW_ORDER", "VOIGT_ORDER", "Ordering"]

Pair = tuple[int, int]

_NORMAL_PAIRS: Final = ((0, 0), (1, 1), (2, 2))
_SHEAR_PAIRS: Final = ((1, 2), (0, 2), (0, 1))
_ALL_PAIRS: Final[frozenset[Pair]] = frozenset(_NORMAL_PAIRS + _SHEAR_PAIRS)
# The partial sets of plane problems: the in-plane pairs of each coordinate plane, without and with the normal pair of
# its third axis.
_PARTIAL_SETS: Final[frozenset[frozenset[Pair]]] = frozenset(
    pairs
    for i, j in _SHEAR_PAIRS
    for pairs in (
        frozenset({(i, i), (j, j), (i, j)}),
        frozenset({*_NORMAL_PAIRS, (i, j)}),
    )
)
_AXIS_OF_CHARACTER: Final = {"1": 0, "2": 1, "3": 2, "x": 0, "y": 1, "z": 2}
_EXPECTED: Final = (
    "expected the six pairs 11 22 33 23 13 12 (or xx yy zz yz xz xy) in any order, or a plane problem's three "
    "(for example 11 22 12) or four (11 22 33 12)"
)


@final
class Ordering(Frozen):
    """The order in which the components of a symmetric second-order tensor are listed.

    Parameters
    ----------
    pairs : str, Ordering or iterable of pairs of int
        Either text, pairs of axes separated by blanks or commas (``"11 22 33 23 13 12"``, ``"xx,yy,zz,xy,yz,zx"``), or
        zero-based index pairs (``((0, 0), (1, 1), ...)``). ``12`` and ``21`` name the same pair. All six pairs in any
        order make a complete ordering. Three in-plane pairs of a coordinate plane (``11 22 12``), or these and the
        normal pair of the third axis (``11 22 33 12``), in any order, make a partial one.

    Raises
    ------
    OrderingError
        If a pair is malformed, doubled or missing; the message names it.

    Examples
    --------
    >>> from fourthrank import Ordering
    >>> order = Ordering("xx yy zz xy yz zx")
    >>> order
    Ordering('11 22 33 12 23 13')
    >>> order.position(2, 1)
    4
    >>> order == Ordering("11 22 33 23 13 12")
    False
    """

    __slots__ = ("_hash", "_pairs", "_positions")

    _pairs: tuple[Pair, ...]
    _positions: dict[Pair, int]
    _hash: int

    def __init__(self, pairs: "str | Ordering | Iterable[tuple[int, int]]") -> None:
        found = pairs.pairs if isinstance(pairs, Ordering) else _read_pairs(pairs)
        positions: dict[Pair, int] = {}
        for position, pair in enumerate(found):
            if pair in positions:
                raise OrderingError(
                    f"pair {_label(pair)} is doubled: it stands at places {positions[pair] + 1} and {position + 1} of "
                    f"'{_text(found)}'; {_EXPECTED}"
                )
            positions[pair] = position
        if positions.keys() != _ALL_PAIRS and frozenset(positions) not in _PARTIAL_SETS:
            missing = " ".join(_label(p) for p in _NORMAL_PAIRS + _SHEAR_PAIRS if p not in positions)
            raise OrderingError(f"'{_text(found)}' has {len(found)} of the six pairs, without {missing}; {_EXPECTED}")
        object.__setattr__(self, "_pairs", found)
        object.__setattr__(self, "_positions", positions)
        object.__setattr__(self, "_hash", hash((Ordering, found)))

    @property
    def pairs(self) -> tuple[Pair, ...]:
        """The index pairs in order, zero-based, the smaller index first."""
        return self._pairs

    @property
    def size(self) -> int:
        """How many pairs there are: 6, or 3 or 4 for a partial ordering."""
        return len(self._pairs)

    @property
    def complete(self) -> bool:
        """Whether all six pairs are there."""
        return len(self._pairs) == 6

    def labels(self, axes: Literal["123", "xyz"] = "123") -> tuple[str, ...]:
        """Return the pairs as text, in digits or in letters.

        Parameters
        ----------
        axes : {"123", "xyz"}
            The names of the three axes.

        Returns
        -------
        tuple of str
            One label for each place.

        Raises
        ------
        OrderingError
            If `axes` is neither of the two.

        Examples
        --------
        >>> from fourthrank import Ordering
        >>> Ordering("11 22 33 23 13 12").labels("xyz")
        ('xx', 'yy', 'zz', 'yz', 'xz', 'xy')
        """
        if axes not in ("123", "xyz"):
            raise OrderingError(f"axes must be '123' or 'xyz', got axes={axes!r}")
        return tuple(axes[i] + axes[j] for i, j in self._pairs)

    def position(self, i: int, j: int) -> int:
        """Return the place of the pair (i, j), all zero-based.

        Parameters
        ----------
        i, j : int
            The two indices, 0, 1 or 2, in either order.

        Returns
        -------
        int
            The place in the ordering, from 0.

        Raises
        ------
        OrderingError
            If the indices are no pair, or the pair is not part of this (partial) ordering.

        Examples
        --------
        >>> from fourthrank import Ordering
        >>> Ordering("11 22 33 23 13 12").position(1, 0)
        5
        """
        pair = _read_pair((i, j))
        try:
            return self._positions[pair]
        except KeyError:
            raise OrderingError(f"pair {_label(pair)} is not part of the partial ordering '{self}'") from None

    def has_same_pairs(self, other: "Ordering") -> bool:
        """Tell whether `other` lists the same pairs, in this or another order.

        Parameters
        ----------
        other : Ordering
            The ordering to compare with.

        Returns
        -------
        bool
            True where both list the same set of pairs; ``==`` asks for the same order as well.

        Examples
        --------
        >>> from fourthrank import Ordering
        >>> Ordering("11 22 12").has_same_pairs(Ordering("12 11 22"))
        True
        """
        return self._positions.keys() == other._positions.keys()

    def permutation_to(self, other: "Ordering") -> NDArray[np.intp]:
        """Return the index array that brings a vector from this ordering to another.

        With p the result, ``v_other[..., k] = v_self[..., p[k]]``.

        Parameters
        ----------
        other : Ordering
            The ordering to go to; it must list the same pairs.

        Returns
        -------
        ndarray of intp, shape (size,)
            The places, in this ordering, of the pairs of `other`.

        Raises
        ------
        OrderingError
            If the two orderings do not list the same pairs.

        Examples
        --------
        >>> import numpy as np
        >>> from fourthrank import Ordering
        >>> source, target = Ordering("11 22 33 23 13 12"), Ordering("11 22 33 12 13 23")
        >>> np.array([1.0, 2.0, 3.0, 23.0, 13.0, 12.0])[source.permutation_to(target)]
        array([ 1.,  2.,  3., 12., 13., 23.])
        """
        if not self.has_same_pairs(other):
            raise OrderingError(
                f"'{self}' and '{other}' do not list the same pairs, so that no permutation leads from one to the other"
            )
        return np.array([self._positions[pair] for pair in other._pairs], dtype=np.intp)

    def __eq__(self, other: object) -> bool:
        return self is other or self._pairs == other._pairs if isinstance(other, Ordering) else NotImplemented

    def __hash__(self) -> int:
        return self._hash

    def __str__(self) -> str:
        return _text(self._pairs)

    def __repr__(self) -> str:
        return f"Ordering({str(self)!r})"

    def __reduce__(self) -> tuple[type["Ordering"], tuple[str]]:
        return Ordering, (str(self),)


def _read_pairs(pairs: object) -> tuple[Pair, ...]:
    """Return the pairs that `pairs` names, sorted within each pair."""
    if isinstance(pairs, str):
        return tuple(_read_word(word) for word in pairs.replace(",", " ").split())
    if not isinstance(pairs, Iterable):
        raise OrderingError(f"got {pairs!r} ({type(pairs).__name__}); {_EXPECTED}")
    return tuple(_read_pair(pair) for pair in pairs)  # pyright: ignore[reportUnknownVariableType,reportUnknownArgumentType]  # elements are checked one by one


def _read_word(word: str) -> Pair:
    """Return the pair that a word such as '12' or 'xy' names."""
    axes = [_AXIS_OF_CHARACTER.get(character.lower()) for character in word]
    mixed = any(c.isdigit() for c in word) and not word.isdigit()
    if len(axes) != 2 or axes[0] is None or axes[1] is None or mixed:
        raise OrderingError(
            f"'{word}' is no pair of axes: write two digits of 1 2 3 or two letters of x y z; {_EXPECTED}"
        )
    return min(axes[0], axes[1]), max(axes[0], axes[1])


def _read_pair(pair: object) -> Pair:
    """Return a zero-based index pair, sorted."""
    if isinstance(pair, (tuple, list, np.ndarray)) and len(pair) == 2:  # pyright: ignore[reportUnknownArgumentType]  # any sized pair
        i, j = pair  # pyright: ignore[reportUnknownVariableType]  # its two elements are checked next
        if _is_axis(i) and _is_axis(j):  # pyright: ignore[reportUnknownArgumentType]  # checked there
            return min(int(i), int(j)), max(int(i), int(j))  # pyright: ignore[reportUnknownArgumentType]  # both are integers now
    raise OrderingError(f"{pair!r} is no index pair: two of the integers 0, 1, 2 (axes 1, 2, 3); {_EXPECTED}")


def _is_axis(index: object) -> bool:
    return isinstance(index, Integral) and not isinstance(index, _BOOL) and 0 <= int(index) <= 2


_BOOL: Final[tuple[type, ...]] = (bool, np.bool_)


def _label(pair: Pair) -> str:
    return f"{pair[0] + 1}{pair[1] + 1}"


def _text(pairs: tuple[Pair, ...]) -> str:
    return " ".join(_label(pair) for pair in pairs)


VOIGT_ORDER: Final = Ordering("11 22 33 23 13 12")
"""The order of Voigt (1910): the normal pairs, then the shear pair opposite each axis."""

ROW_BY_ROW_ORDER: Final = Ordering("11 12 13 22 23 33")
"""The upper triangle of the 3x3 tensor read row by row (the lower one column by column)."""

COLUMN_BY_COLUMN_ORDER: Final = Ordering("11 12 22 13 23 33")
"""The upper triangle of the 3x3 tensor read column by column (the lower one row by row)."""
