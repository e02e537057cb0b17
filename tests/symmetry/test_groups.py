"""Symmetry objects: groups from generators, their invariant tensors, patterns and subgroups."""

import pickle
from copy import copy, deepcopy
from itertools import product
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from fourthrank import (
    Compliance,
    Notation,
    Ordering,
    RotationError,
    ShapeError,
    Stiffness,
    SymmetryError,
    rotation,
    symmetry,
)
from fourthrank.symmetry import Axis, Symmetry

VOIGT = Notation.voigt(Ordering("11 22 33 23 13 12"))
MANDEL = Notation.mandel(Ordering("11 22 33 23 13 12"))

PAIRS: list[tuple[Axis, Axis]] = [(1, 2), (1, 3), (2, 1), (2, 3), (3, 1), (3, 2)]

# Numbers of independent constants: Nye (1957), Physical Properties of Crystals, table 9 (value from memory); orders of
# the groups of proper rotations: common practice.
CLASSES: list[tuple[Symmetry, int, int | None]] = [
    (symmetry.isotropic(), 2, None),
    (symmetry.cubic(), 3, 24),
    *((symmetry.transversely_isotropic(axis=a), 5, None) for a in (1, 2, 3)),
    *((symmetry.tetragonal(axis=a), 6, 8) for a in (1, 2, 3)),
    *((symmetry.tetragonal(axis=a, constants=7), 7, 4) for a in (1, 2, 3)),
    *((symmetry.trigonal(axis=a, two_fold=b), 6, 6) for a, b in PAIRS),
    *((symmetry.trigonal(axis=a, constants=7), 7, 3) for a in (1, 2, 3)),
    (symmetry.orthotropic(), 9, 4),
    *((symmetry.monoclinic(axis=a), 13, 2) for a in (1, 2, 3)),
    (symmetry.triclinic(), 21, 1),
]
FINITE = [(s, n) for s, _, n in CLASSES if n is not None]
QUATERNIONS = st.lists(st.floats(-1, 1), min_size=4, max_size=4).filter(lambda q: np.linalg.norm(q) > 0.1)


def turned_by_einsum(matrices: Any, R: Any) -> Any:
    """Turn working 6x6 matrices by the full tensors, independently of the library's kernels."""
    full = Stiffness.from_matrix(matrices, MANDEL).tensor()
    turned = np.einsum("ip,jq,kr,ls,...pqrs->...ijkl", R, R, R, R, full)
    return Stiffness.from_tensor(turned).matrix(MANDEL)


@pytest.mark.parametrize(("s", "count", "order"), CLASSES, ids=lambda x: str(x))
def test_dimension_and_order_follow_from_the_generators(s: Symmetry, count: int, order: int | None) -> None:
    """The fixed space of the generators has the dimension of the handbooks, and the group closes to its order."""
    assert s.count == len(s.basis) == count
    assert s.basis.shape == (count, 6, 6)
    if order is not None:
        assert s.rotations.shape == (order, 3, 3)
        assert np.array_equal(s.rotations[0], np.eye(3))


@pytest.mark.parametrize("s", [c[0] for c in CLASSES], ids=str)
def test_the_basis_is_orthonormal_symmetric_and_free_of_noise(s: Symmetry) -> None:
    """B_k : B_l is the identity, every B_k equals its transpose, and no component is rounding noise."""
    rows = s.basis.reshape(-1, 36)
    assert np.abs(rows @ rows.T - np.eye(s.count)).max() < 4e-15
    assert np.array_equal(s.basis, s.basis.swapaxes(-1, -2))
    assert np.abs(s.basis[s.basis != 0.0]).min() > 1e-3


@pytest.mark.parametrize(("s", "order"), FINITE, ids=lambda x: str(x))
def test_every_rotation_of_a_finite_group_leaves_the_basis_as_it_is(s: Symmetry, order: int) -> None:
    """K B K^T = B for the full tensors and each rotation; the dimension equals the averaged character."""
    for R in s.rotations:
        assert np.abs(turned_by_einsum(s.basis, R) - s.basis).max() < 1e-14
    # The number of invariants is the mean trace of the action (orthogonality of characters).
    units = symmetry.triclinic().basis
    trace = sum(np.sum(turned_by_einsum(units, R) * units) for R in s.rotations) / order
    assert trace == pytest.approx(s.count, abs=1e-12)


