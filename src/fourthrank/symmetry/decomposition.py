"""Decompositions of a tensor into orthogonal parts: down a chain of symmetries, and by the order of harmonics."""

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cache
from itertools import pairwise
from typing import Final, Generic

import numpy as np
from numpy.typing import NDArray

from .._arrays import Inexact
from .._value import make
from ..errors import SymmetryError
from ._invariants import RATES, from_constants
from .contractions import contract
from .groups import FourthRankT, Symmetry, take_fourth_rank
from .projection import norms, project_euclidean, ratio

__all__ = ["Decomposition", "HarmonicParts", "decompose", "harmonic_parts"]


@dataclass(frozen=True, slots=True, eq=False)
class Decomposition(Generic[FourthRankT]):
    """Orthogonal parts of a batch of tensors, shape (...), down a chain of n symmetries.

    Attributes
    ----------
    chain : tuple of Symmetry
        The symmetries, from the highest down.
    parts : tuple of Stiffness or Compliance
        n + 1 parts that add up to the tensor: what has the first symmetry, what the second adds, ..., and the rest that
        has none of them.
    shares : ndarray of float64, shape (..., n + 1)
        The fractions of the squared norm; they add up to 1.
    distances : ndarray of float64, shape (..., n)
        The relative distances from the symmetries of the chain.
    """

    chain: tuple[Symmetry, ...]
    parts: tuple[FourthRankT, ...]
    shares: NDArray[np.float64]
    distances: NDArray[np.float64]


def decompose(C: FourthRankT, chain: Sequence[Symmetry]) -> Decomposition[FourthRankT]:
    """Split tensors into orthogonal parts down a chain of symmetries, in their present axes.

    Part k is ``P_k C - P_(k-1) C``. Since each group contains the next one, the parts are orthogonal and their squared
    norms add up.

    Parameters
    ----------
    C : Stiffness or Compliance, batch shape (...)
        The tensors.
    chain : sequence of Symmetry
        At least one; each must contain the next, for example isotropic, transversely isotropic, tetragonal,
        orthotropic, monoclinic, all about one axis.

    Returns
    -------
    Decomposition
        The parts, their shares and the distances.

    Raises
    ------
    SymmetryError
        If the chain is empty or a symmetry does not contain the next one.

    References
    ----------
    Browaeys, J. T. and Chevrot, S. (2004), Geophys. J. Int. 159, 667-678. Their percentages are differences of
    successive relative distances, not the shares of the squared norm.

    Examples
    --------
    >>> from fourthrank import Notation, Ordering, Stiffness, symmetry
    >>> voigt = Notation.voigt(Ordering("11 22 33 23 13 12"))
    >>> C = Stiffness.from_triangle(
    ...     [10, 4, 4, 0, 0, 0, 12, 5, 0, 0, 0, 11, 0, 0, 0, 3, 0, 0, 4, 0, 5], voigt, by="rows"
    ... )
    >>> split = symmetry.decompose(C, [symmetry.isotropic(), symmetry.cubic(), symmetry.orthotropic()])
    >>> split.shares.round(4)
    array([0.9802, 0.0031, 0.0167, 0.    ])
    """
    held = take_fourth_rank(C)
    symmetries = tuple(chain)
    if not symmetries:
        raise SymmetryError("a chain needs at least one symmetry")
    for place, (upper, lower) in enumerate(pairwise(symmetries)):
        if not upper.contains(lower):
            raise SymmetryError(
                f"each symmetry of a chain must contain the next one: number {place + 1}, {upper!r}, does not contain "
                f"number {place + 2}, {lower!r}; the usual causes are another axis and an order from low to high"
            )
    rest = held
    arrays: list[Inexact] = []
    left: list[NDArray[np.float64]] = []
    for symmetry in symmetries:
        # The projection of what is left, since what was taken away lies in this class too; it rounds less.
        part = project_euclidean(rest, symmetry.basis)
        rest = rest - part
        arrays.append(part)
        left.append(norms(rest))
    whole = norms(held)
    sizes = np.stack([norms(part) for part in (*arrays, rest)], axis=-1)
    return Decomposition(
        symmetries,
        tuple(make(type(C), part) for part in (*arrays, rest)),
        ratio(sizes, np.broadcast_to(whole[..., None], sizes.shape)) ** 2,
        np.stack([ratio(distance, whole) for distance in left], axis=-1),
    )


