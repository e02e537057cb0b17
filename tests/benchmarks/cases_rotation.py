"""Turning tensors, and the 6x6 matrices of rotations."""

from typing import Any, Final

import numpy as np
from numpy.typing import NDArray

import fourthrank as fr
from fourthrank import rotation

from .cases_notation import matrices
from .compiled import compiled
from .harness import Case, Work

Array = NDArray[Any]

VOIGT: Final = fr.Notation.voigt(fr.Ordering("11 22 33 23 13 12"))
MANDEL: Final = fr.Notation.mandel(fr.Ordering("11 22 33 23 13 12"))
EINSUM_LIMIT: Final = 100_000
"""Beyond this the code on full tensors takes minutes and several GB."""


@compiled
def _fill(r: Array, k: Array) -> None:
    root = 2.0**0.5
    for i in range(3):
        a, b = (1, 2) if i == 0 else (0, 2) if i == 1 else (0, 1)
        for j in range(3):
            c, d = (1, 2) if j == 0 else (0, 2) if j == 1 else (0, 1)
            k[i, j] = r[i, j] * r[i, j]
            k[i, j + 3] = root * r[i, c] * r[i, d]
            k[i + 3, j] = root * r[a, j] * r[b, j]
            k[i + 3, j + 3] = r[a, c] * r[b, d] + r[a, d] * r[b, c]


@compiled
def _sandwich(k: Array, c: Array, product: Array, out: Array) -> None:
    for i in range(6):
        for p in range(6):
            total = 0.0
            for q in range(6):
                total += k[i, q] * c[q, p]
            product[i, p] = total
    for i in range(6):
        for j in range(i + 1):
            total = 0.0
            for p in range(6):
                total += product[i, p] * k[j, p]
            out[i, j] = total
            out[j, i] = total


@compiled
def _rotation_matrices(rotations: Array) -> Array:
    out = np.empty((len(rotations), 6, 6))
    for n in range(len(rotations)):
        _fill(rotations[n], out[n])
    return out


@compiled
def _turn(tensors: Array, rotations: Array) -> Array:
    count = max(len(tensors), len(rotations))
    out = np.empty((count, 6, 6))
    k = np.empty((6, 6))
    product = np.empty((6, 6))
    _fill(rotations[0], k)
    for n in range(count):
        if len(rotations) > 1:
            _fill(rotations[n], k)
        _sandwich(k, tensors[n] if len(tensors) > 1 else tensors[0], product, out[n])
    return out


def _make(tensors: int, rotations: int, rng: np.random.Generator) -> Work:
    """Return the work of turning so many tensors by so many rotations; 0 stands for one without a batch axis."""
    stiffness = fr.Stiffness.from_matrix(matrices(max(tensors, 1), rng), MANDEL)
    turns = rotation.random(max(rotations, 1), rng)
    held, one = stiffness.matrix(MANDEL), turns
    c, r = ("n", stiffness) if tensors else ("", stiffness[0]), ("n", turns) if rotations else ("", turns[0])
    count = max(tensors, rotations, 1)
    plain = {}
    if count <= EINSUM_LIMIT:
        full = c[1].tensor()
        terms = ",".join(f"{r[0]}{pair}" for pair in ("ip", "jq", "kr", "ls"))
        subscripts = f"{terms},{c[0]}pqrs->nijkl" if c[0] or r[0] else f"{terms},pqrs->ijkl"
        plain = {
            "einsum": lambda: np.einsum(subscripts, r[1], r[1], r[1], r[1], full),
            "einsum, optimized": lambda: np.einsum(subscripts, r[1], r[1], r[1], r[1], full, optimize=True),
        }

    def pack(tensor: Any) -> NDArray[Any]:
        return MANDEL.pack_stiffness(np.asarray(tensor, np.float64), check=False)

    return Work(
        lambda: c[1].rotate(r[1]),
        unchecked=lambda: c[1].rotate(r[1], check=False),
        plain=plain,
        compiled=lambda: _turn(held, one),
        moved=8 * ((36 * tensors) + 9 * rotations + 36 * count),
        read={
            "ours": lambda turned: turned.matrix(MANDEL).reshape(-1, 6, 6),
            "unchecked": lambda turned: turned.matrix(MANDEL).reshape(-1, 6, 6),
            "einsum": lambda tensor: pack(tensor).reshape(-1, 6, 6),
            "einsum, optimized": lambda tensor: pack(tensor).reshape(-1, 6, 6),
        },
    )


def _bond_by_hand(r: NDArray[np.float64]) -> NDArray[np.float64]:
    """Return Bond's matrix of stress, formula by formula."""
    out = np.empty((len(r), 6, 6))
    others = ((1, 2), (0, 2), (0, 1))
    for i in range(3):
        a, b = others[i]
        for j in range(3):
            c, d = others[j]
            out[:, i, j] = r[:, i, j] ** 2
            out[:, i, j + 3] = 2.0 * r[:, i, c] * r[:, i, d]
            out[:, i + 3, j] = r[:, a, j] * r[:, b, j]
            out[:, i + 3, j + 3] = r[:, a, c] * r[:, b, d] + r[:, a, d] * r[:, b, c]
    return out


def _stress_matrix(n: int, rng: np.random.Generator) -> Work:
    turns = rotation.random(n, rng)
    translator = fr.Translator(MANDEL, VOIGT)
    return Work(
        lambda: rotation.stress_matrix(turns, VOIGT),
        plain={"by hand": lambda: _bond_by_hand(turns)},
        compiled=lambda: _rotation_matrices(turns),
        moved=8 * 45 * n,
        read={"compiled": lambda k: translator.map(k, rows="stress", columns="stress")},
    )


def _turn_stress(n: int, rng: np.random.Generator) -> Work:
    vectors = rng.standard_normal((n, 6))
    stress = fr.Stress.from_vector(vectors, MANDEL)
    tensors, turns = stress.tensor(), rotation.random(n, rng)
    return Work(
        lambda: stress.rotate(turns),
        unchecked=lambda: stress.rotate(turns, check=False),
        plain={
            "einsum": lambda: np.einsum("nik,njl,nkl->nij", turns, turns, tensors),
            "by hand": lambda: turns @ tensors @ turns.swapaxes(-1, -2),
        },
        moved=8 * 21 * n,
        read={"ours": lambda s: s.tensor(), "unchecked": lambda s: s.tensor()},
    )


CASES: Final = [
    Case(
        "turn one stiffness by many rotations",
        lambda n, rng: _make(0, n, rng),
        {"einsum": 150.0, "einsum, optimized": 20.0},
        {"compiled": 1.5},
    ),
    Case(
        "turn many stiffnesses by one rotation",
        lambda n, rng: _make(n, 0, rng),
        {"einsum": 300.0, "einsum, optimized": 50.0},
        {"compiled": 0.8},
    ),
    Case(
        "turn many stiffnesses, each by its own",
        lambda n, rng: _make(n, n, rng),
        {"einsum": 80.0, "einsum, optimized": 12.0},
        {"compiled": 2.2},
    ),
    Case("6x6 (Bond) matrices of rotations", _stress_matrix, {"by hand": 1.8}, {"compiled": 2.5}),
    Case("turn many stresses, each by its own", _turn_stress),
]
