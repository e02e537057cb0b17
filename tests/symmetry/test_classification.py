"""Classification: the right class for tensors of every class, from a tolerance or from uncertainties."""

from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from fourthrank import DataError, Notation, NotationError, Ordering, ShapeError, Stiffness, rotation, symmetry
from fourthrank.symmetry import classify
from tests.reference import case

VOIGT = Notation.voigt(Ordering("11 22 33 23 13 12"))
MANDEL = Notation.mandel(Ordering("11 22 33 23 13 12"))
NAMES = [
    "isotropic",
    "cubic",
    "transversely isotropic",
    "tetragonal",
    "trigonal",
    "orthotropic",
    "monoclinic",
    "triclinic",
]
MEMBERS = {
    "isotropic": symmetry.isotropic(),
    "cubic": symmetry.cubic(),
    "transversely isotropic": symmetry.transversely_isotropic(axis=1),
    "tetragonal": symmetry.tetragonal(axis=2, constants=7),
    "trigonal": symmetry.trigonal(axis=1, constants=7),
    "orthotropic": symmetry.orthotropic(),
    "monoclinic": symmetry.monoclinic(axis=2),
    "triclinic": symmetry.triclinic(),
}


def definite(shape: tuple[int, ...], seed: int) -> Stiffness:
    a = np.random.default_rng(seed).standard_normal((*shape, 6, 6))
    return Stiffness.from_matrix(a @ a.swapaxes(-1, -2) + np.eye(6), MANDEL, symmetrize=True)


def upper(values: dict[str, float]) -> Stiffness:
    m = np.zeros((6, 6))
    for name, value in values.items():
        i, j = int(name[1]) - 1, int(name[2]) - 1
        m[i, j] = m[j, i] = value
    return Stiffness.from_matrix(m, VOIGT)


@pytest.mark.parametrize("name", NAMES)
def test_tensors_of_a_class_are_found_in_any_axes(name: str) -> None:
    """20 random tensors of the class, turned at random; the 7-constant Laue classes are the 6-constant ones, turned."""
    rng = np.random.default_rng(len(name))
    C = MEMBERS[name].project(definite((20,), 5)).rotate(rotation.random(20, rng))
    found = classify(C, rtol=1e-9)
    assert found.names.tolist() == [name] * 20
    assert [s.name for s in found.symmetries] == NAMES
    assert found.distances.shape == found.limits.shape == found.order.shape == (20, 8)


@given(st.integers(0, 2**32 - 1), st.sampled_from([(), (0,), (2, 3)]))
def test_distances_respect_the_order_of_the_classes(seed: int, shape: tuple[int, ...]) -> None:
    """A class that lies within another is never closer; the order is that of the distances; triclinic is at zero."""
    found = classify(definite(shape, seed), rtol=0.01)
    iso, cub, hexa, tet, tri, ort, mono, none = np.moveaxis(found.distances, -1, 0)
    for wider, narrower in ((tet, cub), (tet, hexa), (tri, cub), (tri, hexa), (ort, tet), (mono, ort), (mono, tri)):
        assert (wider <= narrower + 1e-12).all()
    assert (iso >= cub - 1e-12).all()
    assert (iso >= hexa - 1e-12).all()
    assert (none < 1e-14).all()
    assert (np.diff(np.take_along_axis(found.distances, found.order, -1), axis=-1) >= 0.0).all()
    assert found.chosen.shape == found.names.shape == shape


def test_the_tolerance_decides() -> None:
    """With 1 % noise, 2 % accepts the class and 0.01 % none; a tolerance of 1 accepts isotropy."""
    C = symmetry.orthotropic().project(definite((), 3))
    noise = Stiffness.from_matrix(np.random.default_rng(1).standard_normal((6, 6)), MANDEL, symmetrize=True)
    measured = C + noise * float(0.01 * C.norm() / noise.norm())
    assert str(classify(measured, rtol=0.02).names) == "orthotropic"
    assert str(classify(measured, rtol=1e-4).names) == "triclinic"
    assert str(classify(measured, rtol=1.0).names) == "isotropic"
    assert classify(measured, rtol=0.02).best.distance <= 0.01


