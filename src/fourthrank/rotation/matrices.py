"""Taking rotations in: matrices, unit vectors and angles, checked and broadcast."""

from typing import Any, Final, NoReturn, Protocol, TypeAlias, runtime_checkable

import numpy as np
from numpy.typing import ArrayLike, NDArray

from .._arrays import Inexact, blocks, broadcast_batches, check_finite, member_text, take_in
from .._packing.weights import label_indices
from .._scratch import scratch
from ..errors import DataError, RotationError

__all__ = ["RotationLike", "SupportsAsMatrix"]


@runtime_checkable
class SupportsAsMatrix(Protocol):
    """Any object that gives its rotation matrices, shape (..., 3, 3), on request."""

    def as_matrix(self) -> Any:
        """Return the rotation matrices."""
        ...


RotationLike: TypeAlias = "ArrayLike | SupportsAsMatrix"
"""Rotation matrices or sets of axes: an array of shape (..., 3, 3), or an object with ``as_matrix()``."""


def take_matrices(R: RotationLike, name: str) -> Inexact:
    """Return `R` as real matrices of shape (..., 3, 3), not checked further."""
    # The protocol's own check is slow, and an array never has the method.
    source = R if type(R) is np.ndarray else R.as_matrix() if isinstance(R, SupportsAsMatrix) else R
    return real(take_in(source, name, (3, 3)), name)


def take_rotation(
    R: RotationLike, name: str, *, allow_reflection: bool = False, check: bool = True
) -> NDArray[np.float64]:
    """Return `R` as checked matrices: finite, orthogonal, and of determinant +1 unless reflections are allowed."""
    given = take_matrices(R, name)
    matrices = given if given.dtype is _DOUBLE else given.astype(np.float64)
    if check and not _pass(matrices.reshape(-1, 9), _tolerance(given), allow_reflection):
        _refuse(given, matrices, name)
    return matrices


def _tolerance(given: Inexact) -> float:
    return 1e-5 if given.dtype == np.float32 else 1e-9


def _pass(rows: NDArray[np.float64], atol: float, allow_reflection: bool) -> bool:
    """Tell whether all matrices, rows of 9, are rotations; written so that a NaN fails."""
    if len(rows) <= _FEW:
        found = [_single_defect(row) for row in rows.tolist()]
        return all(defect <= atol and (allow_reflection or handed > 0.0) for defect, handed in found)
    for part in blocks(len(rows), 9):
        if not _pass_quickly(rows[part], atol / 8.0):
            defects, determinants = _defects(rows[part])
            if not defects.max() <= atol or (not allow_reflection and determinants.min() < 0.0):
                return False
    return True


def real(array: Inexact, name: str) -> Inexact:
    """Return `array` if it is real."""
    if array.dtype.kind == "c":
        raise DataError(f"{name} must be real, got dtype {array.dtype}")
    return array


def unit_vectors(vectors: ArrayLike, name: str) -> NDArray[np.float64]:
    """Return unit vectors along `vectors`, safe against overflow."""
    array = take_vectors(vectors, name)
    largest = np.abs(array).max(axis=-1, keepdims=True)
    if (largest == 0.0).any():
        raise RotationError(f"{name}{first_member(largest[..., 0] == 0.0)} has zero length: it has no direction")
    scaled = array / largest
    result: NDArray[np.float64] = scaled / np.linalg.norm(scaled, axis=-1, keepdims=True)
    return result


def take_vectors(vectors: ArrayLike, name: str, length: int = 3) -> NDArray[np.float64]:
    """Return finite real vectors of shape (..., length) in double precision."""
    given = real(take_in(vectors, name, (length,)), name)
    check_finite(given, name, 1, lambda index: f"{index[0] + 1}")
    return given.astype(np.float64, copy=False)


def take_angles(angle: ArrayLike, name: str) -> NDArray[np.float64]:
    """Return finite real angles of any shape in double precision."""
    given = real(take_in(angle, name, ()), name)
    check_finite(given, name, 0, lambda _: "angle")
    return given.astype(np.float64, copy=False)


