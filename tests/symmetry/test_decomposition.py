"""Orthogonal parts of a tensor: down a chain of symmetries, and by the order of harmonics."""

from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from fourthrank import Compliance, Notation, Ordering, Stiffness, SymmetryError, rotation, symmetry
from tests.reference import case

VOIGT = Notation.voigt(Ordering("11 22 33 23 13 12"))
MANDEL = Notation.mandel(Ordering("11 22 33 23 13 12"))
SEEDS = st.integers(0, 2**32 - 1)
SHAPES = st.sampled_from([(), (0,), (3,), (2, 1, 2)])
CHAINS = [
    [
        symmetry.isotropic(),
        symmetry.transversely_isotropic(axis=3),
        symmetry.tetragonal(axis=3),
        symmetry.orthotropic(),
        symmetry.monoclinic(axis=3),
    ],
    [
        symmetry.isotropic(),
        symmetry.transversely_isotropic(axis=1),
        symmetry.trigonal(axis=1, two_fold=2),
        symmetry.monoclinic(axis=2),
        symmetry.triclinic(),
    ],
    [symmetry.cubic()],
]


def tensors(shape: tuple[int, ...], seed: int, kind: Any = Stiffness) -> Any:
    m = np.random.default_rng(seed).standard_normal((*shape, 6, 6))
    return kind.from_matrix(m, MANDEL, symmetrize=True)


def inner(a: Any, b: Any) -> Any:
    return (a.matrix(MANDEL) * b.matrix(MANDEL)).sum(axis=(-2, -1))


@given(st.sampled_from(CHAINS), SHAPES, SEEDS, st.sampled_from([Stiffness, Compliance]))
def test_parts_down_a_chain_add_up_and_are_orthogonal(
    chain: list[symmetry.Symmetry], shape: tuple[int, ...], seed: int, kind: Any
) -> None:
    """The sum of the parts is C, different parts are orthogonal, the shares add up to 1, distances are the chain's."""
    C = tensors(shape, seed, kind)
    split = symmetry.decompose(C, chain)
    assert len(split.parts) == len(chain) + 1
    assert split.shares.shape == (*shape, len(chain) + 1)
    total = split.parts[0]
    for part in split.parts[1:]:
        total = total + part
    assert total.allclose(C, rtol=1e-14)
    for i, first in enumerate(split.parts):
        for second in split.parts[:i]:
            assert (np.abs(inner(first, second)) <= 1e-14 * C.norm() ** 2).all()
    assert np.allclose(split.shares.sum(axis=-1), 1.0, rtol=1e-13)
    for k, s in enumerate(chain):
        assert np.allclose(split.distances[..., k], s.distance(C), rtol=0, atol=1e-14)
        assert np.allclose(split.shares[..., : k + 1].sum(axis=-1), s.share(C), rtol=0, atol=1e-13)


def test_chains_must_descend() -> None:
    """An empty chain, one from low to high, and one about different axes are refused."""
    C = tensors((), 0)
    with pytest.raises(SymmetryError, match="at least one"):
        symmetry.decompose(C, [])
    with pytest.raises(SymmetryError, match=r"number 1, .*orthotropic.*does not contain number 2, .*isotropic"):
        symmetry.decompose(C, [symmetry.orthotropic(), symmetry.isotropic()])
    with pytest.raises(SymmetryError, match=r"number 2.*does not contain number 3"):
        symmetry.decompose(
            C, [symmetry.isotropic(), symmetry.transversely_isotropic(axis=3), symmetry.tetragonal(axis=1)]
        )


def olivine(item: Any) -> Stiffness:
    m = np.zeros((6, 6))
    for name, value in item.values().items():
        i, j = int(name[1]) - 1, int(name[2]) - 1
        m[i, j] = m[j, i] = value
    return Stiffness.from_matrix(m, VOIGT)


def test_published_decomposition_of_olivine() -> None:
    """Browaeys and Chevrot (2004), Geophys. J. Int. 159, 667-678, section 3 (value from memory): the parts."""
    item = case("PROJ-BC-OLIVINE-PARTS")
    split = symmetry.decompose(olivine(item), CHAINS[0][:4])
    names = ("iso", "hex", "tet", "ort")
    parts = {name: part.matrix(VOIGT) for name, part in zip(names, split.parts[:4], strict=True)}
    assert split.parts[4].norm() < 1e-12
    for name, figure in item.figures.items():
        i, j = int(name[3]) - 1, int(name[4]) - 1
        assert abs(parts[name[:3]][i, j] - figure.value) <= figure.tolerance, name