def test_published_silicon_along_110_is_cubic() -> None:
    """Stiffness of silicon in the axes [110], [-110], [001] of a wafer, GPa, printed to 0.1.

    Hopcroft, Nix and Kenny (2010), J. Microelectromech. Syst. 19, 229-238, eq. (8) (value from memory).
    """
    C = upper(
        {"c11": 194.5, "c22": 194.5, "c33": 165.7, "c12": 35.7, "c13": 64.1, "c23": 64.1}
        | {"c44": 79.6, "c55": 79.6, "c66": 50.9}
    )
    found = classify(C, rtol=1e-3)
    assert str(found.names) == "cubic"
    assert np.allclose(found.best.projection.in_axes(found.best.axes).matrix(VOIGT)[0, :2], [165.7, 63.9], atol=0.3)
    # The cube's edges lie 45 degrees off in the plane of the wafer: the smallest turn is about x3.
    assert rotation.angle_between(found.best.axes, np.eye(3), degrees=True) == pytest.approx(45.0, abs=1e-3)
    # From the rounding of the printed figures alone: half a unit in the last place is 1/sqrt(12) units of deviation.
    rounding = np.full((6, 6), 0.1 / np.sqrt(12.0))
    assert str(classify(C, uncertainties=rounding, notation=VOIGT).names) == "cubic"


def test_published_at_cut_quartz_is_trigonal() -> None:
    """Stiffness of quartz in the axes of the AT cut, monoclinic at first sight, with its three-fold axis 35 deg off.

    Tiersten (1969), Linear Piezoelectric Plate Vibrations (value from memory).
    """
    item = case("QUARTZ-AT-C")
    C = upper({name: figure.value for name, figure in item.figures.items()})
    found = classify(C, rtol=1e-3)
    assert str(found.names) == "trigonal"
    assert found.best.distance < 2e-4
    own = found.best.projection.in_axes(found.best.axes).matrix(VOIGT)
    inputs = item.values()
    assert own[2, 2] == pytest.approx(inputs["c33"], abs=0.05)
    assert abs(own[0, 3]) == pytest.approx(abs(inputs["c14"]), abs=0.02)
    # The three-fold axis is turned by 35.25 degrees about x1.
    assert abs(found.best.axes[2, 2]) == pytest.approx(np.cos(np.deg2rad(35.25)), abs=1e-3)
    rounding = np.full((6, 6), 0.01 / np.sqrt(12.0))
    assert str(classify(C, uncertainties=rounding, notation=VOIGT, coverage=3.0).names) == "trigonal"


def test_uncertainties_accept_the_true_class_and_refuse_higher_ones() -> None:
    """Errors of known size in Voigt elements: the share of accepted tensors is close to 1, and none is taken higher."""
    rng = np.random.default_rng(2)
    for name in ("cubic", "transversely isotropic", "orthotropic", "monoclinic"):
        C = MEMBERS[name].project(definite((100,), 7)).rotate(rotation.random(100, rng))
        u = rng.uniform(0.5, 2.0, (6, 6)) * 1e-4
        u = np.triu(u) + np.triu(u, 1).T
        errors = np.triu(rng.standard_normal((100, 6, 6)))
        errors = (errors + np.triu(errors, 1).swapaxes(-1, -2)) * u
        measured = C + Stiffness.from_matrix(errors, VOIGT)
        found = classify(measured, uncertainties=u, notation=VOIGT)
        assert np.mean(found.names == name) > 0.97
        assert (found.chosen >= NAMES.index(name)).all()
        # Distances of errors alone scatter about the root mean square on which the limit rests, less what axes absorb.
        k = NAMES.index(name)
        ratio = 2.0 * found.distances[:, k] / found.limits[:, k]
        assert 0.5 < np.sqrt(np.mean(ratio**2)) < 1.05