@pytest.mark.parametrize("s", [c[0] for c in CLASSES if c[2] is None], ids=str)
def test_a_continuous_group_leaves_its_basis_as_it_is_at_any_angle(s: Symmetry) -> None:
    """Turns by arbitrary angles about the free axes change nothing."""
    for axis, angle in product(s.free_axes, (0.3, 1.0, 2.5)):
        assert np.abs(turned_by_einsum(s.basis, rotation.about_axis(axis, angle)) - s.basis).max() < 1e-14


@pytest.mark.parametrize("s", [c[0] for c in CLASSES if c[2] is None], ids=str)
def test_a_continuous_group_has_no_list_of_rotations(s: Symmetry) -> None:
    """Asking for the list is an error that says why."""
    with pytest.raises(SymmetryError, match="continuous group"):
        _ = s.rotations


def test_subgroups_are_recognised() -> None:
    """Containment follows the chain of classes, and respects axes."""
    cubic, orthotropic = symmetry.cubic(), symmetry.orthotropic()
    hexagonal = symmetry.transversely_isotropic(axis=3)
    diagonal = rotation.axes_from_vectors(x3=[1, 1, 1], x1=[1, -1, 0], exact="x3")
    contained = [
        (symmetry.isotropic(), cubic),
        (symmetry.isotropic(), hexagonal),
        (cubic, symmetry.tetragonal(axis=2)),
        (cubic, symmetry.trigonal(axis=3, two_fold=1).in_axes(diagonal)),
        (hexagonal, symmetry.trigonal(axis=3, two_fold=2)),
        (hexagonal, symmetry.tetragonal(axis=3)),
        (symmetry.tetragonal(axis=1), symmetry.tetragonal(axis=1, constants=7)),
        (symmetry.trigonal(axis=1, two_fold=3), symmetry.trigonal(axis=1, constants=7)),
        (symmetry.tetragonal(axis=1), orthotropic),
        (orthotropic, symmetry.monoclinic(axis=2)),
        (symmetry.monoclinic(axis=2), symmetry.triclinic()),
        (cubic, cubic),
    ]
    apart = [
        (cubic, hexagonal),
        (cubic, symmetry.trigonal(axis=3, two_fold=1)),
        (hexagonal, symmetry.tetragonal(axis=1)),
        (symmetry.trigonal(axis=3, two_fold=1), orthotropic),
        (symmetry.trigonal(axis=3, two_fold=1), symmetry.monoclinic(axis=2)),
        (symmetry.tetragonal(axis=3, constants=7), orthotropic),
        (orthotropic, symmetry.monoclinic(axis=2).in_axes(diagonal)),
    ]
    assert all(big.contains(small) for big, small in contained)
    assert not any(big.contains(small) for big, small in apart)
    assert not any(small.contains(big) for big, small in contained[:-1])


def test_orthotropic_contains_the_two_fold_axis_of_trigonal_symmetry_only_where_it_lies() -> None:
    """Trigonal symmetry is monoclinic about its two-fold axis."""
    for two_fold in (1, 2):
        s = symmetry.trigonal(axis=3, two_fold=two_fold)
        found = [s.contains(symmetry.monoclinic(axis=a)) for a in (1, 2, 3)]
        assert found == [two_fold == 1, two_fold == 2, False]


@given(QUATERNIONS, st.sampled_from([c[0] for c in CLASSES]))
def test_in_axes_turns_the_invariant_tensors(q: list[float], s: Symmetry) -> None:
    """A tensor has the symmetry in axes A exactly if its components along A have the symmetry's pattern."""
    A = rotation.from_quaternion(q, scalar="first", normalize=True)
    turned = s.in_axes(A)
    assert turned.count == s.count
    along = Stiffness.from_matrix(turned.basis, MANDEL).in_axes(A)
    assert float(np.max(s.distance(along))) < 64 * 2.0**-52  # the bound on turning there and back
    assert np.abs(turned.axes - A).max() < 1e-15


