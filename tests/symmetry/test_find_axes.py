"""The axes search: what it returns, for batches of any shape, and where the axes are not determined."""

from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from fourthrank import Compliance, DataError, Notation, Ordering, Stiffness, rotation, symmetry
from fourthrank.symmetry import Symmetry, find_axes

MANDEL = Notation.mandel(Ordering("11 22 33 23 13 12"))
SEEDS = st.integers(0, 2**32 - 1)
CLASSES = [
    symmetry.isotropic(),
    symmetry.cubic(),
    symmetry.transversely_isotropic(axis=1),
    symmetry.tetragonal(axis=2),
    symmetry.tetragonal(axis=3, constants=7),
    symmetry.trigonal(axis=3, two_fold=1),
    symmetry.trigonal(axis=2, two_fold=1),
    symmetry.trigonal(axis=1, constants=7),
    symmetry.orthotropic(),
    symmetry.monoclinic(axis=2),
    symmetry.triclinic(),
]


def definite(shape: tuple[int, ...], seed: int, kind: Any = Stiffness) -> Any:
    a = np.random.default_rng(seed).standard_normal((*shape, 6, 6))
    return kind.from_matrix(a @ a.swapaxes(-1, -2) + np.eye(6), MANDEL, symmetrize=True)


@given(st.sampled_from(CLASSES), st.sampled_from([(), (0,), (3,), (2, 1, 2)]), SEEDS, st.sampled_from([0, 1]))
def test_the_parts_of_a_fit_agree(s: Symmetry, shape: tuple[int, ...], seed: int, which: int) -> None:
    """Axes are rotations; projection and distances are those of the symmetry in these axes; shapes are the batch's."""
    kind = (Stiffness, Compliance)[which]
    C = definite(shape, seed, kind)
    fit = find_axes(C, s)
    assert type(fit.projection) is kind
    assert fit.axes.shape == (*shape, 3, 3)
    assert fit.undetermined.shape == (*shape, 3)
    assert fit.distance.shape == fit.absolute_distance.shape == fit.separation.shape == fit.projection.shape == shape
    assert np.abs(fit.axes @ fit.axes.swapaxes(-1, -2) - np.eye(3)).max(initial=0.0) < 1e-14
    assert (np.linalg.det(fit.axes) > 0.0).all()
    assert (fit.separation >= 0.0).all()
    for index in np.ndindex(shape):
        there = s.in_axes(fit.axes[index])
        assert there.project(C[index]).allclose(fit.projection[index], rtol=1e-13)
        assert abs(there.distance(C[index]) - fit.distance[index]) < 1e-13
        assert abs(there.distance(C[index], relative=False) - fit.absolute_distance[index]) < 1e-13 * C[index].norm()
        single = find_axes(C[index], s)
        assert abs(single.distance - fit.distance[index]) < 1e-12


@given(st.sampled_from(CLASSES), SEEDS)
def test_the_distance_does_not_depend_on_the_present_axes(s: Symmetry, seed: int) -> None:
    """Neither those of the tensor nor those of the symmetry; nor does the separation."""
    C = definite((), seed)
    R = rotation.random(2, np.random.default_rng(seed))
    fit, other = find_axes(C, s), find_axes(C.rotate(R[0]), s.in_axes(R[1]))
    assert abs(fit.distance - other.distance) < 1e-12
    assert fit.separation == pytest.approx(other.separation, abs=1e-6) or len(s.generators) > 0


@given(st.sampled_from([s for s in CLASSES if 2 < s.count < 21]), SEEDS)
def test_axes_near_the_present_ones_are_preferred(s: Symmetry, seed: int) -> None:
    """A tensor of the class, turned a little, gives back the small turn and not one of its equivalents."""
    rng = np.random.default_rng(seed)
    C = s.project(definite((), seed))
    small = rotation.from_rotation_vector(rng.uniform(-0.1, 0.1, 3))
    fit = find_axes(C.in_axes(small.T), s)
    # Where the next minimum is as good, or a class is met in several ways, no axes are preferred.
    assert fit.distance < 1e-13
    if fit.separation > 1e-3 and not fit.undetermined.all():
        assert rotation.angle_between(fit.axes, np.eye(3)) <= rotation.angle_between(small, np.eye(3)) + 1e-7


