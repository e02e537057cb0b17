"""Projection on the tensors that have a symmetry: Euclidean and log-Euclidean, with distances and shares.

Kernels on arrays in the working form; the methods of `Symmetry` are their public side.
"""

from typing import Literal, TypeAlias

import numpy as np
from numpy.typing import NDArray

from .._arrays import Inexact, blocks, member_text
from .._mandel import symmetric_part
from .._turning import SQUARE, UPPER
from ..errors import AdmissibilityError, DataError

__all__ = ["Metric"]

Metric: TypeAlias = Literal["euclidean", "log_euclidean"]


def project(matrices: Inexact, basis: NDArray[np.float64], metric: Metric, name: str) -> Inexact:
    """Return the projections of (..., 6, 6) on the span of an orthonormal basis (k, 6, 6)."""
    _check_metric(metric)
    if metric == "euclidean":
        return project_euclidean(matrices, basis)
    return exponential(project_euclidean(logarithm(matrices, name), basis))


def distances(
    matrices: Inexact, basis: NDArray[np.float64], metric: Metric, relative: bool, name: str
) -> NDArray[np.float64]:
    """Return the distances of (..., 6, 6) from the span of a basis, in a metric."""
    _check_metric(metric)
    if metric == "log_euclidean":
        matrices = logarithm(matrices, name)
    rest = norms(matrices - project_euclidean(matrices, basis))
    return ratio(rest, norms(matrices)) if relative else rest


def shares(matrices: Inexact, basis: NDArray[np.float64]) -> NDArray[np.float64]:
    """Return the fractions of the squared norms that lie in the span of a basis; 1 for a zero tensor."""
    whole = norms(matrices)
    kept = norms(project_euclidean(matrices, basis))
    return np.where(whole > 0.0, ratio(kept, whole), 1.0) ** 2


def project_euclidean(matrices: Inexact, basis: NDArray[np.float64]) -> Inexact:
    """Return sum_k (C : B_k) B_k: two matrix products, whatever the group; exactly symmetric."""
    result = np.empty_like(matrices, order="C")
    rows, out = matrices.reshape(-1, 36), result.reshape(-1, 36)
    directions = basis.reshape(-1, 36)
    columns, upper = directions.T, directions[:, UPPER]
    for part in blocks(len(rows), 36):
        # Only the upper triangle is formed: a matrix product may round equal columns differently.
        np.take((rows[part] @ columns) @ upper, SQUARE, axis=1, out=out[part], mode="clip")
    return result


def project_map(matrices: Inexact, basis: NDArray[np.float64]) -> Inexact:
    """Return the projections of linear maps (..., 6, 6), symmetric or not, on the span of an orthonormal basis."""
    directions = basis.reshape(-1, 36)
    projected: Inexact = (matrices.reshape(-1, 36) @ directions.T) @ directions
    return projected.reshape(matrices.shape)


def logarithm(matrices: Inexact, name: str) -> NDArray[np.float64]:
    """Return the matrix logarithms of positive definite matrices."""
    if matrices.dtype.kind == "c":
        raise DataError(f"the log-Euclidean metric needs real tensors, the {name} is complex: take .real first")
    values, vectors = np.linalg.eigh(matrices)
    smallest = values[..., 0]
    bad = ~(smallest > 0.0)
    if bad.any():
        index = np.unravel_index(int(bad.argmax()), bad.shape)
        raise AdmissibilityError(
            f"{name}{member_text([int(i) for i in index])} is not positive definite and has no logarithm: its "
            f"smallest eigenvalue is {smallest[index]:.6g}, its largest {values[index][-1]:.6g}; correct the data, or "
            "use metric='euclidean', which needs no logarithm"
        )
    return _compose(np.log(values), vectors)


def exponential(matrices: NDArray[np.float64]) -> NDArray[np.float64]:
    """Return the matrix exponentials of symmetric matrices."""
    values, vectors = np.linalg.eigh(matrices)
    return _compose(np.exp(values), vectors)


def _compose(values: NDArray[np.float64], vectors: NDArray[np.float64]) -> NDArray[np.float64]:
    return np.asarray(symmetric_part((vectors * values[..., None, :]) @ vectors.swapaxes(-1, -2)))


def norms(matrices: Inexact) -> NDArray[np.float64]:
    return np.asarray(np.linalg.norm(matrices, axis=(-2, -1)))


def ratio(part: NDArray[np.float64], whole: NDArray[np.float64]) -> NDArray[np.float64]:
    """Return part / whole; zero where both are zero."""
    return np.divide(part, whole, out=np.zeros_like(whole), where=whole > 0.0)


def _check_metric(metric: str) -> None:
    if metric not in ("euclidean", "log_euclidean"):
        raise DataError(f"metric must be 'euclidean' or 'log_euclidean', got {metric!r}")