@dataclass(frozen=True, slots=True, eq=False)
class HarmonicParts(Generic[FourthRankT]):
    """The harmonic parts of a batch of tensors, shape (...): two scalars, two deviators, one harmonic tensor.

    Attributes
    ----------
    isotropic, second_order, fourth_order : Stiffness or Compliance
        The parts, orthogonal to one another; they add up to the tensor. Under rotations they change like harmonics of
        order 0, 2 and 4.
    scalars : ndarray of float64 (complex128 for complex tensors), shape (..., 2)
        The full contractions ``C_iijj`` and ``C_ijij``: for a stiffness 9 K and 3 K + 10 G of the isotropic part.
    deviators : ndarray of float64 (complex128 for complex tensors), shape (..., 2, 3, 3)
        The deviators of ``C_ijkk`` and of ``C_ikjk``; the second-order part is determined by them.
    norms : ndarray of float64, shape (..., 3)
        The norms of the three parts.
    """

    isotropic: FourthRankT
    second_order: FourthRankT
    fourth_order: FourthRankT
    scalars: NDArray[np.float64]
    deviators: NDArray[np.float64]
    norms: NDArray[np.float64]


def harmonic_parts(C: FourthRankT) -> HarmonicParts[FourthRankT]:
    """Split tensors into the parts that rotate like harmonics of order 0, 2 and 4.

    The parts are the eigenspaces of ``sum_a D_a D_a``, with D_a the derivative along a turn about axis a, to the
    eigenvalues 0, -6 and -20 (that is -l (l + 1)), of dimension 2, 10 and 9.

    Parameters
    ----------
    C : Stiffness or Compliance, batch shape (...)
        The tensors.

    Returns
    -------
    HarmonicParts
        The three parts, the two scalars, the two deviators and the norms.

    References
    ----------
    Backus, G. (1970), Rev. Geophys. Space Phys. 8, 633-671. Cowin, S. C. (1989), Q. J. Mech. Appl. Math. 42, 249-266.

    Examples
    --------
    >>> from fourthrank import Notation, Ordering, Stiffness, symmetry
    >>> voigt = Notation.voigt(Ordering("11 22 33 23 13 12"))
    >>> cubic = Stiffness.from_triangle(
    ...     [3, 1, 1, 0, 0, 0, 3, 1, 0, 0, 0, 3, 0, 0, 0, 2, 0, 0, 2, 0, 2], voigt, by="rows"
    ... )
    >>> symmetry.harmonic_parts(cubic).norms.round(6)
    array([8.729261, 0.      , 2.19089 ])
    """
    held = take_fourth_rank(C)
    parts = [project_euclidean(held, basis) for basis in _harmonic_bases()]
    pair = np.stack(contract(held), axis=-3)
    traces = np.trace(pair, axis1=-2, axis2=-1)
    isotropic, second_order, fourth_order = (make(type(C), part) for part in parts)
    return HarmonicParts(
        isotropic,
        second_order,
        fourth_order,
        traces,
        pair - traces[..., None, None] / 3.0 * np.eye(3),
        np.stack([norms(part) for part in parts], axis=-1),
    )


@cache
def _harmonic_bases() -> tuple[NDArray[np.float64], ...]:
    """Return orthonormal bases (k, 6, 6) of the tensors of order 0, 2 and 4."""
    values, vectors = np.linalg.eigh((RATES @ RATES).sum(axis=0))
    return tuple(from_constants(vectors[:, np.abs(values + order * (order + 1)) < 1.0].T) for order in _ORDERS)


_ORDERS: Final = (0, 2, 4)
