"""Turning batches of tensors in the working form.

Large batches go through in blocks with the components first and the items of the block last, so that every product of
two components is one long vector operation. The orthogonal 6x6 form takes 342 multiplications for each pair of tensor
and rotation, where the full tensors take tens of thousands.
"""

from collections.abc import Callable
from math import prod
from typing import Final

import numpy as np
from numpy.typing import NDArray

from ._arrays import BLOCK_ITEMS, Inexact, blocks
from ._gather import Gather
from ._scratch import scratch
from .ordering import VOIGT_ORDER

_ROOT: Final = np.sqrt(2.0)

# Where the plain products of small batches become slower than blocks, as measured.
_FEW_MATRICES: Final = 300
_FEW_PAIRS: Final = 250
_FEW_ROTATIONS: Final = 120


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
_UPPER_ROWS, _UPPER_COLUMNS = np.triu_indices(6)
UPPER: Final = 6 * _UPPER_ROWS + _UPPER_COLUMNS
_DIAGONAL: Final = _UPPER_ROWS == _UPPER_COLUMNS
_FACTORS: Final = [
    6 * own + other[:, None]
    for own, other in (
        (_UPPER_ROWS, _UPPER_ROWS),
        (_UPPER_COLUMNS, _UPPER_COLUMNS),
        (_UPPER_ROWS, _UPPER_COLUMNS),
        (_UPPER_COLUMNS, _UPPER_ROWS),
    )
]


def _square_places() -> NDArray[np.intp]:
    places = np.empty((6, 6), np.intp)
    places[_UPPER_ROWS, _UPPER_COLUMNS] = places[_UPPER_COLUMNS, _UPPER_ROWS] = np.arange(21)
    return places.reshape(36)


SQUARE: Final = _square_places()


def symmetric_part(matrix: Inexact) -> Inexact:
    """Return (M + M^T) / 2, exactly symmetric, and M itself bit for bit where M is symmetric."""
    result: Inexact = (matrix + matrix.swapaxes(-1, -2)) * 0.5
    return result


def rotation_matrices(rotations: Inexact, gather: Gather | None = None) -> Inexact:
    """Return the orthogonal 6x6 matrices K of rotations R: v' = K v is sigma'_ij = R_ik R_jl sigma_kl.

    With `gather` they are written in another notation, on the way.
    """
    batch = rotations.shape[:-2]
    rows = rotations.reshape(-1, 9)
    if len(rows) < _FEW_ROTATIONS:
        products = (rows[:, :, None] * rows[:, None, :]).reshape(-1, 81)
        few: Inexact = (products @ _FOLD).reshape(*batch, 6, 6)
        return few if gather is None else gather(few)
    result = np.empty((*batch, 6, 6))
    flat = result.reshape(-1, 36)
    with scratch() as memory:
        for part in blocks(len(rows), 36):
            turns, out = rows[part], flat[part]
            k = memory[:36, : len(turns)]
            _fill_rotation(turns, k, memory[36:, : len(turns)])
            if gather is None:
                np.copyto(out, k.T)
            else:
                gather.write_components(k, out)
    return result


def _rotation_matrix(rotation: NDArray[np.float64]) -> NDArray[np.float64]:
    """Return the 6x6 matrix of a single rotation."""
    row = rotation.reshape(9, 1)
    matrix: NDArray[np.float64] = (row * row.T).reshape(81).dot(_FOLD).reshape(6, 6)
    return matrix


def map_vectors(matrix: Inexact, vectors: Inexact) -> Inexact:
    """Return M_IJ v_J for one matrix and any batch of vectors."""
    # dot starts faster than matmul, and is fast in two dimensions only.
    if vectors.ndim <= 2:
        few: Inexact = vectors.dot(matrix.T)
        return few
    many: Inexact = vectors.reshape(-1, 6).dot(matrix.T)
    return many.reshape(vectors.shape)


