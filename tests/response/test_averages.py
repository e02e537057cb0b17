"""Averages over orientations: numerical averages, published aggregates, bounds and indices."""

import numpy as np
import pytest
from hypothesis import given

from fourthrank import Notation, Ordering, Stiffness, rotation
from fourthrank.moduli import Isotropic
from fourthrank.response import (
    hill_average,
    log_euclidean_anisotropy,
    reuss_average,
    universal_anisotropy,
    voigt_average,
)
from fourthrank.symmetry import isotropic
from tests.reference import Case, cases
from tests.reference.matrices import voigt_matrix
from tests.strategies import generators, random_stiffness

VOIGT = Notation.voigt(Ordering("11 22 33 23 13 12"))


@given(generators)
def test_averages_are_the_isotropic_parts(rng: np.random.Generator) -> None:
    """Voigt's average is the isotropic part of the stiffness, Reuss's that of the compliance."""
    C = random_stiffness(rng, (3,))
    assert voigt_average(C).stiffness().allclose(isotropic().project(C), rtol=1e-12)
    assert reuss_average(C).compliance().allclose(isotropic().project(C.inverse()), rtol=1e-10)


@given(generators)
def test_averages_do_not_depend_on_the_axes_and_keep_their_order(rng: np.random.Generator) -> None:
    """Turning changes nothing; Reuss <= Hill <= Voigt; both kinds of tensor are read; indices are not negative."""
    C = random_stiffness(rng, (2,))
    turned = C.rotate(rotation.random((), rng))
    upper, middle, lower = voigt_average(C), hill_average(C), reuss_average(C.inverse())
    for name in ("K", "G"):
        np.testing.assert_allclose(getattr(hill_average(turned), name), getattr(middle, name), rtol=1e-9)
        assert (getattr(lower, name) <= getattr(middle, name) * (1 + 1e-12)).all()
        assert (getattr(middle, name) <= getattr(upper, name) * (1 + 1e-12)).all()
    np.testing.assert_allclose(voigt_average(C.inverse()).K, upper.K, rtol=1e-9)
    ratio_K, ratio_G = upper.K / lower.K, upper.G / lower.G
    np.testing.assert_allclose(universal_anisotropy(C), 5 * ratio_G + ratio_K - 6, rtol=1e-9)
    np.testing.assert_allclose(
        log_euclidean_anisotropy(C), np.hypot(np.log(ratio_K), 5**0.5 * np.log(ratio_G)), rtol=1e-9
    )
    assert (universal_anisotropy(C) >= 0).all()


def test_isotropic_tensors_are_their_own_average() -> None:
    """All averages agree and both indices vanish."""
    C = Isotropic.from_two(K=[100.0, 30.0], G=[50.0, 60.0]).stiffness()
    for average in (voigt_average, reuss_average, hill_average):
        np.testing.assert_allclose(average(C).K, [100.0, 30.0], rtol=1e-14)
        np.testing.assert_allclose(average(C).G, [50.0, 60.0], rtol=1e-14)
    np.testing.assert_allclose(universal_anisotropy(C), 0.0, atol=1e-13)
    np.testing.assert_allclose(log_euclidean_anisotropy(C), 0.0, atol=1e-13)


FIGURES = {"KH", "GH", "KR", "EV", "ER", "A", "AU", "nuH"}
AGGREGATES = [item for item in cases() if item.system and FIGURES & set(item.figures)]


def test_there_are_published_aggregates() -> None:
    """The selection below is not empty: crystals of at least five systems."""
    assert len(AGGREGATES) >= 12
    assert len({item.system for item in AGGREGATES}) >= 5


@pytest.mark.parametrize("item", AGGREGATES, ids=[item.id for item in AGGREGATES])
def test_published_aggregates(item: Case) -> None:
    """Hill averages, Reuss and Voigt moduli and the index of printed single crystals; sources stand in the tables."""
    # Bass 1995 and the papers named with each case; whether seen in print is said there.
    C = Stiffness.from_matrix(voigt_matrix(item), VOIGT)
    found = {
        "KH": hill_average(C).K, "GH": hill_average(C).G, "nuH": hill_average(C).nu, "KR": reuss_average(C).K,
        "EV": voigt_average(C).E, "ER": reuss_average(C).E, "AU": universal_anisotropy(C),
    }  # fmt: skip
    for name in sorted(found.keys() & item.figures.keys()):
        assert abs(float(found[name]) - item.expected(name)) <= item.tolerance(name), name
