"""Comparing rotations: the angle between two, and the rotation nearest to a noisy matrix."""

from typing import Final

import numpy as np
from numpy.typing import ArrayLike, NDArray

from .._arrays import broadcast_batches, check_finite, member_text
from .._packing.weights import label_indices
from ..errors import RotationError
from .matrices import RotationLike, take_matrices, take_rotation

__all__ = ["angle_between", "nearest"]

_AMBIGUOUS: Final = 1e-9
"""Relative to the largest singular value: below this, which rotation is nearest is decided by rounding."""


def angle_between(first: RotationLike, second: RotationLike, *, degrees: bool = False) -> NDArray[np.float64]:
    """Return the angle of the turn that leads from one rotation to another.

    The turn is ``Q_ij = second_ik first_jk``; its angle t has ``1 + 2 cos(t) = Q_ii``. It is the same for turns of a
    body (``x.rotate``) and for sets of axes (``x.in_axes``). Symmetries of a crystal are not considered.

    Parameters
    ----------
    first, second : array_like, shape (..., 3, 3), or object with ``as_matrix()``
        Rotations or right-handed sets of axes; batches broadcast.
    degrees : bool
        Whether to give the angle in degrees and not in radians.

    Returns
    -------
    ndarray of float64, shape (...)
        Angles from 0 to pi (180 degrees), accurate at both ends.

    Raises
    ------
    RotationError
        If a matrix is no proper rotation.
    ShapeError
        If the batches do not broadcast.

    Examples
    --------
    >>> import numpy as np
    >>> from fourthrank import rotation
    >>> tilted = rotation.about_axis([1, 1, 1], 30, degrees=True)
    >>> float(rotation.angle_between(np.eye(3), tilted, degrees=True).round(12))
    30.0
    """
    one, two = take_rotation(first, "first"), take_rotation(second, "second")
    broadcast_batches(first=one.shape[:-2], second=two.shape[:-2])
    turn = two @ one.swapaxes(-1, -2)
    # Twice the sine from the skew part and twice the cosine from the trace: the arc cosine alone loses half of the
    # digits near 0 and pi.
    skew = turn - turn.swapaxes(-1, -2)
    sine = np.sqrt(skew[..., 0, 1] ** 2 + skew[..., 0, 2] ** 2 + skew[..., 1, 2] ** 2)
    angle = np.arctan2(sine, np.trace(turn, axis1=-2, axis2=-1) - 1.0)
    return np.asarray(np.rad2deg(angle) if degrees else angle)


def nearest(matrix: ArrayLike) -> NDArray[np.float64]:
    """Return the rotations nearest to noisy matrices: those that minimise ``(R_ij - M_ij) (R_ij - M_ij)``.

    This is the way on where measured or rounded matrices are refused. The result maps what `matrix` maps: use it with
    ``x.rotate`` where `matrix` was meant to turn a body (v goes to ``R_ij v_j``), and with ``x.in_axes`` where its rows
    were meant to be axes.

    Parameters
    ----------
    matrix : array_like, shape (..., 3, 3)
        Matrices that should have been rotations. Their scale does not matter.

    Returns
    -------
    ndarray of float64, shape (..., 3, 3)
        Proper rotations.

    Raises
    ------
    RotationError
        If a determinant is negative (a reflection), or several rotations are equally near (rank below 2).
    ShapeError, DataError
        If the trailing shape is not (3, 3), or something is not finite or not real.

    References
    ----------
    Kabsch, W. (1976), Acta Cryst. A32, 922-923; Higham, N. J. (1986), SIAM J. Sci. Stat. Comput. 7, 1160-1174.

    Examples
    --------
    >>> from fourthrank import rotation
    >>> rotation.nearest([[0.71, -0.71, 0], [0.71, 0.71, 0], [0, 0, 1]]).round(6)
    array([[ 0.707107, -0.707107,  0.      ],
           [ 0.707107,  0.707107,  0.      ],
           [ 0.      ,  0.      ,  1.      ]])
    """
    given = take_matrices(matrix, "matrix")
    check_finite(given, "matrix", 2, label_indices)
    left, values, right = np.linalg.svd(given.astype(np.float64, copy=False))
    # Both factors are orthogonal, so that their determinants are +1 or -1 to a few ulp.
    handed = np.rint(np.linalg.det(left) * np.linalg.det(right))
    ambiguous = values[..., 1] <= _AMBIGUOUS * values[..., 0]
    mirrored = (handed < 0.0) & (values[..., 2] > _AMBIGUOUS * values[..., 0])
    bad = np.asarray(ambiguous | mirrored)
    if bad.any():
        member = tuple(int(k) for k in np.unravel_index(int(bad.argmax()), bad.shape))
        listed = ", ".join(f"{value:.3g}" for value in values[member])
        cause = (
            "it has rank below 2, so that several rotations are equally near; give matrices that are nearly rotations"
            if ambiguous[member]
            else "its determinant is negative, a reflection: turn one of its axes round first"
        )
        raise RotationError(f"matrix{member_text(member)} (singular values {listed}) has no nearest rotation: {cause}")
    # A matrix of rank 2 has one nearest rotation, which may need the last axis turned round.
    left[..., :, 2] *= np.where(handed < 0.0, -1.0, 1.0)[..., None]
    return np.asarray(left @ right)
