"""The two contractions of a fourth-order tensor, and the axes that they suggest."""

from dataclasses import dataclass
from typing import Final

import numpy as np
from numpy.typing import NDArray

from .._arrays import Inexact
from ..errors import DataError
from ..tensors import Compliance, Stiffness
from .groups import take_fourth_rank

__all__ = ["Contractions", "contractions"]

_EQUAL: Final = 1e-9
"""Eigenvalues that differ by less than this part of the tensor's norm are one."""


@dataclass(frozen=True, slots=True, eq=False)
class Contractions:
    """The two second-order contractions of a batch of tensors, shape (...), and their principal axes.

    Attributes
    ----------
    dilatational : ndarray of float64, shape (..., 3, 3)
        ``d_ij = C_ijkk``: for a stiffness, the stress per unit of uniform expansion.
    voigt : ndarray of float64, shape (..., 3, 3)
        ``v_ij = C_ikjk``: for a stiffness, the sum of the Christoffel matrices along the three axes.
    axes : ndarray of float64, shape (..., 3, 3)
        Principal axes of the Voigt tensor, one a row, right-handed, by rising principal value.
    undetermined : ndarray of bool, shape (..., 3)
        Which of these are not determined, since two principal values are equal (to 1e-9 of the tensor's norm).
    misfit : ndarray of float64, shape (...)
        The Frobenius norm of ``d v - v d``, divided by ``norm(d) norm(v)``: zero where both tensors share their
        principal axes, as they must in every class but the monoclinic and triclinic ones.
    """

    dilatational: NDArray[np.float64]
    voigt: NDArray[np.float64]
    axes: NDArray[np.float64]
    undetermined: NDArray[np.bool_]
    misfit: NDArray[np.float64]


def contractions(C: Stiffness | Compliance) -> Contractions:
    """Return the dilatational and Voigt tensors, with principal axes as a fast first guess of the symmetry's axes.

    Symmetry axes of the tensor are principal axes of both; where all three principal values differ, an orthotropic
    tensor has its axes there. They say nothing about cubic tensors, whose contractions are isotropic; `find_axes` has
    no such gap.

    Parameters
    ----------
    C : Stiffness or Compliance, batch shape (...)
        Real tensors.

    Returns
    -------
    Contractions
        Both tensors in the unit of C, the axes, and how far both agree.

    Raises
    ------
    DataError
        If the tensors are complex.

    References
    ----------
    Cowin, S. C. and Mehrabadi, M. M. (1987), Q. J. Mech. Appl. Math. 40, 451-476.

    Examples
    --------
    >>> from fourthrank import Notation, Ordering, Stiffness, symmetry
    >>> voigt = Notation.voigt(Ordering("11 22 33 23 13 12"))
    >>> C = Stiffness.from_triangle(
    ...     [10, 4, 4, 0, 0, 0, 12, 5, 0, 0, 0, 11, 0, 0, 0, 3, 0, 0, 4, 0, 5], voigt, by="rows"
    ... )
    >>> symmetry.contractions(C).dilatational.diagonal()
    array([18., 21., 20.])
    """
    held = take_fourth_rank(C)
    if held.dtype.kind == "c":
        raise DataError(f"principal axes need real tensors, this {type(C).__name__} is complex: take .real or .imag")
    dilatational, voigt = contract(held)
    values, vectors = np.linalg.eigh(voigt)
    axes = vectors.swapaxes(-1, -2)
    axes = axes * np.linalg.det(axes)[..., None, None].round()
    close = np.diff(values, axis=-1) <= _EQUAL * np.linalg.norm(held, axis=(-2, -1))[..., None]
    undetermined = np.stack([close[..., 0], close.any(axis=-1), close[..., 1]], axis=-1)
    commutator = np.linalg.norm(dilatational @ voigt - voigt @ dilatational, axis=(-2, -1))
    size = np.linalg.norm(dilatational, axis=(-2, -1)) * np.linalg.norm(voigt, axis=(-2, -1))
    misfit = np.divide(commutator, size, out=np.zeros_like(size), where=size > 0.0)
    return Contractions(dilatational, voigt, axes + 0.0, undetermined, misfit)


def contract(held: Inexact) -> tuple[Inexact, Inexact]:
    """Return C_ijkk and C_ikjk of arrays in the working form, each (..., 3, 3)."""
    flat = held.reshape(*held.shape[:-2], 36)
    shape = (*held.shape[:-2], 3, 3)
    return (flat @ _DILATATIONAL).reshape(shape), (flat @ _VOIGT).reshape(shape)


def _contraction_maps() -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Return the (36, 9) matrices of both contractions."""
    units = np.zeros((6, 3, 3))
    for place, (i, j) in enumerate(((0, 0), (1, 1), (2, 2), (1, 2), (0, 2), (0, 1))):
        units[place, i, j] = units[place, j, i] = 1.0 if i == j else np.sqrt(0.5)
    dilatational = np.einsum("aij,bkk->abij", units, units)
    voigt = np.einsum("aik,bjk->abij", units, units)
    # The tensor is symmetric in a and b, and so are its contractions then.
    dilatational_half, voigt_half = ((m + m.swapaxes(0, 1)) / 2.0 for m in (dilatational, voigt))
    return dilatational_half.reshape(36, 9), voigt_half.reshape(36, 9)


_DILATATIONAL, _VOIGT = _contraction_maps()
