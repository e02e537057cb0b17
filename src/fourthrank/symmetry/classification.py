"""Which symmetry class does a tensor have? Distances from every class in the best axes, and the highest that fits."""

from dataclasses import dataclass
from typing import Final, Generic

import numpy as np
from numpy.typing import ArrayLike, NDArray

from .._arrays import check_finite, member_text, take_in
from .._fourth_rank import FourthRank
from .._mandel import WORKING, turn_matrices
from .._packing.weights import label_indices
from .._table import Table
from .._value import check_notation
from ..errors import DataError, NotationError, ShapeError
from ..notation import Notation
from ._invariants import constants
from .axes import AxesFit, find_axes
from .classes import (
    cubic,
    isotropic,
    monoclinic,
    orthotropic,
    tetragonal,
    transversely_isotropic,
    triclinic,
    trigonal,
)
from .groups import FourthRankT, Symmetry

__all__ = ["Classification", "classify"]

_COVERAGE: Final = 2.0


@dataclass(frozen=True, slots=True, eq=False)
class Classification(Generic[FourthRankT]):
    """The distances of a batch of tensors, shape (...), from all eight classes, and the class chosen.

    Attributes
    ----------
    symmetries : tuple of Symmetry
        The classes, from the most symmetric down: isotropic, cubic, transversely isotropic, tetragonal, trigonal,
        orthotropic, monoclinic, triclinic; unique axes along 3, the two-fold axis of trigonal along 1.
    fits : tuple of AxesFit
        The best axes, projections and distances for each class.
    distances : ndarray of float64, shape (..., 8)
        The relative distances, in the order of `symmetries`.
    limits : ndarray of float64, shape (..., 8)
        The relative distances up to which a class was accepted.
    order : ndarray of int, shape (..., 8)
        The classes ordered by distance, as indices; of equal ones the most symmetric first.
    chosen : ndarray of int, shape (...)
        The index of the most symmetric class that was accepted; of tetragonal and trigonal the closer one.
    """

    symmetries: tuple[Symmetry, ...]
    fits: tuple[AxesFit[FourthRankT], ...]
    distances: NDArray[np.float64]
    limits: NDArray[np.float64]
    order: NDArray[np.intp]
    chosen: NDArray[np.intp]

    @property
    def names(self) -> NDArray[np.str_]:
        """The names of the chosen classes, shape (...)."""
        return np.array([symmetry.name for symmetry in self.symmetries])[self.chosen]

    @property
    def best(self) -> AxesFit[FourthRankT]:
        """The fit of the chosen class, for a single tensor."""
        self._require_single()
        return self.fits[int(self.chosen)]

    def table(self) -> Table:
        """Return the classes of a single tensor by distance, as a labelled table.

        Returns
        -------
        Table
            Distance, limit and independent constants of each class; the chosen one is marked.

        Raises
        ------
        ShapeError
            If there is more than one tensor.
        """
        self._require_single()
        return Table(
            [f"closest class within the limits: {self.symmetries[int(self.chosen)].name}"],
            ["relative distance", "limit", "constants", ""],
            [
                (
                    self.symmetries[k].name,
                    [
                        f"{self.distances[k]:.3g}",
                        f"{self.limits[k]:.3g}",
                        str(self.symmetries[k].count),
                        "chosen" if k == self.chosen else "",
                    ],
                )
                for k in map(int, self.order)
            ],
        )

    def _require_single(self) -> None:
        if self.chosen.shape != ():
            raise ShapeError(
                f"this shows a single tensor, the batch has shape {self.chosen.shape}: use .fits, .names and "
                ".distances, or classify one tensor"
            )


