"""The linear algebra below the symmetry objects: the 21 constants as a vector, generators acting on it, fixed spaces.

The 21 constants of a symmetric 6x6 matrix in the working form, off-diagonal ones times sqrt 2, are an isometric vector
of the tensor. A rotation acts on it as an orthogonal 21x21 matrix, a rotation rate as an antisymmetric one.
"""

from typing import Final

import numpy as np
from numpy.typing import NDArray

from .._arrays import Inexact
from .._mandel import rotation_matrices
from .._turning import SQUARE, UPPER

__all__ = ["RATES", "constants", "fixed_maps", "fixed_space", "from_constants", "rotation_action"]

_ROOT: Final = np.sqrt(2.0)
_ROWS, _COLUMNS = np.triu_indices(6)
_WEIGHTS: Final = np.where(_ROWS == _COLUMNS, 1.0, _ROOT)
_FIXED: Final = 1e-6
"""Singular values below this count as zero: far above the rounding of generators, far below any true one."""
_NOISE: Final = 3e-14
"""Components of unit tensors below this are rounding: LAPACK builds differ, and the worst one seen leaves 4.4e-15."""


def constants(matrices: Inexact) -> Inexact:
    """Return the isometric vectors of 21 constants, (..., 21), of symmetric 6x6 matrices in the working form."""
    rows = matrices.reshape(*matrices.shape[:-2], 36)
    vectors: Inexact = rows.take(UPPER, axis=-1) * _WEIGHTS
    return vectors


def from_constants(vectors: Inexact) -> Inexact:
    """Return the symmetric 6x6 matrices of vectors of 21 constants; exactly symmetric."""
    matrices: Inexact = (vectors / _WEIGHTS).take(SQUARE, axis=-1).reshape(*vectors.shape[:-1], 6, 6)
    return matrices


def rotation_action(rotations: NDArray[np.float64]) -> NDArray[np.float64]:
    """Return the orthogonal (..., 21, 21) matrices by which rotations (..., 3, 3) act on the 21 constants."""
    k = rotation_matrices(rotations)[..., None, :, :]
    turned = k @ _UNITS @ k.swapaxes(-1, -2)
    return np.ascontiguousarray(constants(turned).swapaxes(-1, -2))


def _six_rates() -> NDArray[np.float64]:
    """Return the (3, 6, 6) derivatives L_a of the 6x6 matrices of rotations about the three axes.

    With W_ij = -eps_aij, a symmetric tensor changes at the rate W s + s W^T; the entries are exact.
    """
    rates = np.zeros((3, 3, 3))
    for a, i, j in ((0, 1, 2), (1, 2, 0), (2, 0, 1)):
        rates[a, i, j], rates[a, j, i] = -1.0, 1.0
    pairs = ((0, 0), (1, 1), (2, 2), (1, 2), (0, 2), (0, 1))
    units = np.zeros((6, 3, 3))
    for place, (i, j) in enumerate(pairs):
        units[place, i, j] = units[place, j, i] = 1.0 if i == j else 1.0 / _ROOT
    changes = rates[:, None] @ units - units @ rates[:, None]
    rows, columns = np.array(pairs).T
    weights = np.where(rows == columns, 1.0, _ROOT)
    return np.ascontiguousarray((changes[..., rows, columns] * weights).swapaxes(-1, -2))


def _rates() -> NDArray[np.float64]:
    """Return the (3, 21, 21) derivatives of `rotation_action`: C changes at the rate L C + C L^T."""
    six = _SIX_RATES[:, None]
    return np.ascontiguousarray(constants(six @ _UNITS + _UNITS @ six.swapaxes(-1, -2)).swapaxes(-1, -2))


_UNITS: Final = from_constants(np.eye(21))
_SIX_RATES: Final = _six_rates()
RATES: Final = _rates()
"""The three 21x21 matrices D_a: along a turn about axis a, the constants c change at the rate D_a c."""


def fixed_space(rotations: NDArray[np.float64], free_axes: NDArray[np.float64]) -> NDArray[np.float64]:
    """Return an orthonormal basis (k, 21) of the tensors that do not change under the generators.

    `rotations` are (n, 3, 3); all rotations about the unit vectors `free_axes` (m, 3) are generators too.
    """
    equations = [rotation_action(rotations) - np.eye(21), np.tensordot(free_axes, RATES, 1)]
    _, singular, rows = np.linalg.svd(np.concatenate(equations).reshape(-1, 21), full_matrices=True)
    rank = int((singular > _FIXED).sum())
    kernel = rows[rank:]
    return _tidy(kernel.T @ kernel, 21 - rank)


def fixed_maps(rotations: NDArray[np.float64], free_axes: NDArray[np.float64]) -> NDArray[np.float64]:
    """Return an orthonormal basis (k, 6, 6) of the linear maps, symmetric or not, that the generators leave alone."""
    k, unit = rotation_matrices(rotations), np.eye(6)
    six = np.tensordot(free_axes, _SIX_RATES, 1)
    # The matrix of M -> A M B^T, row by row, is the Kronecker product of A and B.
    turns = np.einsum("nij,nkl->nikjl", k, k) - np.einsum("ij,kl->ikjl", unit, unit)
    rates = np.einsum("nij,kl->nikjl", six, unit) + np.einsum("ij,nkl->nikjl", unit, six)
    equations = np.concatenate([turns, rates]).reshape(-1, 36)
    _, singular, rows = np.linalg.svd(equations, full_matrices=True)
    return np.ascontiguousarray(rows[int((singular > _FIXED).sum()) :].reshape(-1, 6, 6))


def _tidy(projector: NDArray[np.float64], count: int) -> NDArray[np.float64]:
    """Return a sparse orthonormal basis of the range of a projector: columns of it, made orthogonal.

    Singular vectors come in any mixture; these follow the order of the constants, and what must vanish does. Columns
    that are nearly spent are left for later, since little of them would be mostly rounding.
    """
    basis = np.zeros((count, 21))
    rests = projector.copy()
    for found in range(count):
        sizes = np.linalg.norm(rests, axis=1)
        vector = rests[(sizes > 0.5 * sizes.max()).argmax()]
        vector = vector - basis[:found].T @ (basis[:found] @ vector)
        vector /= np.linalg.norm(vector)
        basis[found] = np.where(np.abs(vector) < _NOISE, 0.0, vector)
        rests = rests - np.outer(rests @ vector, vector)
    return basis
