"""Hypothesis strategies that several test files share: orderings, notations, rotations, batches, arrays.

Arrays are made by numpy from a drawn seed: fast, dense in every component, and repeatable from the seed that a failure
shows.
"""

import math
from itertools import permutations
from typing import Any, Final

import numpy as np
from hypothesis import strategies as st
from hypothesis.extra import numpy as hnp
from numpy.typing import NDArray

from fourthrank import Notation, Ordering, Stiffness
from fourthrank.ordering import VOIGT_ORDER

__all__ = [
    "ALL_ORDERINGS",
    "DTYPES",
    "LAYOUTS",
    "batch_shapes",
    "broadcastable_batches",
    "complete_orderings",
    "generators",
    "laid_out",
    "notations",
    "partial_orderings",
    "random_array",
    "random_stiffness",
    "rotations",
    "stiffness_tensors",
    "symmetric_tensors",
    "well_conditioned",
    "work_conjugate_notations",
]

PAIRS: Final = ((0, 0), (1, 1), (2, 2), (1, 2), (0, 2), (0, 1))
ALL_ORDERINGS: Final = tuple(Ordering(pairs) for pairs in permutations(PAIRS))
"""Every complete ordering, 720 of them."""

DTYPES: Final[tuple[type[np.inexact[Any]], ...]] = (
    np.float32, np.float64, np.longdouble, np.complex64, np.complex128, np.clongdouble,
)  # fmt: skip
"""The kinds of number that raw arrays keep."""

LAYOUTS: Final = ("plain", "strided", "reversed", "fortran", "read-only")
"""How the elements of an array may lie in memory; see `laid_out`."""

_PARTIAL: Final = tuple(
    Ordering(pairs)
    for i, j in ((1, 2), (0, 2), (0, 1))
    for chosen in (((i, i), (j, j), (i, j)), (*PAIRS[:3], (i, j)))
    for pairs in permutations(chosen)
)

complete_orderings: Final = st.sampled_from(ALL_ORDERINGS)
partial_orderings: Final = st.sampled_from(_PARTIAL)
generators: Final = st.integers(0, 2**32 - 1).map(np.random.default_rng)


@st.composite
def notations(
    draw: st.DrawFn, orderings: st.SearchStrategy[Ordering] = complete_orderings, *, powers_of_two: bool = False
) -> Notation:
    """Draw notations of every family; with `powers_of_two`, only those whose passage to tensors is exact."""
    ordering, compression = draw(orderings), draw(st.booleans())
    families = ["voigt", "tensorial", "custom"] if powers_of_two else ["voigt", "tensorial", "mandel", "custom"]
    family = draw(st.sampled_from(families))
    if family == "custom":
        weights = st.sampled_from([0.25, 0.5, 1.0, 2.0, 4.0]) if powers_of_two else st.floats(0.1, 10.0)
        return Notation(
            ordering, stress_shear=draw(weights), strain_shear=draw(weights), compression_positive=compression
        )
    make = {"voigt": Notation.voigt, "tensorial": Notation.tensorial, "mandel": Notation.mandel}[family]
    return make(ordering, compression_positive=compression)


@st.composite
def work_conjugate_notations(draw: st.DrawFn, orderings: st.SearchStrategy[Ordering] = complete_orderings) -> Notation:
    """Draw notations whose dot product of stress and strain is twice the energy density."""
    a, b = draw(st.sampled_from([(1.0, 2.0), (2.0, 1.0), (0.5, 4.0), (math.sqrt(2.0), math.sqrt(2.0))]))
    return Notation(draw(orderings), stress_shear=a, strain_shear=b, compression_positive=draw(st.booleans()))


batch_shapes: Final[st.SearchStrategy[tuple[int, ...]]] = st.one_of(
    st.sampled_from([(), (0,), (1,), (7, 1, 5)]), hnp.array_shapes(min_dims=0, max_dims=3, min_side=0, max_side=4)
)


@st.composite
def broadcastable_batches(draw: st.DrawFn, count: int = 2) -> tuple[tuple[int, ...], ...]:
    """Draw batch shapes that broadcast against each other, empty and scalar ones among them."""
    drawn = hnp.mutually_broadcastable_shapes(num_shapes=count, max_dims=3, min_side=0, max_side=4)
    return draw(drawn).input_shapes


