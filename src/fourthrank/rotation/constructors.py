"""Rotation matrices from axes and angles, Euler angles, quaternions, rotation vectors, and drawn at random.

Every function returns matrices that turn a body: a vector of the body goes from v to R v, ``v'_i = R_ij v_j``.
"""

from itertools import permutations
from numbers import Integral
from typing import Final, Literal

import numpy as np
from numpy.typing import ArrayLike, NDArray

from .._arrays import broadcast_batches, take_in
from ..errors import DataError, RotationError, ShapeError
from .matrices import (
    cosine_sine,
    first_member,
    take_angles,
    take_vectors,
    unit_vectors,
)

__all__ = [
    "about_axis",
    "cube_rotations",
    "from_bunge_euler",
    "from_euler",
    "from_quaternion",
    "from_rotation_vector",
    "random",
]


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
    n = unit_vectors(axis, "axis")
    cosine, sine = cosine_sine(take_angles(angle, "angle"), degrees)
    batch = broadcast_batches(axis=n.shape[:-1], angle=cosine.shape)
    return _turn(np.broadcast_to(n, (*batch, 3)), cosine, sine)


def from_bunge_euler(phi1: ArrayLike, Phi: ArrayLike, phi2: ArrayLike, *, degrees: bool = False) -> NDArray[np.float64]:
    """Return the matrices that turn a crystal from the specimen axes to its orientation, given by Bunge's angles.

    Starting with its own axes along those of the specimen, the crystal turns by phi1 about its third axis, then by Phi
    about its first, then by phi2 about its third (its own axes, as they then lie). The matrix
    ``R = Z(phi1) X(Phi) Z(phi2)`` takes components along the crystal axes to components along the specimen axes:
    ``v_specimen_i = R_ij v_crystal_j``. Bunge's orientation matrix g, which takes specimen to crystal components, is
    the transpose of R.

    So, for C along the crystal axes, ``C.rotate(R)`` is the stiffness of the grain along the specimen axes;
    ``C.in_axes(R)`` says the same in other words (the rows of R are the specimen axes, written in the crystal axes).
    For C along the specimen axes, ``C.in_axes(R.swapaxes(-1, -2))`` gives the components along the crystal axes.

    Parameters
    ----------
    phi1, Phi, phi2 : array_like, shape (...)
        The three angles; batches broadcast.
    degrees : bool
        Whether the angles are in degrees and not in radians. Multiples of 90 degrees come out exact.

    Returns
    -------
    ndarray of float64, shape (..., 3, 3)
        Rotation matrices.

    Raises
    ------
    ShapeError, DataError
        If the batches do not broadcast, or an angle is not finite or not real.

    References
    ----------
    Bunge, H. J. (1982), Texture Analysis in Materials Science, eq. 2.50 (the transpose of R).

    Examples
    --------
    >>> from fourthrank import rotation
    >>> R = rotation.from_bunge_euler(90, 90, 0, degrees=True)
    >>> R @ [0, 0, 1]  # where the crystal's third axis points in the specimen
    array([1., 0., 0.])
    """
    angles = {"phi1": take_angles(phi1, "phi1"), "Phi": take_angles(Phi, "Phi"), "phi2": take_angles(phi2, "phi2")}
    broadcast_batches(**{name: angle.shape for name, angle in angles.items()})
    first, second, third = (
        _elementary(axis, angle, degrees) for axis, angle in zip((2, 0, 2), angles.values(), strict=True)
    )
    return np.asarray(first @ second @ third)