def classify(
    C: FourthRankT,
    *,
    rtol: float | None = None,
    uncertainties: ArrayLike | None = None,
    notation: Notation | None = None,
    coverage: float = _COVERAGE,
) -> Classification[FourthRankT]:
    """Find the most symmetric class that tensors have within a tolerance, each class in its best axes.

    Give either `rtol`, a relative distance, or the standard uncertainties of the 21 constants.

    Parameters
    ----------
    C : Stiffness or Compliance, batch shape (...)
        Real tensors.
    rtol : float, optional
        A class is accepted if the relative distance from it is at most this.
    uncertainties : array_like, shape (..., 6, 6), optional
        The standard uncertainties of the elements of ``C.matrix(notation)``, symmetric, taken as independent of one
        another. A class is accepted if the distance is at most `coverage` times the root of
        ``trace((1 - P) S)``: the root mean square distance that a tensor of the class would get from such errors, with
        S the diagonal matrix of variances of the 21 constants and P the projector in the best axes. Since the axes were
        fitted too, true members are accepted rather too often than too seldom.
    notation : Notation, optional
        The notation of the uncertainties.
    coverage : float
        The coverage factor k for the uncertainties; 2 by default, as is common practice.

    Returns
    -------
    Classification
        Distances, axes, projections of all classes, and the choice. Without a class within the tolerance, the choice
        is triclinic, which every tensor has.

    Raises
    ------
    DataError
        If not exactly one of `rtol` and `uncertainties` is given, one is negative or not finite, or C is complex.
    NotationError
        If uncertainties come without a notation, or a notation without uncertainties.
    ShapeError
        If the uncertainties have another shape or do not fit the batch.

    Notes
    -----
    Data and results need checking by a qualified engineer: a class within the tolerance is not proof of the class.

    Examples
    --------
    >>> from fourthrank import Notation, Ordering, Stiffness, rotation, symmetry
    >>> voigt = Notation.voigt(Ordering("11 22 33 23 13 12"))
    >>> cubic = Stiffness.from_triangle(
    ...     [3, 1, 1, 0, 0, 0, 3, 1, 0, 0, 0, 3, 0, 0, 0, 2, 0, 0, 2, 0, 2], voigt, by="rows"
    ... )
    >>> str(symmetry.classify(cubic.rotate(rotation.about_axis([1, 2, 3], 1.0)), rtol=1e-6).names)
    'cubic'
    """
    if (rtol is None) == (uncertainties is None):
        raise DataError("classify needs exactly one of rtol and uncertainties: how far may a tensor be from its class?")
    if uncertainties is None and notation is not None:
        raise NotationError("a notation is needed for uncertainties only, rtol does not depend on it")
    symmetries = (
        isotropic(),
        cubic(),
        transversely_isotropic(axis=3),
        tetragonal(axis=3),
        trigonal(axis=3, two_fold=1),
        orthotropic(),
        monoclinic(axis=3),
        triclinic(),
    )
    if rtol is not None:
        _check_size(rtol, "rtol")
    _check_size(coverage, "coverage")
    variances = None if uncertainties is None else _variances(C, uncertainties, notation)
    fits = tuple(find_axes(C, symmetry) for symmetry in symmetries)
    distances = np.stack([fit.distance for fit in fits], axis=-1)
    if variances is None:
        limits = np.full(distances.shape, rtol)
    else:
        whole = C.norm()
        expected = np.stack([np.sqrt(_spread(fit, variances)) for fit in fits], axis=-1)
        limits = coverage * np.divide(
            expected, whole[..., None], out=np.zeros_like(expected), where=whole[..., None] > 0.0
        )
    # Every tensor is triclinic, whatever the rounding.
    accepted = distances <= limits
    accepted[..., -1] = True
    counts = np.array([symmetry.count for symmetry in symmetries], np.float64)
    # Fewer constants first; relative distances are below 1 and settle ties.
    rank = np.where(accepted, counts + np.minimum(distances, 1.0) / 2.0, np.inf)
    return Classification(
        symmetries,
        fits,
        distances,
        limits,
        np.argsort(distances, axis=-1, kind="stable"),
        np.asarray(rank.argmin(axis=-1)),
    )


def _check_size(value: float, name: str) -> None:
    if not 0.0 <= value < np.inf:
        raise DataError(f"{name} must be a finite number that is not negative, got {name}={value!r}")


def _variances(C: FourthRank, uncertainties: ArrayLike, notation: Notation | None) -> NDArray[np.float64]:
    """Return the variances of the 21 constants, (..., 21), from standard uncertainties of a matrix."""
    if notation is None:
        raise NotationError("uncertainties need the notation of the matrix whose elements they belong to: notation=...")
    check_notation(notation)
    given = take_in(uncertainties, "uncertainties", (6, 6)).astype(np.float64)
    check_finite(given, "uncertainties", 2, label_indices)
    if (given < 0.0).any():
        index = tuple(int(k) for k in np.argwhere(given < 0.0)[0])
        raise DataError(
            f"uncertainties{member_text(index[:-2])} must not be negative, element {index[-2] + 1}, {index[-1] + 1} is "
            f"{given[index]:.6g}"
        )
    if given.ndim > 2:
        try:
            np.broadcast_to(given, (*C.shape, 6, 6))
        except ValueError:
            raise ShapeError(
                f"uncertainties of batch shape {given.shape[:-2]} do not fit tensors of batch shape {C.shape}"
            ) from None
    # All weights are positive, so that standard uncertainties translate like the elements themselves.
    held = type(C).from_matrix(given, notation).matrix(WORKING)
    return np.asarray(constants(held) ** 2)


def _spread(fit: AxesFit[FourthRankT], variances: NDArray[np.float64]) -> NDArray[np.float64]:
    """Return trace((1 - P) S) with the projector of a class in its best axes."""
    own = fit.symmetry.own.basis
    inside = np.zeros(np.broadcast_shapes((*fit.distance.shape, 21), variances.shape))
    for tensor in own:  # a loop over the few tensors of the basis keeps the memory small
        inside += constants(turn_matrices(tensor, fit.axes.swapaxes(-1, -2))) ** 2
    return np.asarray(np.maximum(0.0, (variances * (1.0 - inside)).sum(axis=-1)))
