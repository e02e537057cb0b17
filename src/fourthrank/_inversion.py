"""Inverting batches of symmetric 6x6 matrices."""

from typing import Any, Final

import numpy as np
from numpy.typing import NDArray

from ._arrays import Inexact, blocks
from ._scratch import scratch
from ._turning import symmetric_part

_FEW: Final = 100
"""Where LAPACK, matrix by matrix, is no slower than blocks, as measured."""
_SAFE_CONDITION: Final = 1e15
"""Up to this bound the condition number is not worth a closer look."""


def invert(matrix: Inexact) -> tuple[Inexact, NDArray[np.floating[Any]]]:
    """Return the exactly symmetric inverses X of symmetric matrices M, and bounds of their condition numbers.

    The residual is a few eps times the condition number, ``|M X - 1| < 8 eps |M| |X|`` in the Frobenius norm, where M
    is real or has a positive definite real part. Above 1e15 the bound is the condition number ``|M| |X|`` itself; it is
    infinite where M is exactly singular.
    """
    rows = matrix.reshape(-1, 6, 6)
    real = matrix.dtype.kind != "c"
    if real and len(rows) < _FEW:
        return _invert_few(matrix)
    inverse, bound = np.empty_like(rows), np.empty(len(rows))
    for block in blocks(len(rows), 36 if real else 72):
        _invert_positive(rows[block], inverse[block], bound[block])
    # What is not positive definite, nearly singular or not finite needs another way.
    rest = ~(bound <= _SAFE_CONDITION)
    if rest.any():
        inverse[rest], bound[rest] = _invert_few(rows[rest])
    return inverse.reshape(matrix.shape), bound.reshape(matrix.shape[:-2])


def _invert_few(matrix: Inexact) -> tuple[Inexact, NDArray[np.floating[Any]]]:
    inverse = symmetric_part(_invert_complex(matrix) if matrix.dtype.kind == "c" else _invert_real(matrix))
    condition = np.asarray(np.sqrt(_square(matrix) * _square(inverse)))
    condition[np.isnan(condition)] = np.inf
    return inverse, condition


def _invert_real(matrix: Inexact) -> Inexact:
    """Return inverses by the Cholesky factors or, where they do not exist, by the eigenvalues.

    The general inverse has a small residual on one side only. Made symmetric, it has lost up to three digits more.
    """
    try:
        root: Inexact = np.linalg.inv(np.linalg.cholesky(matrix))
    except np.linalg.LinAlgError:
        finite = np.asarray(np.isfinite(matrix).all(axis=(-2, -1)))[..., None, None]
        values, vectors = np.linalg.eigh(np.where(finite, matrix, np.eye(6)))
        with np.errstate(divide="ignore", invalid="ignore"):
            inverse = (vectors / values[..., None, :]) @ vectors.swapaxes(-1, -2)
        return np.where(finite, inverse, np.nan)
    product: Inexact = root.swapaxes(-1, -2) @ root
    return product


def _square(matrix: Inexact) -> NDArray[np.floating[Any]]:
    # Faster than linalg.norm, which counts for a single matrix.
    parts = (np.real(matrix), np.imag(matrix)) if matrix.dtype.kind == "c" else (matrix,)
    return np.asarray(sum(np.einsum("...ij,...ij->...", part, part) for part in parts))


def _invert_complex(matrix: Inexact) -> Inexact:
    try:
        return np.asarray(np.linalg.inv(matrix))
    except np.linalg.LinAlgError:
        singular = np.asarray(np.linalg.slogdet(matrix)[0] == 0.0)[..., None, None]
        return np.where(singular, np.nan, np.linalg.inv(np.where(singular, np.eye(6), matrix)))


def _invert_positive(rows: Inexact, out: Inexact, bound: NDArray[np.float64]) -> None:
    """Write the inverses of a block of matrices with positive definite real parts, and bounds of the condition numbers.

    The product of the traces bounds those of real matrices. The bound is infinite where the pivots are in doubt.

    A = L D L^T and A^-1 = M^T D^-1 M with M L = 1, components first. Sums of products take half as many passes over the
    memory as eliminations. M is found column by column, from M L = 1 and not from L M = 1: only so the residual of the
    inverse stays near eps times the condition number (Higham, N. J. (2002), Accuracy and Stability of Numerical
    Algorithms, 2nd ed., section 14.2).
    """
    m = len(rows)
    with scratch() as plain, np.errstate(all="ignore"):
        memory: Inexact = plain.view(rows.dtype)
        a, result = memory[:36, :m].reshape(6, 6, m), memory[36:72, :m].reshape(6, 6, m)
        pivots, inverse_pivots, products, sums = memory[72:96, :m].reshape(4, 6, m)
        for i in range(6):  # the lower triangle holds everything
            np.copyto(a[i, : i + 1], rows[:, i, : i + 1].T)
        trace = np.einsum("in->n", memory[:36:7, :m])
        for k in range(6):  # L below the diagonal, D in `pivots`
            column = a[k:, k]
            if k:
                np.multiply(a[k, :k], pivots[:k], out=products[:k])
                np.einsum("ipn,pn->in", a[k:, :k], products[:k], out=sums[k:])
                column -= sums[k:]
            np.copyto(pivots[k], column[0])
            np.reciprocal(column[0], out=inverse_pivots[k])
            column[1:] *= inverse_pivots[k]
        for j in range(5, -1, -1):  # M in the place of L
            a[j, j], a[j, j + 1 :] = 1.0, 0.0
            if j < 5:
                np.einsum("ipn,pn->in", a[j + 1 :, j + 1 :], a[j + 1 :, j], out=sums[j + 1 :])
                np.negative(sums[j + 1 :], out=a[j + 1 :, j])
        for i in range(6):
            np.multiply(a[i:, i], inverse_pivots[i:], out=products[i:])
            np.einsum("pn,pjn->jn", products[i:], a[i:, : i + 1], out=result[i, : i + 1])
            result[:i, i] = result[i, :i]
        np.copyto(out.reshape(m, 36), memory[36:72, :m].T)
        if rows.dtype.kind == "c":
            np.sqrt(_square(rows) * _square(out), out=bound)
        else:
            np.multiply(trace, np.einsum("in->n", memory[36:72:7, :m]), out=bound)
        # A NaN fails the comparison.
        bound[~(np.real(pivots) > 0.0).all(axis=0)] = np.inf