def from_euler(
    angles: ArrayLike, *, axes: str, composition: Literal["intrinsic", "extrinsic"], degrees: bool = False
) -> NDArray[np.float64]:
    """Return the matrices of three turns about coordinate axes, one after the other.

    With ``axes="ijk"`` and the elementary turns A about axis i by the first angle, B and C likewise, the matrix is
    ``R = A B C`` for ``"intrinsic"`` turns (about the body's own axes, as they then lie) and ``R = C B A`` for
    ``"extrinsic"`` ones (about the fixed axes). A vector of the body goes from v to ``R_ij v_j`` with ``x.rotate(R)``;
    ``x.in_axes(R)`` takes its rows for the new axes, and ``x.in_axes(R.swapaxes(-1, -2))`` gives the components along
    axes that turned with the body.

    Parameters
    ----------
    angles : array_like, shape (..., 3)
        The three angles in the order in which the turns are made.
    axes : str
        The axes of the three turns in the same order: three digits of 1 2 3 or three letters of x y z, for example
        ``"313"`` or ``"zyx"``. Neighbours must differ. Upper and lower case mean the same.
    composition : {"intrinsic", "extrinsic"}
        Whether the axes turn with the body or stay.
    degrees : bool
        Whether the angles are in degrees and not in radians. Multiples of 90 degrees come out exact.

    Returns
    -------
    ndarray of float64, shape (..., 3, 3)
        Rotation matrices.

    Raises
    ------
    RotationError
        If `axes` or `composition` is none of those listed.
    ShapeError, DataError
        If the trailing shape is not (3,), or an angle is not finite or not real.

    References
    ----------
    Goldstein, H. (1980), Classical Mechanics, 2nd ed., appendix B.

    Examples
    --------
    >>> from fourthrank import rotation
    >>> rotation.from_euler([90, 0, 90], axes="xyz", composition="extrinsic", degrees=True) @ [0, 0, 1]
    array([1., 0., 0.])
    """
    places = _read_axes(axes)
    if composition not in ("intrinsic", "extrinsic"):
        raise RotationError(
            "composition must be 'intrinsic' (the axes turn with the body) or 'extrinsic' (the axes stay), got "
            f"composition={composition!r}"
        )
    given = take_vectors(angles, "angles")
    turns = [_elementary(axis, given[..., k], degrees) for k, axis in enumerate(places)]
    if composition == "extrinsic":
        turns.reverse()
    return np.asarray(turns[0] @ turns[1] @ turns[2])


def from_quaternion(q: ArrayLike, *, scalar: Literal["first", "last"], normalize: bool = False) -> NDArray[np.float64]:
    """Return the matrices of unit quaternions.

    With the scalar part w and the vector part u, the matrix is
    ``R_ij = (w^2 - u_k u_k) d_ij + 2 u_i u_j - 2 w e_ijk u_k``: a vector of the body goes from v to ``R_ij v_j`` with
    ``x.rotate(R)``, a turn about u by the angle t with w = cos(t/2). ``x.in_axes(R)`` takes its rows for the new axes,
    which are the old ones turned by -t. q and -q give the same matrix.

    Parameters
    ----------
    q : array_like, shape (..., 4)
        Quaternions.
    scalar : {"first", "last"}
        Where the scalar part stands.
    normalize : bool
        Whether to scale quaternions to unit length first, instead of refusing those that lack it.

    Returns
    -------
    ndarray of float64, shape (..., 3, 3)
        Rotation matrices.

    Raises
    ------
    RotationError
        If `scalar` is neither of the two, a quaternion is zero, or its norm is not 1 (to 1e-9, single precision: 1e-5)
        and `normalize` is False.
    ShapeError, DataError
        If the trailing shape is not (4,), or a component is not finite or not real.

    References
    ----------
    Altmann, S. L. (1986), Rotations, Quaternions, and Double Groups, chapter 12.

    Examples
    --------
    >>> from fourthrank import rotation
    >>> rotation.from_quaternion([0, 0, 0, 1], scalar="last")
    array([[1., 0., 0.],
           [0., 1., 0.],
           [0., 0., 1.]])
    """
    if scalar not in ("first", "last"):
        raise RotationError(f"scalar must be 'first' or 'last', got scalar={scalar!r}")
    single = take_in(q, "q", (4,)).dtype == np.float32
    given = take_vectors(q, "q", 4)
    largest = np.abs(given).max(axis=-1, keepdims=True)
    if (largest == 0.0).any():
        raise RotationError(f"q{first_member(largest[..., 0] == 0.0)} is zero: it is no rotation")
    scaled = given / largest
    length = np.linalg.norm(scaled, axis=-1, keepdims=True)
    atol = 1e-5 if single else 1e-9
    norm = (largest * length)[..., 0]
    wrong = ~(np.abs(norm - 1.0) <= atol)
    if not normalize and wrong.any():
        raise RotationError(
            f"q{first_member(wrong)} is no unit quaternion: its norm is {float(norm[wrong][0]):.10g}, the tolerance is "
            f"{atol:.0e}; normalize=True scales it to unit length"
        )
    return _from_unit_quaternion(scaled / length, 0 if scalar == "first" else 3)