def test_published_percentages_of_olivine() -> None:
    """The same source's table (value from memory): differences of successive relative distances."""
    item = case("PROJ-BC-OLIVINE-PCT")
    split = symmetry.decompose(olivine(item), CHAINS[0][:4])
    steps = 100.0 * -np.diff([1.0, *split.distances])
    names = ("pct_iso", "pct_hex", "pct_tet", "pct_ort", "pct_anis")
    found = dict(zip(names, [*steps, 100.0 * split.distances[0]], strict=True))
    assert set(found) == set(item.figures)
    for name, value in found.items():
        assert abs(value - item.expected(name)) <= item.tolerance(name), name


@given(SHAPES, SEEDS, st.sampled_from([Stiffness, Compliance]))
def test_harmonic_parts_add_up_and_rotate_among_themselves(shape: tuple[int, ...], seed: int, kind: Any) -> None:
    """C is the sum of orthogonal parts; the parts of a turned tensor are the turned parts, scalars stay."""
    C = tensors(shape, seed, kind)
    parts = symmetry.harmonic_parts(C)
    three = (parts.isotropic, parts.second_order, parts.fourth_order)
    assert (three[0] + three[1] + three[2]).allclose(C, rtol=1e-14)
    assert np.allclose((parts.norms**2).sum(axis=-1), C.norm() ** 2, rtol=1e-13)
    assert parts.isotropic.allclose(symmetry.isotropic().project(C), rtol=1e-13)
    R = rotation.random(1, np.random.default_rng(seed))[0]
    turned = symmetry.harmonic_parts(C.rotate(R))
    for a, b in zip(three, (turned.isotropic, turned.second_order, turned.fourth_order), strict=True):
        assert ((a.rotate(R) - b).norm() <= 1e-13 * C.norm()).all()
    assert np.allclose(turned.scalars, parts.scalars, rtol=0, atol=1e-12)
    assert np.allclose(turned.deviators, R @ parts.deviators @ R.T, rtol=0, atol=1e-12)


@given(SEEDS)
def test_the_fourth_order_part_is_harmonic(seed: int) -> None:
    """It is symmetric in all indices and all its traces vanish; it equals the classical formula.

    Backus (1970), eq. (11) (value from memory): S totally symmetric part, t its trace, H = S - 6/7 sym(delta t') -
    tr(t)/5 sym(delta delta), with t' the deviator of t.
    """
    C = tensors((), seed)
    h = symmetry.harmonic_parts(C).fourth_order.tensor()
    assert np.abs(h - h.transpose(0, 2, 1, 3)).max() < 1e-14
    assert np.abs(np.einsum("ijkk", h)).max() < 1e-14
    full, d = C.tensor(), np.eye(3)
    total = (full + full.transpose(0, 2, 1, 3) + full.transpose(0, 3, 2, 1)) / 3
    trace = np.einsum("ijkk", total)
    dev = trace - np.trace(trace) / 3 * d
    outer = np.einsum("ij,kl->ijkl", d, dev)
    outer = outer + outer.transpose(2, 3, 0, 1)
    mixed = (outer + outer.transpose(0, 2, 1, 3) + outer.transpose(0, 3, 2, 1)) / 6
    unit = np.einsum("ij,kl->ijkl", d, d)
    unit = (unit + unit.transpose(0, 2, 1, 3) + unit.transpose(0, 3, 2, 1)) / 3
    assert np.abs(h - (total - 6 / 7 * mixed - np.trace(trace) / 5 * unit)).max() < 1e-13


def test_the_second_order_part_is_what_the_deviators_say() -> None:
    """Traces of the parts: the deviators belong to the second-order part, the scalars to the isotropic one."""
    C = tensors((5,), 1)
    parts = symmetry.harmonic_parts(C)
    second, iso = parts.second_order.tensor(), parts.isotropic.tensor()
    assert np.allclose(np.einsum("nijkk->nij", second), parts.deviators[:, 0], atol=1e-13)
    assert np.allclose(np.einsum("nikjk->nij", second), parts.deviators[:, 1], atol=1e-13)
    assert np.allclose(np.einsum("niijj->n", iso), parts.scalars[:, 0], atol=1e-13)
    assert np.allclose(np.einsum("nijij->n", iso), parts.scalars[:, 1], atol=1e-13)


def test_complex_tensors_have_complex_parts() -> None:
    """Linear maps act on real and imaginary part alike."""
    m = np.random.default_rng(0).standard_normal((2, 6, 6))
    C = Stiffness.from_matrix(m[0] + 1j * m[1], MANDEL, symmetrize=True)
    parts = symmetry.harmonic_parts(C)
    assert parts.fourth_order.imag.allclose(symmetry.harmonic_parts(C.imag).fourth_order, rtol=1e-13)
    assert np.allclose(parts.scalars.imag, symmetry.harmonic_parts(C.imag).scalars)
    assert symmetry.decompose(C, [symmetry.cubic()]).parts[0].is_complex