def rotate_matrix(matrix: Inexact, rotation: Inexact) -> Inexact:
    """Return K C K^T for symmetric matrices C and given 6x6 rotations K, exactly symmetric."""
    return symmetric_part(rotation @ matrix @ rotation.swapaxes(-1, -2))


def turn_matrices(matrix: Inexact, rotations: NDArray[np.float64]) -> Inexact:
    """Return the symmetric 6x6 matrices of turned tensors, exactly symmetric; batches broadcast."""
    if rotations.ndim == 2 and matrix.ndim == 2:  # one by one, with as few calls as can be
        k = _rotation_matrix(rotations)
        product: Inexact = k.dot(matrix).dot(k.T)  # for one product, dot starts faster than matmul
        return (product + product.T) * 0.5
    batch = np.broadcast_shapes(matrix.shape[:-2], rotations.shape[:-2])
    count = prod(batch)
    if count < (_FEW_MATRICES if rotations.size == 9 else _FEW_PAIRS):
        return rotate_matrix(matrix, rotation_matrices(rotations))
    result = np.empty((*batch, 6, 6), matrix.dtype)
    # The real and the imaginary part turn on their own; both are views.
    for source, target in real_parts(matrix, result):
        if rotations.size == 9:
            turning = turning_matrix(_rotation_matrix(rotations))
            turn_by_one(source.reshape(-1, 36), turning, target.reshape(-1, 36))
        else:
            _turn_by_many(source, rotations, target.reshape(-1, 36), batch)
    return result


def turn_vectors(vector: Inexact, rotations: NDArray[np.float64]) -> Inexact:
    """Return the vectors of turned second-order tensors; batches broadcast."""
    if rotations.size == 9:
        turned = map_vectors(_rotation_matrix(rotations), vector)
        return (
            turned if rotations.ndim == 2 else turned.reshape((1,) * (rotations.ndim - 1 - turned.ndim) + turned.shape)
        )
    batch = np.broadcast_shapes(vector.shape[:-1], rotations.shape[:-2])
    count = prod(batch)
    if count < _FEW_ROTATIONS:
        few: Inexact = (rotation_matrices(rotations) @ vector[..., None])[..., 0]
        return few
    result = np.empty((*batch, 6), vector.dtype)
    for source, target in real_parts(vector, result):
        flat, read = target.reshape(-1, 6), _reader(source, 6, batch)
        turns = _reader(rotations, 9, batch)
        with scratch() as memory:
            for part in blocks(count, 36):
                m = part.stop - part.start
                k, old, new = memory[:36, :m], memory[36:42, :m], memory[42:48, :m]
                _fill_rotation(turns(part), k, memory[48:, :m])
                np.copyto(old, read(part).T)
                np.einsum("ijn,jn->in", k.reshape(6, 6, m), old, out=new)
                np.copyto(flat[part], new.T)
    return result


def turning_matrix(k: Inexact) -> Inexact:
    """Return the (21, 21) matrix that turns the upper triangles (row vectors) of symmetric matrices C to K C K^T.

    One rotation for many tensors is a single matrix product then, and the result is exactly symmetric.
    """
    # K_ip K_jq + K_iq K_jp in column (i, j) and row (p, q); the two are the same product where p = q.
    ip, jq, iq, jp = (k.reshape(36).take(places) for places in _FACTORS)
    turning: Inexact = ip * jq + iq * jp
    turning[_DIAGONAL] *= 0.5
    return turning


def turn_by_one(
    rows: Inexact,
    turning: Inexact,
    out: Inexact,
    upper: NDArray[np.intp] = UPPER,
    square: NDArray[np.intp] = SQUARE,
) -> None:
    """Write the turned matrices of symmetric ones, both with rows of 36 components; real arrays only.

    `upper` says where the 21 constants stand in the rows, and `square` where those of the result go.
    """
    with scratch() as memory:
        pool = memory.reshape(-1).view(rows.dtype)[: 42 * BLOCK_ITEMS].reshape(2, BLOCK_ITEMS, 21)
        for part in blocks(len(rows), 36):
            old, new = pool[:, : part.stop - part.start]
            # mode="clip" lets take write straight into `out`; the indices are in range by construction.
            rows[part].take(upper, axis=1, mode="clip", out=old)
            np.matmul(old, turning, out=new)
            if out.flags.c_contiguous:
                new.take(square, axis=1, mode="clip", out=out[part])
            else:
                out[part] = new[:, square]


