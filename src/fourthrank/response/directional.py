"""Directional constants: what a test along a direction, or along a pair of them, would measure."""

import numpy as np
from numpy.typing import ArrayLike, NDArray

from .._arrays import Inexact, broadcast_batches, member_text
from .._mandel import WORKING, apply, dot
from .._value import working
from ..errors import DataError
from ..rotation.matrices import unit_vectors
from ..tensors import Compliance, Stiffness

__all__ = ["linear_compressibility", "poisson_ratio", "shear_modulus", "young_modulus"]

_PERPENDICULAR = 1e-9
"""The largest cosine of the angle between two directions that are to be perpendicular."""


def young_modulus(C: Stiffness | Compliance, n: ArrayLike) -> NDArray[np.float64]:
    """Return Young's modulus in directions n: ``1 / E = S_ijkl n_i n_j n_k n_l``.

    Signature ``(6,6),(3)->()`` on top of broadcasting: the batch of C against that of n.

    Parameters
    ----------
    C : Stiffness or Compliance, batch shape (...)
        The tensors, in any consistent unit.
    n : array_like, shape (..., 3)
        Directions; their length does not matter.

    Returns
    -------
    ndarray of float64 (complex128 where C is complex), shape (...)
        The modulus of uniaxial stress along n, in the unit of the stiffness.

    Raises
    ------
    RotationError
        If a direction has zero length.
    AdmissibilityError
        If a stiffness is singular.
    ShapeError, DataError
        If the batches do not broadcast, or a direction is not finite.

    References
    ----------
    Nye, J. F. (1957), Physical Properties of Crystals, chapter VIII.

    Examples
    --------
    >>> from fourthrank.moduli import Isotropic
    >>> from fourthrank.response import young_modulus
    >>> young_modulus(Isotropic.from_two(E=210.0, nu=0.3).stiffness(), [[1, 0, 0], [1, 2, 3]]).round(9)
    array([210., 210.])
    """
    S, along = _compliance(C), _dyads(unit_vectors(n, "n"))
    return np.asarray(1.0 / _contract(S, along, along))


def linear_compressibility(C: Stiffness | Compliance, n: ArrayLike) -> NDArray[np.float64]:
    """Return the linear compressibility in directions n: ``beta = S_ijkk n_i n_j``.

    Signature ``(6,6),(3)->()`` on top of broadcasting: the batch of C against that of n.

    Parameters
    ----------
    C : Stiffness or Compliance, batch shape (...)
        The tensors, in any consistent unit.
    n : array_like, shape (..., 3)
        Directions; their length does not matter.

    Returns
    -------
    ndarray of float64 (complex128 where C is complex), shape (...)
        The shortening of a line along n under unit hydrostatic pressure, in the unit of the compliance.

    Raises
    ------
    RotationError, AdmissibilityError, ShapeError, DataError
        As `young_modulus`.

    References
    ----------
    Nye, J. F. (1957), Physical Properties of Crystals, chapter VIII.

    Examples
    --------
    >>> from fourthrank.moduli import Isotropic
    >>> from fourthrank.response import linear_compressibility
    >>> float(linear_compressibility(Isotropic.from_two(K=0.5, G=1.0).stiffness(), [0, 0, 1]).round(12))
    0.666666666667
    """
    S, along = _compliance(C), _dyads(unit_vectors(n, "n"))
    return np.asarray(_contract(S, along, np.array([1.0, 1.0, 1.0, 0.0, 0.0, 0.0])))


