"""Inverting, contracting, reading and writing value objects."""

from typing import Any, Final

import numpy as np
from numpy.typing import NDArray

import fourthrank as fr

from .compiled import compiled
from .harness import Case, Work

Array = NDArray[Any]

VOIGT: Final = fr.Notation.voigt(fr.Ordering("11 22 33 23 13 12"))
MANDEL: Final = fr.Notation.mandel(fr.Ordering("11 22 33 23 13 12"))


def stiffnesses(n: int, rng: np.random.Generator) -> fr.Stiffness:
    """Return n positive definite stiffnesses."""
    roots = rng.standard_normal((n, 6, 6))
    return fr.Stiffness.from_matrix(roots @ roots.swapaxes(-1, -2) + 3.0 * np.eye(6), MANDEL)


@compiled
def _invert(matrices: Array) -> Array:
    """Return inverses by six sweeps over the lower triangle."""
    out = np.empty_like(matrices)
    for n in range(len(matrices)):
        a = matrices[n].copy()
        for k in range(6):
            pivot = 1.0 / a[k, k]
            for i in range(6):
                if i != k:
                    factor = a[i, k] * pivot
                    for j in range(i + 1):
                        if j != k:
                            a[i, j] -= factor * a[k, j]
            for i in range(6):
                for j in range(i):
                    a[j, i] = a[i, j]
            for i in range(6):
                if i != k:
                    a[i, k] *= pivot
                    a[k, i] = a[i, k]
            a[k, k] = -pivot
        out[n] = -a
    return out


@compiled
def _contract(matrices: Array, vectors: Array) -> Array:
    out = np.empty((len(matrices), 6))
    for n in range(len(matrices)):
        for i in range(6):
            total = 0.0
            for j in range(6):
                total += matrices[n, i, j] * vectors[n, j]
            out[n, i] = total
    return out


def _inverse(n: int, rng: np.random.Generator) -> Work:
    stiffness = stiffnesses(n, rng)
    held = stiffness.matrix(MANDEL)
    return Work(
        lambda: stiffness.inverse(),
        plain={"by hand": lambda: np.linalg.inv(held)},
        compiled=lambda: _invert(held),
        moved=8 * 72 * n,
        read={"ours": lambda S: S.matrix(MANDEL)},
    )


def _apply(n: int, rng: np.random.Generator) -> Work:
    stiffness = stiffnesses(n, rng)
    strain = fr.Strain.from_vector(rng.standard_normal((n, 6)), MANDEL)
    held, vectors = stiffness.matrix(MANDEL), strain.vector(MANDEL)
    plain = {"by hand": lambda: (held @ vectors[..., None])[..., 0]}
    if n <= 100_000:
        full, tensors = stiffness.tensor(), strain.tensor()
        plain["einsum"] = lambda: np.einsum("nijkl,nkl->nij", full, tensors)
    return Work(
        lambda: stiffness @ strain,
        plain=plain,
        compiled=lambda: _contract(held, vectors),
        moved=8 * 48 * n,
        read={
            "ours": lambda sigma: sigma.vector(MANDEL),
            "einsum": lambda tensor: MANDEL.pack_stress(np.asarray(tensor, np.float64)),
        },
    )


def _work(n: int, rng: np.random.Generator) -> Work:
    stress = fr.Stress.from_vector(rng.standard_normal((n, 6)), MANDEL)
    strain = fr.Strain.from_vector(rng.standard_normal((n, 6)), MANDEL)
    sigma, eps = stress.tensor(), strain.tensor()
    return Work(
        lambda: stress.dot(strain), plain={"einsum": lambda: np.einsum("nij,nij->n", sigma, eps)}, moved=8 * 13 * n
    )


def _read(n: int, rng: np.random.Generator) -> Work:
    matrices = stiffnesses(n, rng).matrix(VOIGT)
    return Work(
        lambda: fr.Stiffness.from_matrix(matrices, VOIGT),
        unchecked=lambda: fr.Stiffness.from_matrix(matrices, VOIGT, check=False),
        moved=8 * 72 * n,
        read={"ours": lambda C: C.matrix(VOIGT), "unchecked": lambda C: C.matrix(VOIGT)},
    )


CASES: Final = [
    Case("invert positive definite stiffnesses", _inverse, {"by hand": 2.2}, {"compiled": 1.5}),
    Case("stress of a strain, each with its own stiffness", _apply),
    Case("double contraction of stress and strain", _work),
    Case("read stiffness matrices (Voigt), checked", _read),
]