def random_array(
    rng: np.random.Generator, shape: tuple[int, ...], dtype: type[np.inexact[Any]] = np.float64
) -> NDArray[Any]:
    """Return normal random numbers of a kind; every digit of a longdouble is used."""
    values: NDArray[Any] = rng.standard_normal(shape).astype(np.longdouble)
    values = np.asarray(values + np.longdouble(2.0) ** -55 * rng.standard_normal(shape))
    if np.dtype(dtype).kind == "c":
        values = np.asarray(values + 1j * rng.standard_normal(shape).astype(np.longdouble))
    return values.astype(dtype)


def symmetric_tensors(
    rng: np.random.Generator, batch: tuple[int, ...], dtype: type[np.inexact[Any]] = np.float64
) -> NDArray[Any]:
    """Return exactly symmetric tensors, shape (..., 3, 3)."""
    upper = np.triu(random_array(rng, (*batch, 3, 3), dtype))
    return np.asarray(upper + np.triu(upper, 1).swapaxes(-1, -2))


def stiffness_tensors(
    rng: np.random.Generator,
    batch: tuple[int, ...],
    dtype: type[np.inexact[Any]] = np.float64,
    *,
    major: bool = True,
) -> NDArray[Any]:
    """Return tensors with exact minor and, if asked for, major symmetry, shape (..., 3, 3, 3, 3)."""
    matrix = random_array(rng, (*batch, 6, 6), dtype)
    if major:
        upper = np.triu(matrix)
        matrix = np.asarray(upper + np.triu(upper, 1).swapaxes(-1, -2))
    place = {frozenset(pair): n for n, pair in enumerate(PAIRS)}
    index = [[place[frozenset((i, j))] for j in range(3)] for i in range(3)]
    return np.asarray(matrix[..., index, :][..., index])


def well_conditioned(
    rng: np.random.Generator, batch: tuple[int, ...], *, condition: float = 10.0, scale: float = 1.0
) -> NDArray[np.float64]:
    """Return symmetric positive definite 6x6 matrices of a given condition number and largest eigenvalue."""
    vectors = np.linalg.qr(rng.standard_normal((*batch, 6, 6)))[0]
    values = scale * np.geomspace(1.0 / condition, 1.0, 6)
    matrix = np.einsum("...ik,k,...jk->...ij", vectors, values, vectors)
    return np.asarray((matrix + matrix.swapaxes(-1, -2)) / 2)


def random_stiffness(rng: np.random.Generator, batch: tuple[int, ...]) -> Stiffness:
    """Return positive definite stiffnesses without any symmetry."""
    root = rng.normal(size=(*batch, 6, 6))
    return Stiffness.from_matrix(root @ root.swapaxes(-1, -2) + np.eye(6), Notation.voigt(VOIGT_ORDER))


def rotations(rng: np.random.Generator, batch: tuple[int, ...]) -> NDArray[np.float64]:
    """Return uniform rotation matrices; single ones are sometimes special (identity, quarter and half turns)."""
    if batch == () and rng.random() < 0.3:
        signs = rng.choice([-1.0, 1.0], 3)
        special = np.diag(signs)[rng.permutation(3)]
        return np.asarray(special * np.linalg.det(special))
    q, r = np.linalg.qr(rng.standard_normal((*batch, 3, 3)))
    q = q * np.sign(np.einsum("...ii->...i", r))[..., None, :]
    return np.asarray(q * np.linalg.det(q)[..., None, None])


def laid_out(array: NDArray[Any], layout: str) -> NDArray[Any]:
    """Return the same numbers in another memory layout, one of `LAYOUTS`."""
    if layout == "strided":
        wide = np.zeros((*array.shape[:-1], 2 * array.shape[-1]), array.dtype)
        wide[..., ::2] = array
        return wide[..., ::2]
    if layout == "reversed":
        return np.ascontiguousarray(array[..., ::-1])[..., ::-1]
    if layout == "fortran":
        return np.asfortranarray(array)
    copy = array.copy()
    copy.flags.writeable = layout != "read-only"
    return copy
