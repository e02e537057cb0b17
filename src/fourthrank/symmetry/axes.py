"""The axes in which a tensor is closest to a symmetry class, over all orientations."""

from dataclasses import dataclass
from typing import Final, Generic

import numpy as np
from numpy.typing import NDArray

from .._mandel import turn_matrices
from .._value import make
from ..errors import DataError
from ..rotation.constructors import from_quaternion
from ._search import search
from ._search_space import search_space
from .classes import isotropic
from .groups import FourthRankT, Symmetry, take_fourth_rank
from .projection import norms, project_euclidean, ratio

__all__ = ["AxesFit", "find_axes"]

_BLOCK: Final = 100
"""Tensors searched together; the memory for their starts stays below 10 MB."""
_NO_ANISOTROPY: Final = 1e-14


@dataclass(frozen=True, slots=True, eq=False)
class AxesFit(Generic[FourthRankT]):
    """The best axes of a batch of tensors, shape (...), for one symmetry.

    Attributes
    ----------
    symmetry : Symmetry
        The class whose axes were sought.
    axes : ndarray of float64, shape (..., 3, 3)
        The axes, one a row: ``C.in_axes(axes)`` is closest to the pattern of the class. Of all axes that fit equally
        well because of the symmetry, those that are reached from the present ones by the smallest turn (of several
        such, the first in a fixed order).
    projection : Stiffness or Compliance
        The closest tensors of the class, in the present axes.
    distance : ndarray of float64, shape (...)
        The relative distances, ``norm(C - projection) / norm(C)``, as `Symmetry.distance` gives them.
    absolute_distance : ndarray of float64, shape (...)
        The distances in the unit of the tensors.
    separation : ndarray of float64, shape (...)
        By how much the relative distance at the next best, really different minimum is larger. Zero: the axes are
        ambiguous. Infinite: there is no other minimum.
    undetermined : ndarray of bool, shape (..., 3)
        Which of the three axes are not determined by the tensor: they can be turned, in small steps, without effect.
        Axes 1 and 2 of a class that is free about 3, and all axes of an isotropic tensor.
    """

    symmetry: Symmetry
    axes: NDArray[np.float64]
    projection: FourthRankT
    distance: NDArray[np.float64]
    absolute_distance: NDArray[np.float64]
    separation: NDArray[np.float64]
    undetermined: NDArray[np.bool_]


def find_axes(C: FourthRankT, symmetry: Symmetry) -> AxesFit[FourthRankT]:
    """Find the axes in which tensors are closest to a symmetry class: the global minimum over all orientations.

    The Euclidean distance from the class is screened at evenly spread orientations (about 10 degrees apart, in the
    region that the symmetry leaves). Newton's method with analytic derivatives starts from every orientation that is
    not worse than its neighbours, and from the best ten. Deterministic; a batch is searched together.

    Parameters
    ----------
    C : Stiffness or Compliance, batch shape (...)
        Real tensors. Note that a stiffness and its compliance may have somewhat different best axes.
    symmetry : Symmetry
        The class; its present axes do not matter, the result refers to its own axes 1, 2, 3.

    Returns
    -------
    AxesFit
        Axes, projections, distances, separation from the next minimum, and what is undetermined.

    Raises
    ------
    DataError
        If the tensors are complex.

    Notes
    -----
    With c the 21 constants along the axes A, P the projector and D_a the derivative along a turn about axis a, the
    function is ``f(A) = |c - P c|^2``. The global minimum is a finding of many starts, not a proof.

    References
    ----------
    The distance from a class over all orientations: Moakher, M. and Norris, A. N. (2006), J. Elasticity 85, 215-263;
    Kochetov, M. and Slawinski, M. A. (2009), J. Elasticity 94, 1-13.

    Examples
    --------
    >>> from fourthrank import Notation, Ordering, Stiffness, rotation, symmetry
    >>> voigt = Notation.voigt(Ordering("11 22 33 23 13 12"))
    >>> C = Stiffness.from_triangle(
    ...     [10, 4, 4, 0, 0, 0, 12, 5, 0, 0, 0, 11, 0, 0, 0, 3, 0, 0, 4, 0, 5], voigt, by="rows"
    ... )
    >>> tilted = C.rotate(rotation.about_axis([1, 1, 0], 20, degrees=True))
    >>> fit = symmetry.find_axes(tilted, symmetry.orthotropic())
    >>> bool(fit.distance < 1e-12)
    True
    >>> tilted.in_axes(fit.axes).allclose(C, rtol=1e-7)
    True
    """
    held = take_fourth_rank(C)
    if held.dtype.kind == "c":
        raise DataError(f"axes are found for real tensors, this {type(C).__name__} is complex: take .real or .imag")
    flat = held.reshape(-1, 6, 6)
    count = len(flat)
    space = search_space(symmetry.own)
    anisotropic = flat - project_euclidean(flat, isotropic().basis)
    whole = norms(flat)
    quaternions = np.tile([1.0, 0.0, 0.0, 0.0], (count, 1))
    squares, following, loose = np.zeros(count), np.zeros(count), np.ones((count, 3), np.bool_)
    # What is isotropic to rounding, and classes that have no axes or need none, leave nothing to search for.
    todo = np.flatnonzero(norms(anisotropic) > _NO_ANISOTROPY * whole) if len(space.rates) else np.empty(0, np.intp)
    for start in range(0, len(todo), _BLOCK):
        part = todo[start : start + _BLOCK]
        found = search(anisotropic[part], whole[part], space)
        quaternions[part], loose[part] = found.quaternions, found.loose
        squares[part], following[part] = found.squares, found.next_squares
    axes = from_quaternion(quaternions, scalar="first")
    along = project_euclidean(turn_matrices(flat, axes), symmetry.own.basis)
    projection = turn_matrices(along, axes.swapaxes(-1, -2))
    distance = norms(flat - projection)
    gap = np.sqrt(following) - np.sqrt(squares)
    batch = C.shape
    return AxesFit(
        symmetry,
        axes.reshape(*batch, 3, 3),
        make(type(C), projection.reshape(*batch, 6, 6)),
        ratio(distance, whole).reshape(batch),
        distance.reshape(batch),
        ratio(np.maximum(gap, 0.0), whole).reshape(batch),
        loose.reshape(*batch, 3),
    )
