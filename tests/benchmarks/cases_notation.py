"""Packing, unpacking and translating arrays between full tensors and notations."""

from typing import Any, Final

import numpy as np
from numpy.typing import NDArray

import fourthrank as fr

from .compiled import compiled
from .harness import Case, Work

Array = NDArray[Any]

SOURCE: Final = fr.Notation.voigt(fr.Ordering("11 22 33 12 13 23"))
TARGET: Final = fr.Notation.mandel(fr.Ordering("11 22 33 23 13 12"))
VOIGT: Final = fr.Notation.voigt(fr.Ordering("11 22 33 23 13 12"))
PAIRS: Final = VOIGT.ordering.pairs
ROWS: Final = np.array([i for i, _ in PAIRS])
COLUMNS: Final = np.array([j for _, j in PAIRS])
WEIGHTS: Final = np.array([1.0, 1.0, 1.0, 2.0, 2.0, 2.0])
ORDER: Final = SOURCE.ordering.permutation_to(TARGET.ordering)
ROOT: Final = np.array([1.0, 1.0, 1.0, *[2.0**0.5] * 3])
FACTORS: Final = np.outer(ROOT, ROOT)
PASSAGE: Final = np.diag(ROOT)[:, np.argsort(ORDER)]


def symmetric(n: int, rng: np.random.Generator) -> NDArray[np.float64]:
    """Return n symmetric 3x3 tensors."""
    tensors = rng.standard_normal((n, 3, 3))
    return tensors + tensors.swapaxes(-1, -2)


def matrices(n: int, rng: np.random.Generator) -> NDArray[np.float64]:
    """Return n symmetric 6x6 matrices."""
    found = rng.standard_normal((n, 6, 6))
    return found + found.swapaxes(-1, -2)


@compiled
def _pack_vectors(tensors: Array, rows: Array, columns: Array, weights: Array) -> Array:
    out = np.empty((len(tensors), 6))
    for n in range(len(tensors)):
        for k in range(6):
            out[n, k] = tensors[n, rows[k], columns[k]] * weights[k]
    return out


@compiled
def _unpack_vectors(vectors: Array, rows: Array, columns: Array, weights: Array) -> Array:
    out = np.empty((len(vectors), 3, 3))
    for n in range(len(vectors)):
        for k in range(6):
            value = vectors[n, k] / weights[k]
            out[n, rows[k], columns[k]] = value
            out[n, columns[k], rows[k]] = value
    return out


@compiled
def _pack_matrices(tensors: Array, rows: Array, columns: Array) -> Array:
    out = np.empty((len(tensors), 6, 6))
    for n in range(len(tensors)):
        for k in range(6):
            for m in range(6):
                out[n, k, m] = tensors[n, rows[k], columns[k], rows[m], columns[m]]
    return out


@compiled
def _unpack_matrices(matrices: Array, rows: Array, columns: Array) -> Array:
    out = np.empty((len(matrices), 3, 3, 3, 3))
    for n in range(len(matrices)):
        for k in range(6):
            for m in range(6):
                value = matrices[n, k, m]
                out[n, rows[k], columns[k], rows[m], columns[m]] = value
                out[n, columns[k], rows[k], rows[m], columns[m]] = value
                out[n, rows[k], columns[k], columns[m], rows[m]] = value
                out[n, columns[k], rows[k], columns[m], rows[m]] = value
    return out


@compiled
def _translate(matrices: Array, order: Array, factors: Array) -> Array:
    out = np.empty_like(matrices)
    for n in range(len(matrices)):
        for k in range(6):
            for m in range(6):
                out[n, k, m] = matrices[n, order[k], order[m]] * factors[k, m]
    return out


def _pack_strain(n: int, rng: np.random.Generator) -> Work:
    eps = symmetric(n, rng)
    return Work(
        lambda: VOIGT.pack_strain(eps),
        unchecked=lambda: VOIGT.pack_strain(eps, check=False),
        plain={"by hand": lambda: eps[:, ROWS, COLUMNS] * WEIGHTS},
        compiled=lambda: _pack_vectors(eps, ROWS, COLUMNS, WEIGHTS),
        moved=8 * 15 * n,
    )


def _unpack_by_hand(vectors: NDArray[np.float64]) -> NDArray[np.float64]:
    out = np.empty((len(vectors), 3, 3))
    scaled = vectors / WEIGHTS
    out[:, ROWS, COLUMNS] = scaled
    out[:, COLUMNS, ROWS] = scaled
    return out


