"""Rotations: matrices that turn a body, sets of axes, and the 6x6 (Bond) matrices of a rotation.

There are two questions, and each has its own call. ``x.rotate(R)`` turns the body and keeps the axes: a vector of the
body goes from v to R v. ``x.in_axes(A)`` keeps the body and changes the axes: the rows of A are the new axes, written
in the old ones, and a vector has the new components A v. The axes that a turn by R takes the old axes to are the rows
of the transpose of R.
"""

from typing import Any, Literal, Protocol, TypeAlias, cast, runtime_checkable

import numpy as np
from numpy.typing import ArrayLike, NDArray

from . import _mandel
from ._arrays import Inexact, broadcast_batches, check_finite, member_text, take_in
from ._packing.weights import Side, label_indices
from .errors import DataError, RotationError
from .notation import Notation
from .translation import passage

__all__ = [
    "RotationLike",
    "SupportsAsMatrix",
    "about_axis",
    "axes_from_vectors",
    "strain_matrix",
    "stress_matrix",
]


@runtime_checkable
class SupportsAsMatrix(Protocol):
    """Any object that gives its rotation matrices, shape (..., 3, 3), on request."""

    def as_matrix(self) -> Any:
        """Return the rotation matrices."""
        ...


RotationLike: TypeAlias = "ArrayLike | SupportsAsMatrix"
"""Rotation matrices or sets of axes: an array of shape (..., 3, 3), or an object with ``as_matrix()``."""


def about_axis(axis: ArrayLike, angle: ArrayLike, *, degrees: bool = False) -> NDArray[np.float64]:
    """Return the matrices that turn a body about an axis by an angle, right-handed.

    ``R_ij = cos(t) d_ij + (1 - cos(t)) n_i n_j - sin(t) e_ijk n_k`` with n the unit vector along `axis`. With
    ``x.rotate(R)`` the body turns by +t; ``x.in_axes(R)`` would read its rows, which are the old axes turned by -t.

    Parameters
    ----------
    axis : array_like, shape (..., 3)
        The axis of the turn; its length does not matter.
    angle : array_like, shape (...)
        The angle, broadcast against the batch of `axis`.
    degrees : bool
        Whether `angle` is in degrees and not in radians. Multiples of 90 degrees come out exact.

    Returns
    -------
    ndarray of float64, shape (..., 3, 3)
        Rotation matrices.

    Raises
    ------
    RotationError
        If an axis has zero length.
    ShapeError, DataError
        If the trailing shape of `axis` is not (3,), the batches do not broadcast, or something is not finite.

    References
    ----------
    Goldstein, H. (1980), Classical Mechanics, 2nd ed., eq. 4-92 (the rotation formula).

    Examples
    --------
    >>> from fourthrank import rotation
    >>> rotation.about_axis([0, 0, 1], 90, degrees=True) @ [1, 0, 0]
    array([0., 1., 0.])
    """
    n = _unit_vectors(axis, "axis")
    angles = _real(take_in(angle, "angle", ()), "angle")
    check_finite(angles, "angle", 0, lambda _: "angle")
    cosine, sine = _cosine_sine(angles, degrees)
    n, _ = _broadcast_vectors(n, "axis", cosine[..., None], "angle")
    cosine, sine = (np.broadcast_to(part, n.shape[:-1])[..., None, None] for part in (cosine, sine))
    cross = np.einsum("ijk,...k->...ij", _PERMUTATION, n)
    result: NDArray[np.float64] = cosine * np.eye(3) + (1.0 - cosine) * n[..., :, None] * n[..., None, :] - sine * cross
    return result


def axes_from_vectors(
    *,
    x1: ArrayLike | None = None,
    x2: ArrayLike | None = None,
    x3: ArrayLike | None = None,
    exact: Literal["x1", "x2", "x3"],
) -> NDArray[np.float64]:
    """Return a right-handed set of axes from vectors along two of them.

    The rows of the result are the axes x1, x2, x3, for use with ``x.in_axes``. The vector named by `exact` keeps its
    direction exactly. The other one says in which half plane its axis lies: its part along the exact axis is taken
    away. The third axis completes a right-handed set.

    Parameters
    ----------
    x1, x2, x3 : array_like, shape (..., 3)
        Vectors along two of the three axes; any length. Batches broadcast.
    exact : {"x1", "x2", "x3"}
        Which of the two given vectors is kept exactly.

    Returns
    -------
    ndarray of float64, shape (..., 3, 3)
        Axes, one in each row.

    Raises
    ------
    RotationError
        If not exactly two vectors are given, `exact` is not one of them, one has zero length, or the two are parallel
        (to 1e-6 of a radian).
    ShapeError, DataError
        If a trailing shape is not (3,), the batches do not broadcast, or something is not finite.

    Examples
    --------
    >>> from fourthrank import rotation
    >>> rotation.axes_from_vectors(x3=[0, 0, 2], x1=[0, 1, 5], exact="x3")
    array([[ 0.,  1.,  0.],
           [-1.,  0.,  0.],
           [ 0.,  0.,  1.]])
    """
    given = {name: v for name, v in (("x1", x1), ("x2", x2), ("x3", x3)) if v is not None}
    if len(given) != 2:
        raise RotationError(
            f"axes need exactly two of x1, x2, x3, got {', '.join(given) or 'none'}: two vectors fix the third"
        )
    if exact not in given:
        raise RotationError(f"exact must name one of the two given vectors ({' or '.join(given)}), got {exact!r}")
    (other,) = given.keys() - {exact}
    kept, second = _broadcast_vectors(
        _unit_vectors(given[exact], exact), exact, _unit_vectors(given[other], other), other
    )
    i, j = int(exact[1]) - 1, int(other[1]) - 1
    normal = np.cross(kept, second)
    sine = np.linalg.norm(normal, axis=-1)
    if (sine < _PARALLEL).any():
        member = np.unravel_index(int(sine.argmin()), sine.shape)
        raise RotationError(
            f"{exact} and {other}{member_text([int(k) for k in member])} are parallel (sine of their angle "
            f"{sine[member]:.2g}): they do not fix a plane; give two vectors that differ in direction"
        )
    normal /= sine[..., None]
    axes = np.empty((*kept.shape[:-1], 3, 3))
    axes[..., i, :] = kept
    # x_i cross x_j is +x_k or -x_k, as (i, j) is a cyclic step or not.
    axes[..., 3 - i - j, :] = normal if (j - i) % 3 == 1 else -normal
    second = np.cross(normal, kept)
    axes[..., j, :] = second / np.linalg.norm(second, axis=-1, keepdims=True)
    return axes + 0.0  # no minus zeros


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