def real_parts(source: Inexact, target: Inexact) -> list[tuple[Inexact, Inexact]]:
    """Return what a real linear map has to be applied to: the arrays, or views of their real and imaginary parts."""
    if source.dtype.kind != "c":
        return [(source, target)]
    return [(np.real(source), np.real(target)), (np.imag(source), np.imag(target))]


def _turn_by_many(matrix: Inexact, rotations: NDArray[np.float64], out: Inexact, batch: tuple[int, ...]) -> None:
    """Write the matrices turned by many rotations into rows of 36 components."""
    read, turns = _reader(matrix, 36, batch), _reader(rotations, 9, batch)
    single = matrix.size == 36
    with scratch() as memory:
        for part in blocks(len(out), 36):
            m = part.stop - part.start
            rotation, old, new, vector = (memory[first:last, :m] for first, last in _PARTS)
            # `new` is free until the products are made.
            _fill_rotation(turns(part), rotation, new)
            k, c, turned = rotation.reshape(6, 6, m), old.reshape(6, 6, m), new.reshape(6, 6, m)
            if single:
                np.matmul(matrix.reshape(6, 6), k, out=c)
            else:
                np.copyto(old, read(part).T)
            for i in range(6):
                product = c[i] if single else np.einsum("qn,qpn->pn", k[i], c, out=vector)
                np.einsum("pn,jpn->jn", product, k[: i + 1], out=turned[i, : i + 1])
                turned[:i, i] = turned[i, :i]
            np.copyto(out[part], new.T)


_PARTS: Final = ((0, 36), (36, 72), (72, 108), (108, 114))


def _fill_rotation(rows: NDArray[np.float64], k: NDArray[np.float64], spare: NDArray[np.float64]) -> None:
    """Write the 6x6 matrices of rotations, rows of 9, as 36 components; `spare` holds 34 or more."""
    m = len(rows)
    r, cross = spare[:25].reshape(5, 5, m), spare[25:34].reshape(3, 3, m)
    # With the first two rows and columns repeated, the index pairs 23 31 12 are two slices.
    np.copyto(r[:3, :3], rows.reshape(m, 3, 3).transpose(1, 2, 0))
    r[:3, 3:], r[3:] = r[:3, :2], r[:2]
    full = k.reshape(6, 6, m)
    np.multiply(r[:3, :3], r[:3, :3], out=full[:3, :3])
    np.multiply(r[:3, 1:4], r[:3, 2:5], out=full[:3, 3:])
    np.multiply(r[1:4, :3], r[2:5, :3], out=full[3:, :3])
    full[:3, 3:] *= _ROOT
    full[3:, :3] *= _ROOT
    np.multiply(r[1:4, 1:4], r[2:5, 2:5], out=full[3:, 3:])
    np.multiply(r[1:4, 2:5], r[2:5, 1:4], out=cross)
    full[3:, 3:] += cross


def _reader(array: Inexact, width: int, batch: tuple[int, ...]) -> Callable[[slice], Inexact]:
    """Return a function that gives the rows (m, width) of an array for some members of a broadcast batch."""
    own = array.shape[: array.ndim - (1 if width == 6 else 2)]
    rows = array.reshape(-1, width)
    if len(rows) == prod(batch):
        return lambda part: rows[part]
    # One index for each member, and not a copy of the broadcast array.
    place = np.broadcast_to(np.arange(len(rows)).reshape(own), batch).reshape(-1)
    return lambda part: rows[place[part]]