@given(st.sampled_from([s for s in CLASSES if not len(s.free_axes)]), SEEDS)
def test_equivalent_axes_give_one_representative(s: Symmetry, seed: int) -> None:
    """Turning a tensor of the class by an element of the group, in any axes, changes nothing."""
    C = s.project(definite((), seed))
    Q = rotation.random(1, np.random.default_rng(seed))[0]
    first = find_axes(C.rotate(Q), s)
    for R in s.rotations:
        again = find_axes(C.rotate(R).rotate(Q), s)
        if first.separation > 1e-3:
            assert rotation.angle_between(first.axes, again.axes) < 1e-5


def test_an_isotropic_tensor_has_no_axes() -> None:
    """Distance zero, nothing determined, the present axes kept; in a batch, others are not disturbed. So for zero."""
    iso = symmetry.isotropic().project(definite((), 1))
    zero = iso.scaled(0.0)
    for s in CLASSES:
        fit = find_axes(Stiffness.stack([iso, definite((), 2), zero]), s)
        assert (fit.distance[[0, 2]] < 32 * np.finfo(float).eps).all()
        assert fit.undetermined[[0, 2]].all()
        assert np.array_equal(fit.axes[[0, 2]], [np.eye(3)] * 2)
        assert (fit.separation[[0, 2]] == 0.0).all()
        assert fit.distance[1] == pytest.approx(float(find_axes(definite((), 2), s).distance), abs=1e-13)


def test_classes_without_axes_keep_the_present_ones() -> None:
    """Isotropy and no symmetry at all need no search."""
    C = definite((4,), 3)
    for s in (symmetry.isotropic(), symmetry.triclinic()):
        fit = find_axes(C, s)
        assert np.array_equal(fit.axes, [np.eye(3)] * 4)
        assert fit.undetermined.all()
        assert np.allclose(fit.distance, s.distance(C), rtol=0, atol=7e-15)


def test_free_axes_of_class_or_tensor_are_reported() -> None:
    """About the axis of transverse isotropy nothing is determined, whether the class or the tensor has it."""
    R = rotation.random(1, np.random.default_rng(4))[0]
    hexagonal = symmetry.transversely_isotropic(axis=3)
    C = hexagonal.project(definite((), 5)).rotate(R)
    assert find_axes(C, hexagonal).undetermined.tolist() == [True, True, False]
    assert find_axes(C, symmetry.transversely_isotropic(axis=1)).undetermined.tolist() == [False, True, True]
    # A class with fixed axes, met by a tensor with a free one: exactly one of the three axes stays put.
    fit = find_axes(C, symmetry.orthotropic())
    assert fit.distance < 1e-14
    assert sorted(fit.undetermined.tolist()) == [False, True, True]
    sharp = fit.axes[~fit.undetermined][0]
    assert abs(abs(sharp @ R[:, 2]) - 1.0) < 1e-9
    assert not find_axes(definite((), 6), symmetry.orthotropic()).undetermined.any()


def test_separation_tells_ambiguous_axes() -> None:
    """A cubic tensor has three equally good axes of transverse isotropy; a hexagonal one a single best."""
    R = rotation.random(1, np.random.default_rng(7))[0]
    hexagonal = symmetry.transversely_isotropic(axis=3)
    cubic = find_axes(symmetry.cubic().project(definite((), 8)).rotate(R), hexagonal)
    assert cubic.separation < 1e-10
    single = find_axes(hexagonal.project(definite((), 9)).rotate(R), hexagonal)
    assert single.separation > 1e-3


