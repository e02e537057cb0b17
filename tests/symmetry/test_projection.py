"""Projection, distance and share: the promises of an orthogonal projector, and published cases."""

from collections.abc import Callable
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from fourthrank import (
    AdmissibilityError,
    Compliance,
    DataError,
    FourthRankError,
    Notation,
    NotationError,
    Ordering,
    ShapeError,
    Stiffness,
    rotation,
    symmetry,
)
from fourthrank.symmetry import Symmetry
from tests.reference import case

VOIGT = Notation.voigt(Ordering("11 22 33 23 13 12"))
MANDEL = Notation.mandel(Ordering("11 22 33 23 13 12"))
EPS = float(np.finfo(np.float64).eps)
TILT = rotation.random(1, np.random.default_rng(1))[0]

CLASSES = [
    symmetry.isotropic(),
    symmetry.cubic(),
    symmetry.transversely_isotropic(axis=1),
    symmetry.tetragonal(axis=2),
    symmetry.tetragonal(axis=3, constants=7),
    symmetry.trigonal(axis=3, two_fold=1),
    symmetry.trigonal(axis=1, constants=7),
    symmetry.orthotropic(),
    symmetry.monoclinic(axis=2),
    symmetry.triclinic(),
    symmetry.cubic().in_axes(TILT),
    symmetry.trigonal(axis=3, two_fold=2).in_axes(TILT),
]
SYMMETRIES = st.sampled_from(CLASSES)
SHAPES = st.sampled_from([(), (1,), (0,), (3,), (2, 3), (7, 1, 5)])
SEEDS = st.integers(0, 2**32 - 1)


def tensors(shape: tuple[int, ...], seed: int, kind: Any = Stiffness) -> Any:
    """Return random tensors, neither definite nor of one size."""
    rng = np.random.default_rng(seed)
    matrices = rng.standard_normal((*shape, 6, 6)) * 10.0 ** rng.integers(-3, 4)
    return kind.from_matrix(matrices, MANDEL, symmetrize=True)


def definite(shape: tuple[int, ...], seed: int) -> Stiffness:
    """Return random positive definite stiffnesses of moderate condition."""
    a = np.random.default_rng(seed).standard_normal((*shape, 6, 6))
    return Stiffness.from_matrix(a @ a.swapaxes(-1, -2) + 3.0 * np.eye(6), MANDEL, symmetrize=True)


def worst(x: Any, bound: Any) -> bool:
    return bool(np.all(x <= bound))


@given(SYMMETRIES, SHAPES, SEEDS, st.sampled_from([Stiffness, Compliance]))
def test_projection_is_idempotent_norm_reducing_and_splits_the_norm(
    s: Symmetry, shape: tuple[int, ...], seed: int, kind: Any
) -> None:
    """P P C = P C, |P C| <= |C|, and |C|^2 = |P C|^2 + |C - P C|^2, to 32 eps of the norm."""
    C = tensors(shape, seed, kind)
    once = s.project(C)
    assert type(once) is kind
    assert once.shape == shape
    bound = 32 * EPS * C.norm()
    assert worst((s.project(once) - once).norm(), bound)
    assert worst(once.norm(), C.norm() * (1 + 4 * EPS))
    assert np.allclose(once.norm() ** 2 + (C - once).norm() ** 2, C.norm() ** 2, rtol=1e-13, atol=0)
    held = once.matrix(MANDEL)
    assert np.array_equal(held, held.swapaxes(-1, -2))


@given(SYMMETRIES, SHAPES, SEEDS)
def test_projection_is_self_adjoint(s: Symmetry, shape: tuple[int, ...], seed: int) -> None:
    """<P A, B> = <A, P B>, to 32 eps of the product of the norms."""
    A, B = tensors(shape, seed), tensors(shape, seed + 1)
    left = (s.project(A).matrix(MANDEL) * B.matrix(MANDEL)).sum(axis=(-2, -1))
    right = (A.matrix(MANDEL) * s.project(B).matrix(MANDEL)).sum(axis=(-2, -1))
    assert worst(np.abs(left - right), 32 * EPS * A.norm() * B.norm())