def take_rotation(R: RotationLike, name: str, *, allow_reflection: bool = False) -> NDArray[np.float64]:
    """Return `R` as checked matrices: finite, orthogonal, and of determinant +1 unless reflections are allowed."""
    source = R.as_matrix() if isinstance(R, SupportsAsMatrix) else R
    given = _real(take_in(source, name, (3, 3)), name)
    check_finite(given, name, 2, label_indices)
    matrices = given.astype(np.float64, copy=False)
    atol = 1e-5 if given.dtype == np.float32 else 1e-9
    defect = np.abs(matrices @ matrices.swapaxes(-1, -2) - np.eye(3)).max(axis=(-2, -1))
    if (defect > atol).any():
        member = np.unravel_index(int((defect > atol).argmax()), defect.shape)
        raise RotationError(
            f"{name}{member_text([int(k) for k in member])} is no rotation: the largest element of R R^T - 1 is "
            f"{defect[member]:.3g}, the tolerance is {atol:.0e}, its determinant is "
            f"{np.linalg.det(matrices[member]):.6g}; give it with more digits, or build it from an axis and an angle"
        )
    if not allow_reflection:
        determinant = np.linalg.det(matrices)
        if (determinant < 0.0).any():
            member = np.unravel_index(int((determinant < 0.0).argmax()), determinant.shape)
            raise RotationError(
                f"{name}{member_text([int(k) for k in member])} is a reflection (determinant "
                f"{determinant[member]:.6g}), a left-handed set of axes: turn one axis round, or allow it where the "
                "tensor cannot tell (allow_reflection=True)"
            )
    return matrices


_PERMUTATION = np.zeros((3, 3, 3))
for _i, _j, _k in ((0, 1, 2), (1, 2, 0), (2, 0, 1)):
    _PERMUTATION[_i, _j, _k], _PERMUTATION[_j, _i, _k] = 1.0, -1.0
_PARALLEL = 1e-6


def _bond_matrix(R: RotationLike, notation: Notation, side: Side) -> NDArray[np.float64]:
    matrices = _mandel.rotation_matrices(take_rotation(R, "R"))
    return cast(NDArray[np.float64], passage(_mandel.WORKING, notation).matrix(matrices, side, side))


def _real(array: Inexact, name: str) -> Inexact:
    if array.dtype.kind == "c":
        raise DataError(f"{name} must be real, got dtype {array.dtype}")
    return array


def _unit_vectors(vectors: ArrayLike, name: str) -> NDArray[np.float64]:
    """Return unit vectors along `vectors`, safe against overflow."""
    given = _real(take_in(vectors, name, (3,)), name)
    check_finite(given, name, 1, lambda index: f"{index[0] + 1}")
    array = given.astype(np.float64, copy=False)
    largest = np.abs(array).max(axis=-1, keepdims=True)
    if (largest == 0.0).any():
        member = np.unravel_index(int((largest[..., 0] == 0.0).argmax()), largest.shape[:-1])
        raise RotationError(f"{name}{member_text([int(k) for k in member])} has zero length: it has no direction")
    scaled = array / largest
    result: NDArray[np.float64] = scaled / np.linalg.norm(scaled, axis=-1, keepdims=True)
    return result


def _broadcast_vectors(
    first: NDArray[np.float64], first_name: str, second: NDArray[np.float64], second_name: str
) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    batch = broadcast_batches(**{first_name: first.shape[:-1], second_name: second.shape[:-1]})
    return np.broadcast_to(first, (*batch, first.shape[-1])), np.broadcast_to(second, (*batch, second.shape[-1]))


def _cosine_sine(angle: Inexact, degrees: bool) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Return cosine and sine; whole quarter turns given in degrees are exact."""
    angles = angle.astype(np.float64, copy=False)
    if not degrees:
        return np.cos(angles), np.sin(angles)
    # The remainder after whole quarter turns is exact, so that only its conversion to radians rounds.
    quarters = np.rint(angles / 90.0)
    rest = np.deg2rad(angles - 90.0 * quarters)
    cosine, sine = np.cos(rest), np.sin(rest)
    turn = quarters.astype(np.int64) % 4
    return (
        np.choose(turn, (cosine, -sine, -cosine, sine)) + 0.0,
        np.choose(turn, (sine, cosine, -sine, -cosine)) + 0.0,
    )
