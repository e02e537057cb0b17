"""The 6x6 matrices of rotations: Bond's matrices of stress and strain, and the orthogonal one of the Mandel form."""

from typing import cast

import numpy as np
from numpy.typing import NDArray

from .. import _mandel
from .._packing.weights import Side
from ..notation import Notation
from ..ordering import Ordering
from ..translation import passage
from .matrices import RotationLike, take_rotation

__all__ = ["mandel_matrix", "strain_matrix", "stress_matrix"]


def stress_matrix(R: RotationLike, notation: Notation) -> NDArray[np.float64]:
    """Return the matrices that turn stress vectors: ``s'_I = M_IJ s_J`` stands for ``sigma'_ij = R_ik R_jl sigma_kl``.

    Parameters
    ----------
    R : array_like, shape (..., 3, 3), or object with ``as_matrix()``
        Rotations of the body, or sets of axes (rows).
    notation : Notation
        The notation of the stress vectors; its ordering must be complete.

    Returns
    -------
    ndarray of float64, shape (..., 6, 6)
        Bond's matrix M in a Voigt notation.

    Raises
    ------
    RotationError
        If a matrix is no proper rotation.
    NotationError
        If the ordering of the notation is partial.

    References
    ----------
    Bond, W. L. (1943), Bell Syst. Tech. J. 22, 1-72.

    Examples
    --------
    >>> from fourthrank import Notation, Ordering, rotation
    >>> voigt = Notation.voigt(Ordering("11 22 33 23 13 12"))
    >>> quarter = rotation.about_axis([0, 0, 1], 90, degrees=True)
    >>> rotation.stress_matrix(quarter, voigt) @ [1, 0, 0, 0, 0, 0]
    array([0., 1., 0., 0., 0., 0.])
    """
    return _bond_matrix(R, notation, "stress")


def strain_matrix(R: RotationLike, notation: Notation) -> NDArray[np.float64]:
    """Return the matrices that turn strain vectors: ``e'_I = N_IJ e_J`` stands for ``eps'_ij = R_ik R_jl eps_kl``.

    Parameters
    ----------
    R : array_like, shape (..., 3, 3), or object with ``as_matrix()``
        Rotations of the body, or sets of axes (rows).
    notation : Notation
        The notation of the strain vectors; its ordering must be complete.

    Returns
    -------
    ndarray of float64, shape (..., 6, 6)
        Bond's matrix N in a Voigt notation: the inverse transpose of `stress_matrix` in a work-conjugate notation.

    Raises
    ------
    RotationError
        If a matrix is no proper rotation.
    NotationError
        If the ordering of the notation is partial.

    References
    ----------
    Bond, W. L. (1943), Bell Syst. Tech. J. 22, 1-72.

    Examples
    --------
    >>> from fourthrank import Notation, Ordering, rotation
    >>> voigt = Notation.voigt(Ordering("11 22 33 23 13 12"))
    >>> eighth = rotation.about_axis([0, 0, 1], 45, degrees=True)
    >>> (rotation.strain_matrix(eighth, voigt) @ [1, 0, 0, 0, 0, 0]).round(12)
    array([0.5, 0.5, 0. , 0. , 0. , 1. ])
    """
    return _bond_matrix(R, notation, "strain")


def mandel_matrix(R: RotationLike, ordering: Ordering) -> NDArray[np.float64]:
    """Return the orthogonal matrices K that turn Mandel vectors of stress and strain alike: ``v'_I = K_IJ v_J``.

    Stiffness and compliance matrices in Mandel form become ``K_IP K_JQ C_PQ``. The index equation is that of
    `stress_matrix`, ``sigma'_ij = R_ik R_jl sigma_kl``; use R of ``x.rotate(R)`` or A of ``x.in_axes(A)``.

    Parameters
    ----------
    R : array_like, shape (..., 3, 3), or object with ``as_matrix()``
        Rotations of the body, or sets of axes (rows).
    ordering : Ordering
        The order of the components; it must be complete.

    Returns
    -------
    ndarray of float64, shape (..., 6, 6)
        Rotations of the six-dimensional space of symmetric tensors.

    Raises
    ------
    RotationError
        If a matrix is no proper rotation.
    NotationError
        If `ordering` is partial.

    References
    ----------
    Mehrabadi, M. M. and Cowin, S. C. (1990), Q. J. Mech. Appl. Math. 43, 15-41.

    Examples
    --------
    >>> from fourthrank import Ordering, rotation
    >>> half = rotation.about_axis([0, 0, 1], 180, degrees=True)
    >>> rotation.mandel_matrix(half, Ordering("11 22 33 23 13 12")).diagonal()
    array([ 1.,  1.,  1., -1., -1.,  1.])
    """
    return _bond_matrix(R, Notation.mandel(ordering), "stress")


def _bond_matrix(R: RotationLike, notation: Notation, side: Side) -> NDArray[np.float64]:
    gather = passage(_mandel.WORKING, notation).matrix_gather(side, side)
    return cast(NDArray[np.float64], _mandel.rotation_matrices(take_rotation(R, "R"), gather))