@given(SYMMETRIES, SEEDS)
def test_projection_commutes_with_its_group(s: Symmetry, seed: int) -> None:
    """Turning before or after makes no difference, and the projection itself stays, to 32 eps of the norm."""
    C = tensors((3,), seed)
    turns = [*s.generators, *(rotation.about_axis(axis, 0.7) for axis in s.free_axes)]
    for R in turns:
        assert worst((s.project(C.rotate(R)) - s.project(C)).norm(), 32 * EPS * C.norm())
        assert worst((s.project(C).rotate(R) - s.project(C)).norm(), 32 * EPS * C.norm())


@given(st.sampled_from([s for s in CLASSES if not len(s.free_axes)]), SEEDS)
def test_projection_is_the_average_over_the_group(s: Symmetry, seed: int) -> None:
    """For finite groups P C is the mean of the turned full tensors, by einsum."""
    full = tensors((), seed).tensor()
    R = s.rotations
    mean = np.einsum("nip,njq,nkr,nls,pqrs->ijkl", R, R, R, R, full, optimize=True) / len(R)
    projected = s.project(tensors((), seed)).tensor()
    assert np.abs(projected - mean).max() < 1e-13 * np.abs(full).max()


@given(SYMMETRIES, SHAPES, SEEDS)
def test_log_euclidean_projection_commutes_with_inversion(s: Symmetry, shape: tuple[int, ...], seed: int) -> None:
    """(P C)^-1 = P (C^-1) in the log-Euclidean metric, and the distances agree."""
    C = definite(shape, seed)
    first = s.project(C, metric="log_euclidean").inverse()
    second = s.project(C.inverse(), metric="log_euclidean")
    assert first.allclose(second, rtol=1e-11)
    apart = s.distance(C, metric="log_euclidean", relative=False)
    assert np.allclose(apart, s.distance(C.inverse(), metric="log_euclidean", relative=False), rtol=1e-9, atol=1e-12)
    projected = s.project(C, metric="log_euclidean")
    assert worst(s.distance(projected), 1e-13)
    assert s.project(projected, metric="log_euclidean").allclose(projected, rtol=1e-12)


def test_a_tensor_of_the_class_stays_as_it_is() -> None:
    """Both metrics return a tensor that has the symmetry already."""
    for s in CLASSES:
        C = s.project(definite((4,), 2))
        assert s.project(C).allclose(C, rtol=1e-14)
        assert s.project(C, metric="log_euclidean").allclose(C, rtol=1e-13)


@given(SYMMETRIES, SHAPES, SEEDS)
def test_distance_and_share_belong_together(s: Symmetry, shape: tuple[int, ...], seed: int) -> None:
    """share = 1 - (relative distance)^2; absolute distance = |C - P C|."""
    C = tensors(shape, seed)
    assert np.allclose(s.share(C), 1.0 - s.distance(C) ** 2, rtol=0, atol=1e-13)
    assert np.allclose(s.distance(C, relative=False), (C - s.project(C)).norm(), rtol=1e-14, atol=0)
    assert s.distance(C).shape == s.share(C).shape == shape


@given(SYMMETRIES, SHAPES, SEEDS, st.sampled_from(["stress", "strain"]), st.sampled_from(["stress", "strain"]))
def test_maps_without_major_symmetry_are_projected_too(
    s: Symmetry, shape: tuple[int, ...], seed: int, rows: Any, columns: Any
) -> None:
    """The tensor's average over the group for finite ones; idempotent; the symmetric part goes as a stiffness does."""
    m = np.random.default_rng(seed).standard_normal((*shape, 6, 6))
    sides = {"rows": rows, "columns": columns}
    projected = s.project_map(m, VOIGT, **sides)
    assert projected.shape == m.shape
    assert np.allclose(s.project_map(projected, VOIGT, **sides), projected, rtol=0, atol=1e-13)
    if not len(s.free_axes):
        full, R = VOIGT.unpack_map(m, **sides), s.rotations
        mean = np.einsum("nip,njq,nkr,nls,...pqrs->...ijkl", R, R, R, R, full, optimize=True) / len(R)
        assert np.allclose(VOIGT.unpack_map(projected, **sides), mean, rtol=0, atol=1e-13)
    both = m + m.swapaxes(-1, -2)
    there = s.project_map(both, MANDEL, rows="stress", columns="strain")
    assert np.allclose(there, s.project(Stiffness.from_matrix(both, MANDEL)).matrix(MANDEL), rtol=0, atol=1e-13)