def broadcast_vectors(
    first: NDArray[np.float64], first_name: str, second: NDArray[np.float64], second_name: str
) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Return two arrays of vectors with a common batch."""
    batch = broadcast_batches(**{first_name: first.shape[:-1], second_name: second.shape[:-1]})
    return np.broadcast_to(first, (*batch, first.shape[-1])), np.broadcast_to(second, (*batch, second.shape[-1]))


def cosine_sine(angles: NDArray[np.float64], degrees: bool) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Return cosine and sine; whole quarter turns given in degrees are exact."""
    if not degrees:
        return np.cos(angles), np.sin(angles)
    # The remainder after whole quarter turns is exact, so that only its conversion to radians rounds.
    rest = np.fmod(angles, 360.0)
    quarters = np.rint(rest / 90.0)
    rest = np.deg2rad(rest - 90.0 * quarters)
    cosine, sine = np.cos(rest), np.sin(rest)
    turn = quarters.astype(np.int64) % 4
    return (
        np.choose(turn, (cosine, -sine, -cosine, sine)) + 0.0,
        np.choose(turn, (sine, cosine, -sine, -cosine)) + 0.0,
    )


def first_member(bad: NDArray[np.bool_] | np.bool_) -> str:
    """Return how a message names the first batch member that is bad."""
    flags = np.asarray(bad)
    return member_text([int(k) for k in np.unravel_index(int(flags.argmax()), flags.shape)])


def _single_defect(row: list[float]) -> tuple[float, float]:
    """Return the largest element of |R R^T - 1| and the determinant; Python's floats are fastest for a few matrices."""
    a, b, c, d, e, f, g, h, i = row
    defects = (
        abs(a * a + b * b + c * c - 1.0),
        abs(d * d + e * e + f * f - 1.0),
        abs(g * g + h * h + i * i - 1.0),
        abs(a * d + b * e + c * f),
        abs(a * g + b * h + c * i),
        abs(d * g + e * h + f * i),
    )
    # Comparisons with NaN are false, so that max alone could hide one; a sum cannot.
    worst = max(defects) if sum(defects) < np.inf else np.inf
    return worst, a * (e * i - f * h) + b * (f * g - d * i) + c * (d * h - e * g)


def _pass_quickly(rows: NDArray[np.float64], atol: float) -> bool:
    """Tell whether a block of matrices, (n, 9), are proper rotations, by half the work: the third row follows.

    With r1 and r2 orthonormal and r3 = r1 x r2, each to a small t, R R^T is 1 to 6 t, and the determinant is positive.
    """
    m = len(rows)
    with scratch() as memory, np.errstate(invalid="ignore", over="ignore"):
        r, defect, product = memory[:9, :m], memory[9:15, :m], memory[15, :m]
        np.copyto(r, rows.T)
        for i, j, k in ((0, 1, 2), (1, 2, 0), (2, 0, 1)):
            np.multiply(r[j], r[3 + k], out=defect[i])
            defect[i] -= np.multiply(r[k], r[3 + j], out=product)
            defect[i] -= r[6 + i]
        for place, first, second in ((3, r[:3], r[:3]), (4, r[3:6], r[3:6]), (5, r[:3], r[3:6])):
            np.einsum("in,in->n", first, second, out=defect[place])
        defect[3:5] -= 1.0
        return bool(defect.max() <= atol and defect.min() >= -atol)


def _defects(rows: NDArray[np.float64]) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Return the largest elements of |R R^T - 1| and the determinants of matrices, rows of 9."""
    r = rows.reshape(-1, 3, 3)
    with np.errstate(invalid="ignore", over="ignore"):
        gram = r @ r.swapaxes(-1, -2) - np.eye(3)
        determinants = (r[:, 0] * np.cross(r[:, 1], r[:, 2])).sum(axis=-1)
    return np.abs(gram).max(axis=(-2, -1)), determinants


def _refuse(given: Inexact, matrices: NDArray[np.float64], name: str) -> NoReturn:
    """Raise the error for the first member that is no rotation; there is one."""
    check_finite(given, name, 2, label_indices)
    shape, atol = matrices.shape[:-2], _tolerance(given)
    defects, determinants = (part.reshape(shape) for part in _defects(matrices.reshape(-1, 9)))
    skew = ~(defects <= atol)
    first = tuple(int(k) for k in np.unravel_index(int((skew | (determinants < 0.0)).argmax()), shape))
    determinant = float(determinants[first])
    if skew[first]:
        raise RotationError(
            f"{name}{member_text(first)} is no rotation: the largest element of R R^T - 1 is "
            f"{float(defects[first]):.3g}, the tolerance is {atol:.0e}, its determinant is {determinant:.6g}; give it "
            "with more digits, build it from an axis and an angle, or take rotation.nearest where it is only noisy"
        )
    raise RotationError(
        f"{name}{member_text(first)} is a reflection (determinant {determinant:.6g}), a left-handed set of axes: turn "
        "one axis round, or allow it where the tensor cannot tell (allow_reflection=True)"
    )


_FEW: Final = 16
_DOUBLE: Final = np.dtype(np.float64)