def from_rotation_vector(vector: ArrayLike, *, degrees: bool = False) -> NDArray[np.float64]:
    """Return the matrices of rotation vectors: along the axis of the turn, as long as its angle.

    With t the length of the vector and n its direction, ``R_ij = cos(t) d_ij + (1 - cos(t)) n_i n_j - sin(t) e_ijk
    n_k`` as in `about_axis`: a vector of the body goes from v to ``R_ij v_j`` with ``x.rotate(R)``, and
    ``x.in_axes(R)`` takes its rows, the old axes turned by -t, for the new axes.

    Parameters
    ----------
    vector : array_like, shape (..., 3)
        Rotation vectors; zero is no turn.
    degrees : bool
        Whether the length is an angle in degrees and not in radians.

    Returns
    -------
    ndarray of float64, shape (..., 3, 3)
        Rotation matrices.

    Raises
    ------
    ShapeError, DataError
        If the trailing shape is not (3,), or a component is not finite or not real.

    References
    ----------
    Goldstein, H. (1980), Classical Mechanics, 2nd ed., eq. 4-92 (the rotation formula).

    Examples
    --------
    >>> from fourthrank import rotation
    >>> (rotation.from_rotation_vector([0, 90, 0], degrees=True) @ [0, 0, 1]).round(12)
    array([1., 0., 0.])
    """
    given = take_vectors(vector, "vector")
    largest = np.abs(given).max(axis=-1, keepdims=True)
    scaled = given / np.where(largest == 0.0, 1.0, largest)
    length = np.linalg.norm(scaled, axis=-1, keepdims=True)
    n = scaled / np.where(length == 0.0, 1.0, length)
    return _turn(n, *cosine_sine((largest * length)[..., 0], degrees))


def random(n: int | tuple[int, ...], rng: np.random.Generator) -> NDArray[np.float64]:
    """Draw rotations at random, uniformly: every orientation is equally likely (Haar measure).

    The matrices turn a body, ``v'_i = R_ij v_j`` with ``x.rotate(R)``; their rows are sets of axes for
    ``x.in_axes(R)``, drawn from the same distribution.

    Parameters
    ----------
    n : int or tuple of int
        How many, or the shape of the batch; () for a single one.
    rng : numpy.random.Generator
        The source of the numbers; ``numpy.random.default_rng(seed)`` makes the draw repeatable.

    Returns
    -------
    ndarray of float64, shape (n, 3, 3) or n + (3, 3)
        Rotation matrices.

    Raises
    ------
    ShapeError
        If `n` is negative or no integer.
    DataError
        If `rng` is no generator.

    References
    ----------
    Marsaglia, G. (1972), Ann. Math. Stat. 43, 645-646 (points of the unit sphere in four dimensions, as quaternions).

    Examples
    --------
    >>> import numpy as np
    >>> from fourthrank import rotation
    >>> rotation.random(1000, np.random.default_rng(7)).shape
    (1000, 3, 3)
    """
    if not isinstance(rng, np.random.Generator):  # pyright: ignore[reportUnnecessaryIsInstance]  # callers without a checker
        raise DataError(f"rng must be a numpy.random.Generator, got {rng!r}: write numpy.random.default_rng(seed)")
    shape = n if isinstance(n, tuple) else (n,)
    if not all(_is_count(k) for k in shape):
        raise ShapeError(f"n must be a count or a shape of counts, none of them negative, got n={n!r}")
    # A normal vector in four dimensions has a uniform direction, and a length that is zero with probability zero.
    q = rng.standard_normal((*shape, 4))
    return _from_unit_quaternion(q / np.linalg.norm(q, axis=-1, keepdims=True), 0)