def test_free_rotations_leave_projected_maps_alone() -> None:
    """Transverse isotropy of a map that is not symmetric: it commutes with any turn about the axis."""
    m = np.random.default_rng(8).standard_normal((6, 6))
    s = symmetry.transversely_isotropic(axis=3)
    projected = s.project_map(m, MANDEL, rows="strain", columns="strain")
    K = rotation.mandel_matrix(rotation.about_axis([0, 0, 1], 0.7), MANDEL.ordering)
    assert np.abs(K @ projected @ K.T - projected).max() < 1e-14
    assert projected[0, 2] != projected[2, 0]
    complex_map = s.project_map(m + 1j * m, MANDEL, rows="strain", columns="strain")
    assert np.allclose(complex_map, projected * (1 + 1j), rtol=1e-13, atol=1e-15)


def test_bad_maps_are_refused() -> None:
    """No notation, an incomplete one, no 6x6 matrix, NaN."""
    sides: dict[str, Any] = {"rows": "strain", "columns": "strain"}
    s = symmetry.cubic()
    with pytest.raises(NotationError, match="must be a Notation"):
        s.project_map(np.eye(6), "voigt", **sides)  # type: ignore[arg-type]
    with pytest.raises(FourthRankError):
        s.project_map(np.eye(6), Notation.voigt(Ordering("11 22 12")), **sides)
    with pytest.raises(ShapeError, match="matrix must have shape"):
        s.project_map(np.eye(3), VOIGT, **sides)
    with pytest.raises(DataError, match="finite"):
        s.project_map(np.full((6, 6), np.nan), VOIGT, **sides)


def test_a_zero_tensor_has_every_symmetry() -> None:
    """Distance 0 and share 1, without a warning."""
    zero = Stiffness.from_matrix(np.zeros((2, 6, 6)), VOIGT)
    assert np.array_equal(symmetry.cubic().distance(zero), [0.0, 0.0])
    assert np.array_equal(symmetry.cubic().share(zero), [1.0, 1.0])


def test_complex_tensors_project_part_by_part() -> None:
    """Real and imaginary part are projected alike; a logarithm is refused."""
    m = np.random.default_rng(0).standard_normal((2, 3, 6, 6))
    C = Stiffness.from_matrix(m[0] + 1j * m[1], MANDEL, symmetrize=True)
    s = symmetry.transversely_isotropic(axis=3)
    P = s.project(C)
    assert P.is_complex
    assert P.real.allclose(s.project(C.real), rtol=1e-14)
    assert P.imag.allclose(s.project(C.imag), rtol=1e-14)
    with pytest.raises(DataError, match="complex"):
        s.project(C, metric="log_euclidean")


def test_large_batches_equal_single_ones() -> None:
    """Blocks leave no seam."""
    C = tensors((4003,), 4)
    s = symmetry.trigonal(axis=3, two_fold=1)
    P = s.project(C)
    for k in (0, 1999, 2000, 2001, 3999, 4000, 4002):
        assert P[k].allclose(s.project(C[k]), rtol=1e-14)


def test_an_indefinite_tensor_has_no_logarithm() -> None:
    """The error names the member and its smallest eigenvalue; the Euclidean projection still works."""
    m = np.stack([np.eye(6), np.diag([1.0, 1.0, 1.0, 1.0, 1.0, -0.25])])
    C = Stiffness.from_matrix(m, MANDEL)
    with pytest.raises(AdmissibilityError, match=r"batch member \(1,\) .* smallest eigenvalue is -0.25"):
        symmetry.cubic().project(C, metric="log_euclidean")
    assert symmetry.cubic().project(C).shape == (2,)


