"""Plane stress and plane strain: formulas, both routes, the planes, the weights, refusals."""

from collections.abc import Callable

import numpy as np
import pytest
from numpy.testing import assert_allclose

from fourthrank import AdmissibilityError, Compliance, Notation, NotationError, Ordering, OrderingError, Stiffness
from fourthrank.moduli import Isotropic, Orthotropic, plane_strain_stiffness, plane_stress_stiffness

SHEET = Notation.voigt(Ordering("11 22 12"))
FULL = Notation.voigt(Ordering("11 22 33 23 13 12"))
PLY = Orthotropic(E1=140.0, E2=10.0, E3=9.0, G12=5.0, G13=4.0, G23=3.0, nu12=0.3, nu13=0.25, nu23=0.4)


def general(*batch: int) -> Stiffness:
    factor = np.random.default_rng(7).normal(size=(*batch, 6, 6))
    return Stiffness.from_matrix(factor @ factor.swapaxes(-1, -2) + np.eye(6), Notation.mandel(FULL.ordering))


def test_plane_stress_of_a_ply_is_the_formula_of_laminate_theory() -> None:
    # Jones, R. M. (1975), Mechanics of Composite Materials, section 2.5; formula from memory, numbers invented.
    D = 1.0 - 0.3 * 0.3 * 10.0 / 140.0
    expected = [[140.0 / D, 3.0 / D, 0.0], [3.0 / D, 10.0 / D, 0.0], [0.0, 0.0, 5.0]]
    for tensor in (PLY.stiffness(), PLY.compliance()):
        assert_allclose(plane_stress_stiffness(tensor, SHEET), expected, rtol=1e-13, atol=1e-13)


@pytest.mark.parametrize("text", ["11 22 12", "33 13 11", "23 33 22"])
def test_stiffness_and_compliance_give_the_same_in_every_plane(text: str) -> None:
    """Both routes agree for triclinic batches, and plane stress inverts the block of the compliance."""
    C, notation = general(2, 3), Notation.voigt(Ordering(text))
    for function in (plane_stress_stiffness, plane_strain_stiffness):
        assert_allclose(function(C, notation), function(C.inverse(), notation), rtol=1e-9, atol=1e-9)
    places = [FULL.ordering.position(i, j) for i, j in notation.ordering.pairs]
    block = C.inverse().matrix(FULL)[..., np.array(places)[:, None], np.array(places)]
    assert_allclose(plane_stress_stiffness(C, notation), np.linalg.inv(block), rtol=1e-9, atol=1e-9)


@pytest.mark.parametrize("make", [Notation.voigt, Notation.mandel, Notation.tensorial])
def test_plane_strain_with_the_fourth_pair_is_the_block_of_the_full_matrix(
    make: Callable[[Ordering], Notation],
) -> None:
    """Rows and columns of the full matrix in the same weights, for every notation."""
    C, places = general(2), np.array([0, 1, 2, 5])
    full = C.matrix(make(FULL.ordering))
    assert_allclose(
        plane_strain_stiffness(C, make(Ordering("11 22 33 12"))), full[..., places[:, None], places], rtol=1e-14
    )


def test_incompressible_solid_has_plane_stress_and_no_plane_strain_stiffness() -> None:
    S = Isotropic.from_two(E=[3.0, 3.0], nu=[0.3, 0.5]).compliance()
    assert_allclose(plane_stress_stiffness(S, SHEET)[1], [[4, 2, 0], [2, 4, 0], [0, 0, 1]], atol=1e-14)
    with pytest.raises(AdmissibilityError, match=r"batch member \(1,\).*incompressible"):
        plane_strain_stiffness(S, SHEET)


def test_empty_and_complex_batches_pass() -> None:
    assert plane_stress_stiffness(general(0), SHEET).shape == (0, 3, 3)
    lossy = PLY.stiffness().scaled(1.0 + 0.1j)
    assert_allclose(
        plane_stress_stiffness(lossy, SHEET), (1 + 0.1j) * plane_stress_stiffness(PLY.stiffness(), SHEET), rtol=1e-13
    )


def test_notations_that_name_no_plane_are_refused() -> None:
    C: Stiffness | Compliance = PLY.stiffness()
    with pytest.raises(OrderingError, match="plane stress needs a notation over 3 pairs, got 4"):
        plane_stress_stiffness(C, Notation.voigt(Ordering("11 22 33 12")))
    with pytest.raises(OrderingError, match="plane strain needs a notation over 3 or 4 pairs, got 6"):
        plane_strain_stiffness(C, FULL)
    with pytest.raises(NotationError):
        plane_strain_stiffness(C, "11 22 12")  # type: ignore[arg-type]