def poisson_ratio(C: Stiffness | Compliance, n: ArrayLike, m: ArrayLike) -> NDArray[np.float64]:
    """Return Poisson's ratio of strain along m under stress along n.

    ``nu = -S_ijkl n_i n_j m_k m_l / (S_ijkl n_i n_j n_k n_l)``. Signature ``(6,6),(3),(3)->()`` on top of broadcasting.

    Parameters
    ----------
    C : Stiffness or Compliance, batch shape (...)
        The tensors, in any consistent unit.
    n, m : array_like, shape (..., 3)
        Perpendicular directions; their length does not matter.

    Returns
    -------
    ndarray of float64 (complex128 where C is complex), shape (...)
        ``nu_nm``: minus the strain along m over the strain along n.

    Raises
    ------
    DataError
        If n and m are not perpendicular to 1e-9, with their angle.
    RotationError, AdmissibilityError, ShapeError
        As `young_modulus`.

    References
    ----------
    Ting, T. C. T. and Chen, T. (2005), Q. J. Mech. Appl. Math. 58, 73-82.

    Examples
    --------
    >>> from fourthrank.moduli import Isotropic
    >>> from fourthrank.response import poisson_ratio
    >>> float(poisson_ratio(Isotropic.from_two(E=210.0, nu=0.3).stiffness(), [1, 1, 0], [0, 0, 1]).round(12))
    0.3
    """
    first, second = _perpendicular(n, m)
    S, along = _compliance(C), _dyads(first)
    return np.asarray(-_contract(S, along, _dyads(second)) / _contract(S, along, along))


def shear_modulus(C: Stiffness | Compliance, n: ArrayLike, m: ArrayLike) -> NDArray[np.float64]:
    """Return the shear modulus of the directions n and m: ``1 / G = 4 S_ijkl n_i m_j n_k m_l``.

    Signature ``(6,6),(3),(3)->()`` on top of broadcasting.

    Parameters
    ----------
    C : Stiffness or Compliance, batch shape (...)
        The tensors, in any consistent unit.
    n, m : array_like, shape (..., 3)
        Perpendicular directions; their length does not matter.

    Returns
    -------
    ndarray of float64 (complex128 where C is complex), shape (...)
        The modulus of pure shear stress between n and m, in the unit of the stiffness.

    Raises
    ------
    DataError
        If n and m are not perpendicular to 1e-9, with their angle.
    RotationError, AdmissibilityError, ShapeError
        As `young_modulus`.

    References
    ----------
    Ting, T. C. T. (2005), J. Elasticity 81, 271-292.

    Examples
    --------
    >>> from fourthrank.moduli import Isotropic
    >>> from fourthrank.response import shear_modulus
    >>> float(shear_modulus(Isotropic.from_two(K=160.0, G=80.0).stiffness(), [1, 1, 0], [0, 0, 1]).round(9))
    80.0
    """
    first, second = _perpendicular(n, m)
    S, across = _compliance(C), _symmetric_products(first, second)
    return np.asarray(0.25 / _contract(S, across, across))


def _compliance(C: Stiffness | Compliance) -> Inexact:
    return working(C if isinstance(C, Compliance) else C.inverse())


def _dyads(n: NDArray[np.float64]) -> NDArray[np.float64]:
    return _symmetric_products(n, n)


def _symmetric_products(n: NDArray[np.float64], m: NDArray[np.float64]) -> NDArray[np.float64]:
    """Return the symmetric part of n_i m_j in the working form."""
    weighted = [
        n[..., i] * m[..., i] if i == j else np.sqrt(0.5) * (n[..., i] * m[..., j] + n[..., j] * m[..., i])
        for i, j in WORKING.ordering.pairs
    ]
    return np.stack(weighted, axis=-1)


def _contract(S: Inexact, first: NDArray[np.float64], second: NDArray[np.float64]) -> Inexact:
    """Return S_IJ a_I b_J, broadcast over batches."""
    broadcast_batches(C=S.shape[:-2], directions=first.shape[:-1])
    return dot(apply(S, second), first)


def _perpendicular(n: ArrayLike, m: ArrayLike) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Return unit vectors along both, which must be perpendicular."""
    first, second = unit_vectors(n, "n"), unit_vectors(m, "m")
    broadcast_batches(n=first.shape[:-1], m=second.shape[:-1])
    cosine = np.asarray((first * second).sum(axis=-1))
    excess = np.abs(cosine) > _PERPENDICULAR
    if excess.any():
        member = tuple(int(i) for i in np.unravel_index(int(excess.argmax()), excess.shape))
        angle = np.degrees(np.arccos(np.clip(cosine[member], -1.0, 1.0)))
        raise DataError(
            f"n and m{member_text(member)} must be perpendicular: their angle is {angle:.9g} degrees (cosine "
            f"{cosine[member]:.3g}, tolerance {_PERPENDICULAR:.0e}); take away from m its part along n: "
            "m - (m . n) n with n of unit length"
        )
    first, second = np.broadcast_arrays(first, second)
    return first, second