def cube_rotations() -> NDArray[np.float64]:
    """Return the 24 proper rotations of a cube whose edges lie along the axes.

    Each takes a vector of the body from v to ``R_ij v_j`` (``x.rotate(R)``); the set holds the transpose of each
    member, so that it serves as sets of axes (``x.in_axes(R)``) as well. All elements are 0, 1 or -1, exactly.

    Returns
    -------
    ndarray of float64, shape (24, 3, 3)
        The rotations; the identity comes first.

    References
    ----------
    International Tables for Crystallography, vol. A, point group 432.

    Examples
    --------
    >>> from fourthrank import rotation
    >>> rotation.cube_rotations().shape
    (24, 3, 3)
    """
    signs = np.array([[i, j, k] for i in (1.0, -1.0) for j in (1.0, -1.0) for k in (1.0, -1.0)])
    signed = np.concatenate(
        [sign[:, None] * np.eye(3)[list(order)] for order in permutations(range(3)) for sign in signs]
    )
    matrices = signed.reshape(48, 3, 3)
    proper: NDArray[np.float64] = matrices[np.linalg.det(matrices) > 0.0] + 0.0  # no minus zeros
    return proper


_PERMUTATION: Final = np.zeros((3, 3, 3))
for _i, _j, _k in ((0, 1, 2), (1, 2, 0), (2, 0, 1)):
    _PERMUTATION[_i, _j, _k], _PERMUTATION[_j, _i, _k] = 1.0, -1.0
_BOOL: Final[tuple[type, ...]] = (bool, np.bool_)
_AXIS_OF_CHARACTER: Final = {"1": 0, "2": 1, "3": 2, "x": 0, "y": 1, "z": 2}


def _turn(n: NDArray[np.float64], cosine: NDArray[np.float64], sine: NDArray[np.float64]) -> NDArray[np.float64]:
    """Return the turns about unit vectors n; the batches broadcast."""
    c, s = np.asarray(cosine)[..., None, None], np.asarray(sine)[..., None, None]
    cross = np.einsum("ijk,...k->...ij", _PERMUTATION, n)
    return np.asarray(c * np.eye(3) + (1.0 - c) * (n[..., :, None] * n[..., None, :]) - s * cross)


def _elementary(axis: int, angle: NDArray[np.float64], degrees: bool) -> NDArray[np.float64]:
    """Return the turns about a coordinate axis."""
    cosine, sine = cosine_sine(angle, degrees)
    i, j = (axis + 1) % 3, (axis + 2) % 3
    matrix = np.zeros((*angle.shape, 3, 3))
    matrix[..., axis, axis] = 1.0
    matrix[..., i, i] = matrix[..., j, j] = cosine
    matrix[..., j, i], matrix[..., i, j] = sine, -sine
    return matrix


def _from_unit_quaternion(q: NDArray[np.float64], scalar: int) -> NDArray[np.float64]:
    w = q[..., scalar, None, None]
    u = np.delete(q, scalar, axis=-1)
    outer = u[..., :, None] * u[..., None, :]
    square = np.trace(outer, axis1=-2, axis2=-1)[..., None, None]
    cross = np.einsum("ijk,...k->...ij", _PERMUTATION, u)
    return np.asarray((w * w - square) * np.eye(3) + 2.0 * (outer - w * cross))


def _is_count(k: object) -> bool:
    return isinstance(k, Integral) and not isinstance(k, _BOOL) and int(k) >= 0


def _read_axes(axes: object) -> list[int]:
    """Return the three axes that a word such as '313' or 'zyx' names."""
    text = axes.lower() if isinstance(axes, str) else ""
    places = [_AXIS_OF_CHARACTER[character] for character in text if character in _AXIS_OF_CHARACTER]
    plain = text.isdigit() or text.isalpha()
    if len(text) != 3 or len(places) != 3 or not plain or places[0] == places[1] or places[1] == places[2]:
        raise RotationError(
            f"axes must be three digits of 1 2 3 or three letters of x y z, neighbours different, such as '313' or "
            f"'zyx', got axes={axes!r}"
        )
    return places