def test_bad_arguments_are_refused() -> None:
    """An unknown metric, and what is no tensor."""
    with pytest.raises(DataError, match="metric must be"):
        symmetry.cubic().project(tensors((), 0), metric="riemann")  # type: ignore[arg-type]
    with pytest.raises(DataError, match="metric must be"):
        symmetry.cubic().distance(tensors((), 0), metric="riemann")  # type: ignore[arg-type]
    with pytest.raises(TypeError, match="C must be a Stiffness or a Compliance, got ndarray"):
        symmetry.cubic().project(np.eye(6))  # type: ignore[type-var]


def voigt(upper: dict[str, float]) -> Stiffness:
    """Return a stiffness from components c11, c12, ... in Voigt notation."""
    m = np.zeros((6, 6))
    for name, value in upper.items():
        i, j = int(name[1]) - 1, int(name[2]) - 1
        m[i, j] = m[j, i] = value
    return Stiffness.from_matrix(m, VOIGT)


def test_published_trigonal_to_hexagonal_projection_of_quartz() -> None:
    """The closest transversely isotropic tensor drops c14; the isotropic part is the Voigt average.

    Gazis, Tadjbakhsh and Toupin (1963), Acta Cryst. 16, 917; Fedorov (1968). Constants of quartz after Bechmann (1958);
    value from memory.
    """
    item = case("PROJ-TRIG-TO-HEX-QUARTZ")
    c = item.values()
    full = c | {"c22": c["c11"], "c23": c["c13"], "c55": c["c44"], "c66": (c["c11"] - c["c12"]) / 2}
    C = voigt(full | {"c24": -c["c14"], "c56": c["c14"]})
    assert symmetry.trigonal(axis=3, two_fold=1).distance(C) < 1e-15
    hexagonal = symmetry.transversely_isotropic(axis=3).project(C).matrix(VOIGT)
    iso = symmetry.isotropic().project(C).matrix(VOIGT)
    found = {f"h{i}{j}": hexagonal[i - 1, j - 1] for i, j in ((1, 1), (1, 2), (1, 3), (3, 3), (4, 4))}
    found |= {"h14": abs(hexagonal[0, 3]), "isoK": iso[0, 0] - 4 / 3 * iso[3, 3], "isoG": iso[3, 3]}
    assert set(found) == set(item.figures)
    for name, value in found.items():
        assert abs(value - item.expected(name)) <= item.tolerance(name), name


LOG_CUBIC: list[tuple[str, Callable[[Any], float]]] = [
    ("bulk modulus", lambda k: k[0]),
    ("shear modulus", lambda k: (k[1] ** 2 * k[2] ** 3) ** 0.2),
]


@pytest.mark.parametrize(("name", "mean"), LOG_CUBIC)
def test_closed_form_of_the_log_euclidean_isotropic_part_of_a_cubic_tensor(
    name: str, mean: Callable[[Any], float]
) -> None:
    """The bulk modulus stays and the shear moduli are averaged geometrically with weights 2 and 3.

    Moakher and Norris (2006), J. Elasticity 85, 215, section 6 (value from memory).
    """
    c11, c12, c44 = 165.7, 63.9, 79.6
    C = voigt(
        {f"c{i}{j}": c11 if i == j else c12 for i in (1, 2, 3) for j in range(i, 4)}
        | dict.fromkeys(("c44", "c55", "c66"), c44)
    )
    m = symmetry.isotropic().project(C, metric="log_euclidean").matrix(VOIGT)
    found = {"bulk modulus": (m[0, 0] + 2 * m[0, 1]) / 3, "shear modulus": m[3, 3]}
    assert found[name] == pytest.approx(mean([(c11 + 2 * c12) / 3, (c11 - c12) / 2, c44]), rel=1e-13)
