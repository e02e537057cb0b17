"""Kernels on raw arrays in the working form: Mandel weights in the order 11 22 33 23 13 12.

The working form is an isometry of symmetric tensors: norms, eigenvalues and inverses of the matrices are those of the
tensors, and a rotation is an orthogonal 6x6 matrix. Nothing here checks its input; the rooms above do that once.
"""

from typing import Final

import numpy as np

from ._arrays import Inexact, blocks
from ._inversion import invert
from ._turning import rotate_matrix, rotation_matrices, symmetric_part, turn_matrices, turn_vectors
from .notation import Notation
from .ordering import VOIGT_ORDER

__all__ = [
    "WORKING",
    "apply",
    "dot",
    "invert",
    "rotate_matrix",
    "rotation_matrices",
    "symmetric_part",
    "symmetrize",
    "turn_matrices",
    "turn_vectors",
]

WORKING: Final = Notation.mandel(VOIGT_ORDER)
"""The notation of the working form."""


def symmetrize(matrix: Inexact) -> Inexact:
    """Return the symmetric part of a contiguous array that nobody else needs; large batches change in place."""
    if matrix.size < _FEW:
        return symmetric_part(matrix)
    flat = matrix.reshape(-1, 6, 6)
    for part in blocks(len(flat), 36):
        np.copyto(flat[part], symmetric_part(flat[part]))
    return matrix


_FEW: Final = 36 * 100


def apply(matrix: Inexact, vector: Inexact) -> Inexact:
    """Return the matrix-vector products M_IJ v_J, broadcast over batches."""
    result: Inexact = (matrix @ vector[..., None])[..., 0]
    return result


def dot(first: Inexact, second: Inexact) -> Inexact:
    """Return the double contractions s_I e_I, broadcast over batches; no conjugate is taken."""
    result: Inexact = (first[..., None, :] @ second[..., :, None])[..., 0, 0]
    return result