def _unpack_strain(n: int, rng: np.random.Generator) -> Work:
    vectors = rng.standard_normal((n, 6))
    return Work(
        lambda: VOIGT.unpack_strain(vectors),
        unchecked=lambda: VOIGT.unpack_strain(vectors, check=False),
        plain={"by hand": lambda: _unpack_by_hand(vectors)},
        compiled=lambda: _unpack_vectors(vectors, ROWS, COLUMNS, WEIGHTS),
        moved=8 * 15 * n,
    )


def _pack_by_assignments(tensors: NDArray[np.float64]) -> NDArray[np.float64]:
    out = np.empty((len(tensors), 6, 6))
    for k, (i, j) in enumerate(PAIRS):
        for m, (p, q) in enumerate(PAIRS):
            out[:, k, m] = tensors[:, i, j, p, q]
    return out


def _unpack_by_assignments(matrices: NDArray[np.float64]) -> NDArray[np.float64]:
    out = np.empty((len(matrices), 3, 3, 3, 3))
    for k, (i, j) in enumerate(PAIRS):
        for m, (p, q) in enumerate(PAIRS):
            out[:, i, j, p, q] = out[:, j, i, p, q] = out[:, i, j, q, p] = out[:, j, i, q, p] = matrices[:, k, m]
    return out


def _pack_stiffness(n: int, rng: np.random.Generator) -> Work:
    tensors = VOIGT.unpack_stiffness(matrices(n, rng))
    return Work(
        lambda: VOIGT.pack_stiffness(tensors),
        unchecked=lambda: VOIGT.pack_stiffness(tensors, check=False),
        plain={"by hand": lambda: _pack_by_assignments(tensors)},
        compiled=lambda: _pack_matrices(tensors, ROWS, COLUMNS),
        moved=8 * 117 * n,
    )


def _unpack_stiffness(n: int, rng: np.random.Generator) -> Work:
    found = matrices(n, rng)
    return Work(
        lambda: VOIGT.unpack_stiffness(found),
        unchecked=lambda: VOIGT.unpack_stiffness(found, check=False),
        plain={"by hand": lambda: _unpack_by_assignments(found)},
        compiled=lambda: _unpack_matrices(found, ROWS, COLUMNS),
        moved=8 * 117 * n,
    )


def _translate_stiffness(n: int, rng: np.random.Generator) -> Work:
    found = matrices(n, rng)
    translator = fr.Translator(SOURCE, TARGET)
    return Work(
        lambda: translator.stiffness(found),
        unchecked=lambda: translator.stiffness(found, check=False),
        plain={
            "by hand": lambda: found[:, ORDER][:, :, ORDER] * FACTORS,
            "einsum": lambda: np.einsum("ai,nij,bj->nab", PASSAGE, found, PASSAGE),
            "einsum, optimized": lambda: np.einsum("ai,nij,bj->nab", PASSAGE, found, PASSAGE, optimize=True),
        },
        compiled=lambda: _translate(found, ORDER, FACTORS),
        moved=8 * 72 * n,
    )


def _translate_stress(n: int, rng: np.random.Generator) -> Work:
    vectors = rng.standard_normal((n, 6))
    translator = fr.Translator(SOURCE, TARGET)
    return Work(
        lambda: translator.stress(vectors),
        unchecked=lambda: translator.stress(vectors, check=False),
        plain={"by hand": lambda: vectors[:, ORDER] * ROOT},
        moved=8 * 12 * n,
    )


CASES: Final = [
    Case("pack strain, 3x3 to 6", _pack_strain, {"by hand": 1.0}, {"compiled": 3.0, "copy": 2.5}),
    Case("unpack strain, 6 to 3x3", _unpack_strain, {"by hand": 1.2}, {"compiled": 3.5}),
    Case("pack stiffness, 3x3x3x3 to 6x6", _pack_stiffness, {"by hand": 3.0}, {"compiled": 2.0, "copy": 1.5}),
    Case("unpack stiffness, 6x6 to 3x3x3x3", _unpack_stiffness, {"by hand": 2.5}, {"compiled": 2.0}),
    Case("translate stiffness, 6x6 to 6x6", _translate_stiffness, {"by hand": 2.5, "einsum": 15.0}, {"compiled": 4.0}),
    Case("translate stress, 6 to 6", _translate_stress),
]