def test_a_single_minimum_is_infinitely_separated() -> None:
    """Without a part of fourth order an orthotropic tensor has no other minimum: its deviators share one frame."""
    parts = symmetry.harmonic_parts(symmetry.orthotropic().project(definite((), 10)))
    C = (parts.isotropic + parts.second_order).rotate(rotation.about_axis([1, 2, 3], 0.4))
    fit = find_axes(C, symmetry.orthotropic())
    assert fit.distance < 1e-14
    assert fit.separation == np.inf


def test_symmetries_of_ones_own_are_searched_over_all_rotations() -> None:
    """A group in odd axes gives the same distance as the class that it is; a group of one's own its own."""
    R = rotation.random(2, np.random.default_rng(11))
    C = definite((3,), 12)
    for s in (symmetry.orthotropic(), symmetry.monoclinic(axis=3), symmetry.transversely_isotropic(axis=2)):
        odd = symmetry.from_generators(
            R[0].T @ s.generators @ R[0], free_axes=s.free_axes @ R[0] if len(s.free_axes) else None
        )
        assert np.abs(find_axes(C, odd).distance - find_axes(C, s).distance).max() < 1e-10


def test_a_batch_goes_through_in_blocks_without_a_seam() -> None:
    """450 tensors at once equal the same tensors one by one."""
    C = definite((450,), 13)
    s = symmetry.trigonal(axis=3, two_fold=1)
    fit = find_axes(C, s)
    for k in (0, 99, 100, 399, 400, 449):
        single = find_axes(C[k], s)
        assert abs(single.distance - fit.distance[k]) < 1e-13
        assert rotation.angle_between(single.axes, fit.axes[k]) < 1e-6


def test_the_size_of_the_numbers_does_not_matter() -> None:
    """Pa or GPa, tiny or huge: the same axes."""
    C = definite((), 14)
    s = symmetry.orthotropic()
    fit = find_axes(C, s)
    for factor in (1e-120, 1e-9, 1e9, 1e120):
        scaled = find_axes(C.scaled(factor), s)
        assert scaled.distance == pytest.approx(float(fit.distance), rel=1e-12)
        assert rotation.angle_between(scaled.axes, fit.axes) < 1e-6
        assert not scaled.undetermined.any()


def test_weak_anisotropy_is_searched_as_well() -> None:
    """A part of 1e-9 of the norm decides the axes when the rest is isotropic."""
    s = symmetry.orthotropic()
    R = rotation.random(1, np.random.default_rng(15))[0]
    C = s.project(definite((), 16))
    weak = symmetry.isotropic().project(C).scaled(1e9) + (C - symmetry.isotropic().project(C))
    fit = find_axes(weak.rotate(R), s)
    assert fit.distance < 1e-14
    assert rotation.angle_between(fit.axes, find_axes(C.rotate(R), s).axes) < 1e-4


@pytest.mark.parametrize("s", [symmetry.orthotropic(), symmetry.monoclinic(axis=2)], ids=str)
def test_flat_valleys_are_followed_to_their_end(s: Symmetry) -> None:
    """Nearly hexagonal tensors have almost flat minima in lower classes; the present axes do not matter."""
    rng = np.random.default_rng(17)
    errors = Stiffness.from_matrix(rng.standard_normal((300, 6, 6)), MANDEL, symmetrize=True)
    hexagonal = symmetry.transversely_isotropic(axis=3).project(definite((300,), 18))
    nearly = hexagonal + errors.scaled(1e-6 * hexagonal.norm() / errors.norm())
    first = find_axes(nearly, s)
    second = find_axes(nearly.rotate(rotation.random(300, rng)), s)
    assert np.abs(first.distance - second.distance).max() < 1e-10
    assert (first.distance < 1e-6).all()


def test_bad_input_is_refused() -> None:
    """Complex tensors have no real axes; arrays have no kind."""
    C = Stiffness.from_matrix(np.eye(6) * (1 + 1j), MANDEL)
    with pytest.raises(DataError, match=r"complex: take \.real"):
        find_axes(C, symmetry.cubic())
    with pytest.raises(TypeError, match="got ndarray"):
        find_axes(np.eye(6), symmetry.cubic())  # type: ignore[type-var]
