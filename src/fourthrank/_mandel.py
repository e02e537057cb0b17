"""Kernels on raw arrays in the working form: Mandel weights in the order 11 22 33 23 13 12.

The working form is an isometry of symmetric tensors: norms, eigenvalues and inverses of the matrices are those of the
tensors, and a rotation is an orthogonal 6x6 matrix. Nothing here checks its input; the rooms above do that once.
"""

from typing import Any, Final

import numpy as np
from numpy.typing import NDArray

from ._arrays import Inexact
from .notation import Notation
from .ordering import VOIGT_ORDER

WORKING: Final = Notation.mandel(VOIGT_ORDER)
"""The notation of the working form."""


def _rotation_fold() -> NDArray[np.float64]:
    """Return the (81, 36) matrix that folds R_ik R_jl into the 6x6 matrix of a rotation.

    K_IJ = w_I m_J / w_J * (R_ik R_jl + R_il R_jk) / 2 for the pairs I = ij and J = kl.
    """
    fold = np.zeros((3, 3, 3, 3, 6, 6))
    half_weights = {0: 0.5, 1: np.sqrt(0.5), 2: 1.0}
    for row, (i, j) in enumerate(VOIGT_ORDER.pairs):
        for column, (k, m) in enumerate(VOIGT_ORDER.pairs):
            # Half of sqrt 2 for each shear pair; both orders of a pair contribute.
            weight = half_weights[(i != j) + (k != m)]
            fold[i, k, j, m, row, column] += weight
            fold[i, m, j, k, row, column] += weight
    return fold.reshape(81, 36)


_FOLD: Final = _rotation_fold()


def rotation_matrices(rotations: Inexact) -> Inexact:
    """Return the orthogonal 6x6 matrices K of rotations R: v' = K v is sigma'_ij = R_ik R_jl sigma_kl."""
    batch = rotations.shape[:-2]
    flat = rotations.reshape(-1, 9)
    products = (flat[:, :, None] * flat[:, None, :]).reshape(-1, 81)
    result: Inexact = (products @ _FOLD.astype(flat.dtype)).reshape(*batch, 6, 6)
    return result


def apply(matrix: Inexact, vector: Inexact) -> Inexact:
    """Return the matrix-vector products M_IJ v_J, broadcast over batches."""
    result: Inexact = (matrix @ vector[..., None])[..., 0]
    return result


def dot(first: Inexact, second: Inexact) -> Inexact:
    """Return the double contractions s_I e_I, broadcast over batches; no conjugate is taken."""
    result: Inexact = (first[..., None, :] @ second[..., :, None])[..., 0, 0]
    return result


def rotate_matrix(matrix: Inexact, rotation: Inexact) -> Inexact:
    """Return K C K^T for symmetric matrices C, exactly symmetric."""
    return symmetric_part(rotation @ matrix @ rotation.swapaxes(-1, -2))


def symmetric_part(matrix: Inexact) -> Inexact:
    """Return (M + M^T) / 2, exactly symmetric, and M itself bit for bit where M is symmetric."""
    result: Inexact = (matrix + matrix.swapaxes(-1, -2)) * 0.5
    return result


def invert(matrix: Inexact) -> tuple[Inexact, NDArray[np.floating[Any]]]:
    """Return the exactly symmetric inverses of symmetric matrices, and their condition numbers in the Frobenius norm.

    A matrix that is exactly singular gives an infinite condition number and an inverse of NaN.
    """
    try:
        inverse: Inexact = np.linalg.inv(matrix)
    except np.linalg.LinAlgError:
        singular = np.linalg.slogdet(matrix)[0] == 0.0
        safe = np.where(singular[..., None, None], np.eye(6, dtype=matrix.dtype), matrix)
        inverse = np.where(singular[..., None, None], np.nan, np.linalg.inv(safe))
    inverse = symmetric_part(inverse)
    condition = np.linalg.norm(matrix, axis=(-2, -1)) * np.linalg.norm(inverse, axis=(-2, -1))
    return inverse, np.where(np.isnan(condition), np.inf, condition)
