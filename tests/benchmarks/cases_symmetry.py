"""Projecting on symmetry classes, and finding axes."""

from collections.abc import Callable
from typing import Any, Final

import numpy as np
from numpy.typing import NDArray

import fourthrank as fr
from fourthrank import rotation, symmetry

from .cases_tensors import MANDEL, stiffnesses
from .compiled import compiled
from .harness import Call, Case, Work

Array = NDArray[Any]

EINSUM_LIMIT: Final = 1_000
BY_HAND_LIMIT: Final = 100_000
"""Beyond these, averages over a group take minutes."""
SEARCH_SIZES: Final = (1, 10, 1_000)


@compiled
def _project(matrices: Array, basis: Array) -> Array:
    out = np.zeros_like(matrices)
    for n in range(len(matrices)):
        for k in range(len(basis)):
            total = 0.0
            for i in range(6):
                for j in range(6):
                    total += matrices[n, i, j] * basis[k, i, j]
            for i in range(6):
                for j in range(6):
                    out[n, i, j] += total * basis[k, i, j]
    return out


def _average(matrices: Array, group: Array) -> Array:
    """Return the mean over a group, one turn after another, in the orthogonal 6x6 form."""
    total = np.zeros_like(matrices)
    for k in group:
        total += k @ matrices @ k.T
    return total / len(group)


def _average_tensors(full: Array, rotations: Array) -> Array:
    """Return the mean over a group of the full tensors."""
    total = np.zeros_like(full)
    for r in rotations:
        total += np.einsum("ip,jq,kr,ls,npqrs->nijkl", r, r, r, r, full, optimize=True)
    return total / len(rotations)


def _projection(s: symmetry.Symmetry, rotations: Array) -> Callable[[int, np.random.Generator], Work]:
    """Return the setting up of a projection that equals the average over `rotations`."""

    def make(n: int, rng: np.random.Generator) -> Work:
        C = stiffnesses(n, rng)
        held, basis = C.matrix(MANDEL), np.array(s.basis)
        group = rotation.mandel_matrix(rotations, MANDEL.ordering)
        plain: dict[str, Call] = {}
        if n <= BY_HAND_LIMIT:
            plain["by hand"] = lambda: _average(held, group)
        if n <= EINSUM_LIMIT:
            full = C.tensor()
            plain["einsum, optimized"] = lambda: _average_tensors(full, rotations)
        return Work(
            lambda: s.project(C),
            plain=plain,
            compiled=lambda: _project(held, basis),
            moved=8 * 72 * n,
            read={
                "ours": lambda P: P.matrix(MANDEL),
                "einsum, optimized": lambda full: MANDEL.pack_stiffness(np.asarray(full), check=False),
            },
        )

    return make


def _axes(s: symmetry.Symmetry) -> Callable[[int, np.random.Generator], Work]:
    """Return the setting up of a search for tensors of a class with 1 % noise, turned at random."""

    def make(n: int, rng: np.random.Generator) -> Work:
        exact = s.project(stiffnesses(n, rng))
        errors = fr.Stiffness.from_matrix(rng.standard_normal((n, 6, 6)), MANDEL, symmetrize=True)
        C = (exact + errors.scaled(0.01 * exact.norm() / errors.norm())).rotate(rotation.random(n, rng))
        return Work(
            lambda: symmetry.find_axes(C, s),
            plain={"by hand": lambda: _search_by_hand(C, s)} if n == 1 else {},
            moved=8 * 72 * n,
            read={"ours": lambda fit: fit.distance},
            tolerance=1e-5,
        )

    return make


def _search_by_hand(C: fr.Stiffness, s: symmetry.Symmetry) -> Array:
    """Return the distance that a general optimiser finds from 30 random starts, with differences for derivatives."""
    from scipy.optimize import minimize

    held, basis = C.matrix(MANDEL)[0], s.basis.reshape(-1, 36)

    def square(vector: Array) -> float:
        k = rotation.mandel_matrix(rotation.from_rotation_vector(vector), MANDEL.ordering)
        row = (k @ held @ k.T).reshape(36)
        rest = row - (row @ basis.T) @ basis
        return float(rest @ rest)

    starts = np.random.default_rng(0).uniform(-np.pi, np.pi, (30, 3))
    best = min(float(minimize(square, start).fun) for start in starts)
    return np.sqrt([best]) / C.norm()


_HEXAGONAL_GROUP: Final = symmetry.from_generators(
    rotation.about_axis([0, 0, 1], 60, degrees=True), rotation.about_axis([1, 0, 0], 180, degrees=True)
).rotations

CASES: Final = [
    Case(
        "project on cubic symmetry",
        _projection(symmetry.cubic(), symmetry.cubic().rotations),
        {"by hand": 60.0},
        {"compiled": 0.8},
    ),
    Case(
        "project on transverse isotropy",
        _projection(symmetry.transversely_isotropic(axis=3), _HEXAGONAL_GROUP),
        {"by hand": 30.0},
        {"compiled": 0.8},
    ),
    Case(
        "project on orthotropy",
        _projection(symmetry.orthotropic(), symmetry.orthotropic().rotations),
        {"by hand": 10.0},
        {"compiled": 0.8},
    ),
    Case("find the axes of orthotropic tensors", _axes(symmetry.orthotropic()), sizes=SEARCH_SIZES),
    Case("find the axes of cubic tensors", _axes(symmetry.cubic()), sizes=SEARCH_SIZES),
    Case(
        "find the axis of monoclinic tensors",
        _axes(symmetry.monoclinic(axis=3)),
        sizes=SEARCH_SIZES,
    ),
]