def test_in_axes_reads_a_second_set_of_axes_in_the_first() -> None:
    """s.in_axes(A).in_axes(B) has the generators of A B."""
    A, B = rotation.random(2, np.random.default_rng(5))
    s = symmetry.tetragonal(axis=3)
    twice = s.in_axes(B).in_axes(A)
    assert np.abs(twice.axes - s.axes @ B @ A).max() < 1e-15
    assert twice.contains(s.in_axes(B @ A))
    assert s.in_axes(B @ A).contains(twice)


def test_a_group_of_ones_own() -> None:
    """Generators, lists of them and objects with as_matrix() give the same group; a full list closes to itself."""
    R = rotation.about_axis([0, 0, 1], 90, degrees=True)
    F = rotation.about_axis([1, 0, 0], 180, degrees=True)
    for s in (symmetry.from_generators(R, F), symmetry.from_generators([R, F]), symmetry.from_generators([[R], [F]])):
        assert (s.count, len(s.rotations)) == (6, 8)
    assert len(symmetry.from_generators(rotation.cube_rotations()).rotations) == 24
    assert symmetry.from_generators().count == 21
    assert symmetry.from_generators(free_axes=[0, 0, 2]).count == 5
    assert symmetry.from_generators(free_axes=[[0, 0, 2], [1, 1, 0]]).count == 2


def test_the_icosahedral_group_is_isotropic_for_elasticity() -> None:
    """Its 60 rotations leave 2 constants (Herman's theorem: a five-fold axis counts as a free one in rank four)."""
    golden = (1 + 5**0.5) / 2
    five = rotation.about_axis([0, 1, golden], 72, degrees=True)
    two = rotation.about_axis([0, 0, 1], 180, degrees=True)
    s = symmetry.from_generators(five, two, name="icosahedral")
    assert (s.count, len(s.rotations)) == (2, 60)
    assert s.contains(symmetry.isotropic())


def test_reflections_need_leave() -> None:
    """A mirror is refused, and counts as the two-fold rotation about its normal on request."""
    mirror = np.diag([1.0, 1.0, -1.0])
    with pytest.raises(RotationError, match="reflection"):
        symmetry.from_generators(mirror)
    s = symmetry.from_generators(mirror, allow_reflection=True)
    assert s.contains(symmetry.monoclinic(axis=3))
    assert s.count == 13


def test_bad_generators_are_refused() -> None:
    """No rotation, a group that does not close, no direction, several sets of axes."""
    with pytest.raises(RotationError, match="no rotation"):
        symmetry.from_generators(np.ones((3, 3)))
    with pytest.raises(SymmetryError, match=r"do not close .* at most 240"):
        symmetry.from_generators(rotation.about_axis([0, 0, 1], 1.0))
    with pytest.raises(RotationError, match="zero length"):
        symmetry.from_generators(free_axes=[0, 0, 0])
    with pytest.raises(ShapeError, match="one set of axes"):
        symmetry.cubic().in_axes(np.stack([np.eye(3)] * 2))
    with pytest.raises(TypeError, match="made by the functions"):
        Symmetry()


def test_conventions_must_be_named_rightly() -> None:
    """Axes out of range, two-fold axes that are missing, superfluous or parallel, other counts of constants."""
    with pytest.raises(SymmetryError, match="axis must be 1, 2 or 3, got 0"):
        symmetry.monoclinic(axis=0)  # type: ignore[arg-type]
    with pytest.raises(SymmetryError, match="needs two_fold"):
        symmetry.trigonal(axis=3)
    with pytest.raises(SymmetryError, match="must differ"):
        symmetry.trigonal(axis=3, two_fold=3)
    with pytest.raises(SymmetryError, match="has no two-fold axis"):
        symmetry.trigonal(axis=3, two_fold=1, constants=7)
    with pytest.raises(SymmetryError, match="two_fold must be 1, 2 or 3"):
        symmetry.trigonal(axis=3, two_fold=4)  # type: ignore[arg-type]
    with pytest.raises(SymmetryError, match="constants must be 6 or 7, got 8"):
        symmetry.tetragonal(axis=3, constants=8)  # type: ignore[arg-type]


def cells(s: Symmetry, notation: Notation = VOIGT, **options: Any) -> list[str]:
    """Return the rows of a pattern, labels taken off."""
    return [" ".join(row) for _, row in s.pattern(notation, **options).rows]