def test_limits_follow_the_uncertainties() -> None:
    """For isotropy trace((1 - P) S) has a closed form; limits scale with the coverage and vanish for exact data."""
    C = definite((2,), 9)
    one = classify(C, uncertainties=np.full((6, 6), 0.1), notation=MANDEL, coverage=1.0)
    # Equal variances s^2 of Mandel elements: 6 diagonal ones count once, 15 off-diagonal ones twice.
    basis = symmetry.isotropic().basis
    weights = np.where(np.eye(6, dtype=bool), 1.0, np.sqrt(2.0))
    inside = ((basis * weights) ** 2).sum(axis=0)
    upper_triangle = np.triu(np.where(np.eye(6, dtype=bool), 1.0, 2.0) * (1.0 - inside))
    expected = np.sqrt(0.01 * upper_triangle.sum()) / C.norm()
    assert np.allclose(one.limits[:, 0], expected, rtol=1e-12)
    three = classify(C, uncertainties=np.full((2, 6, 6), 0.1), notation=MANDEL, coverage=3.0)
    assert np.allclose(three.limits, 3.0 * one.limits, rtol=1e-12)
    assert (one.limits[:, -1] < 1e-8).all()
    exact = classify(C, uncertainties=np.zeros((6, 6)), notation=MANDEL)
    assert exact.names.tolist() == ["triclinic"] * 2
    zero = classify(C.scaled(0.0), uncertainties=np.zeros((6, 6)), notation=MANDEL)
    assert zero.names.tolist() == ["isotropic"] * 2


def test_the_table_shows_the_classes_by_distance() -> None:
    """A labelled table for one tensor; a batch has to be indexed first."""
    C = symmetry.tetragonal(axis=3).project(definite((), 4))
    found = classify(C, rtol=1e-9)
    lines = str(found.table()).splitlines()
    assert lines[0] == "closest class within the limits: tetragonal"
    assert sum("chosen" in line for line in lines) == 1
    assert lines[-1].startswith("isotropic")
    assert found.best.symmetry.name == "tetragonal"
    batch = classify(definite((2,), 1), rtol=0.1)
    with pytest.raises(ShapeError, match="single tensor"):
        batch.table()
    with pytest.raises(ShapeError, match="single tensor"):
        _ = batch.best


BAD: list[tuple[dict[str, Any], type[Exception], str]] = [
    ({}, DataError, "exactly one of rtol and uncertainties"),
    ({"rtol": 0.1, "uncertainties": np.ones((6, 6)), "notation": VOIGT}, DataError, "exactly one"),
    ({"rtol": -0.1}, DataError, "rtol must be a finite number that is not negative"),
    ({"rtol": np.nan}, DataError, "rtol must be"),
    ({"rtol": 0.1, "notation": VOIGT}, NotationError, "for uncertainties only"),
    ({"uncertainties": np.ones((6, 6))}, NotationError, "need the notation"),
    ({"uncertainties": np.ones((6, 6)), "notation": "voigt"}, NotationError, "must be a Notation"),
    ({"uncertainties": np.ones(21), "notation": VOIGT}, ShapeError, "shape"),
    ({"uncertainties": np.ones((3, 6, 6)), "notation": VOIGT}, ShapeError, "do not fit"),
    ({"uncertainties": np.full((6, 6), np.nan), "notation": VOIGT}, DataError, "finite"),
    ({"uncertainties": -np.ones((6, 6)), "notation": VOIGT}, DataError, "not be negative, element 1, 1 is -1"),
    ({"uncertainties": np.ones((6, 6)), "notation": VOIGT, "coverage": -1.0}, DataError, "coverage must be"),
]


@pytest.mark.parametrize(("options", "error", "text"), BAD)
def test_bad_arguments_are_refused(options: dict[str, Any], error: type[Exception], text: str) -> None:
    """Each with a message that says what is missing or wrong."""
    with pytest.raises(error, match=text):
        classify(definite((2,), 0), **options)
