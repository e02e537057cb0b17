"""Sets of axes from vectors along two of them."""

from typing import Final, Literal

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ..errors import RotationError
from .matrices import broadcast_vectors, first_member, unit_vectors

__all__ = ["axes_from_vectors"]

_PARALLEL: Final = 1e-6
"""Vectors whose angle is smaller, in radians, count as parallel: their plane would be lost in the rounding."""


def axes_from_vectors(
    *,
    x1: ArrayLike | None = None,
    x2: ArrayLike | None = None,
    x3: ArrayLike | None = None,
    exact: Literal["x1", "x2", "x3"],
) -> NDArray[np.float64]:
    """Return a right-handed set of axes from vectors along two of them.

    The rows of the result are the new axes x1, x2, x3, written in the old ones: ``v'_i = A_ij v_j`` are the components
    along them, for use with ``x.in_axes(A)``. A body that is turned so that its directions x1, x2, x3 come to lie along
    the coordinate axes is ``x.rotate(A)``. The vector named by `exact` keeps its direction exactly. The other one says
    in which half plane its axis lies: its part along the exact axis is taken away. The third axis completes a
    right-handed set.

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
    kept, second = broadcast_vectors(unit_vectors(given[exact], exact), exact, unit_vectors(given[other], other), other)
    i, j = int(exact[1]) - 1, int(other[1]) - 1
    normal = np.cross(kept, second)
    sine = np.linalg.norm(normal, axis=-1)
    if (sine < _PARALLEL).any():
        raise RotationError(
            f"{exact} and {other}{first_member(sine < _PARALLEL)} are parallel (the sine of their angle is "
            f"{sine[sine < _PARALLEL][0]:.2g}): they do not fix a plane; give two vectors that differ in direction"
        )
    normal /= sine[..., None]
    axes = np.empty((*kept.shape[:-1], 3, 3))
    axes[..., i, :] = kept
    # x_i cross x_j is +x_k or -x_k, as (i, j) is a cyclic step or not.
    axes[..., 3 - i - j, :] = normal if (j - i) % 3 == 1 else -normal
    second = np.cross(normal, kept)
    axes[..., j, :] = second / np.linalg.norm(second, axis=-1, keepdims=True)
    return axes + 0.0  # no minus zeros