def test_patterns_are_those_of_the_handbooks() -> None:
    """Nye (1957), table 9 (value from memory), for stiffness and compliance; the two-fold axis of -3m lies along 1."""
    s = symmetry.trigonal(axis=3, two_fold=1)
    assert cells(s) == [
        "C11 C12 C13 C14 . .",
        "C12 C11 C13 -C14 . .",
        "C13 C13 C33 . . .",
        "C14 -C14 . C44 . .",
        ". . . . C44 C14",
        ". . . . C14 1/2 C11-1/2 C12",
    ]
    assert cells(s, kind=Compliance)[4:] == [". . . . S44 2 S14", ". . . . 2 S14 2 S11-2 S12"]
    seven = cells(symmetry.tetragonal(axis=3, constants=7))
    assert [seven[0], seven[1], seven[5]] == ["C11 C12 C13 . . C16", "C12 C11 C13 . . -C16", "C16 -C16 . . . C66"]
    assert cells(symmetry.monoclinic(axis=2))[3] == ". . . C44 . C46"
    assert cells(symmetry.cubic())[:2] == ["C11 C12 C12 . . .", "C12 C11 C12 . . ."]


def test_patterns_follow_notation_and_axes() -> None:
    """Mandel weights bring sqrt 2, another order moves rows, odd angles give decimals."""
    s = symmetry.trigonal(axis=3, two_fold=1)
    assert cells(s, MANDEL)[4] == ". . . . C44 sqrt2 C14"
    assert cells(s, Notation.voigt(Ordering("11 22 33 12 13 23")))[0] == "C11 C12 C13 . . C16"
    tilted = symmetry.cubic().in_axes(rotation.about_axis([0, 0, 1], 0.3))
    # C16 of a cubic tensor turned by t is sin 4t / 4 of its anisotropy, of which C12 - C13 is -(1 - cos 4t) / 4.
    factor = np.sin(1.2) / (1.0 - np.cos(1.2))
    assert cells(tilted)[5].startswith(f"-{factor:.4g} C12+{factor:.4g} C13 ")
    text = str(symmetry.isotropic().pattern(VOIGT))
    assert text.startswith("isotropic Stiffness, 2 independent constants")


@given(st.sampled_from([c[0] for c in CLASSES]), st.sampled_from([VOIGT, MANDEL]))
def test_a_pattern_says_what_the_matrices_do(s: Symmetry, notation: Notation) -> None:
    """The texts, read as formulas, give the matrix of a random invariant tensor from its independent elements."""
    weights = np.random.default_rng(3).standard_normal(s.count)
    matrix = Stiffness.from_matrix(np.tensordot(weights, s.basis, 1), MANDEL).matrix(notation)
    values = {f"C{i + 1}{j + 1}": float(matrix[i, j]) for i, j in product(range(6), range(6))}
    for row, line in enumerate(s.pattern(notation).rows):
        for column, text in enumerate(line[1]):
            formula = text.replace("sqrt2", "2**0.5").replace(" ", "*") if text != "." else "0"
            assert eval(formula, {}, values) == pytest.approx(matrix[row, column], abs=1e-8)


def test_symmetries_are_immutable_values() -> None:
    """Equality, hash, copies, pickles, read-only arrays, a telling repr."""
    A = rotation.about_axis([0, 0, 1], 0.3)
    s, t = symmetry.cubic(), symmetry.cubic().in_axes(A)
    assert s == symmetry.cubic()
    assert s != t
    assert s != "cubic"
    assert len({s, t, symmetry.cubic(), pickle.loads(pickle.dumps(t))}) == 2
    assert copy(s) is s
    assert deepcopy(t) is t
    assert pickle.loads(pickle.dumps(t)).basis.tobytes() == t.basis.tobytes()
    for array in (s.basis, s.rotations, s.generators, s.axes, symmetry.isotropic().free_axes):
        with pytest.raises(ValueError, match="read-only"):
            array[...] = 0.0
    with pytest.raises(AttributeError, match="immutable"):
        s.name = "other"
    assert repr(s) == "<Symmetry: cubic, 3 independent constants>"
    assert "axes along [0.9553 -0.2955 0]" in repr(t)
