"""Cubic constants: round trips, the compliance against inversion, refusals, value behaviour."""

import pickle

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from fourthrank import ModuliError, Notation, Ordering, Stiffness
from fourthrank.moduli import Cubic, Orthotropic
from fourthrank.rotation import about_axis

VOIGT = Notation.voigt(Ordering("11 22 33 23 13 12"))
COPPER = Cubic(168.4, 121.4, 75.4)


@given(st.floats(0.1, 100), st.floats(0.1, 100), st.floats(0.1, 100))
def test_constants_survive_both_ways(difference: float, total: float, shear: float) -> None:
    """From the eigenvalues of any stable solid to constants, tensors and back; compliance inverts stiffness."""
    C12 = (total - difference) / 3.0
    solid = Cubic(C12 + difference, C12, shear)
    assert_allclose(Cubic.from_stiffness(solid.stiffness()).C11, solid.C11, rtol=1e-14)
    back = Cubic.from_compliance(solid.compliance())
    assert_allclose([back.C11, back.C12, back.C44], [solid.C11, solid.C12, solid.C44], rtol=1e-11, atol=1e-11)
    assert solid.compliance().allclose(solid.stiffness().inverse(), rtol=1e-11)


def test_matrix_has_the_cubic_pattern_in_every_batch_member() -> None:
    C = Cubic([168.4, 100.0], 60.0, np.array([[75.4], [20.0 + 1.0j]])).stiffness()
    matrix = C.matrix(VOIGT)
    assert C.shape == (2, 2)
    assert_allclose(matrix[1, 0, 3:, 3:], (20.0 + 1.0j) * np.eye(3))
    assert_allclose(matrix[0, 1, :3, :3], 60.0 + 40.0 * np.eye(3))


def test_another_class_or_other_axes_are_refused_with_the_amount() -> None:
    turned = COPPER.stiffness().rotate(about_axis([0, 0, 1], 0.1))
    with pytest.raises(ModuliError, match=r"batch member \(1,\) is not cubic in these axes.*of its norm"):
        Cubic.from_stiffness(Stiffness.stack([COPPER.stiffness(), turned]))
    ply = Orthotropic(E1=140.0, E2=10.0, E3=9.0, G12=5.0, G13=4.0, G23=3.0, nu12=0.3, nu13=0.25, nu23=0.4)
    with pytest.raises(ModuliError, match=r"rtol=0\.01"):
        Cubic.from_compliance(ply.compliance(), rtol=0.01)


@pytest.mark.parametrize(
    ("constants", "symbol"),
    [((2.0, 1.0, -1.0), "C44"), ((1.0, 1.0, 1.0), "C11 - C12"), ((2.0, -1.0, 1.0), r"C11 \+ 2 C12")],
)
def test_unstable_constants_are_refused_at_the_limit(constants: tuple[float, float, float], symbol: str) -> None:
    with pytest.raises(ModuliError, match=f"^{symbol} is .* must be positive"):
        Cubic(*constants)


def test_values_compare_print_and_travel() -> None:
    assert pickle.loads(pickle.dumps(COPPER)) == COPPER
    assert Cubic(168.4, 121.4, 75.5) != COPPER
    assert COPPER != "copper"
    assert repr(COPPER) == "Cubic(C11=168.4, C12=121.4, C44=75.4)"
    assert repr(Cubic([2.0, 3.0], 1.0, 1.0)) == "<Cubic: batch shape (2,)>"
    with pytest.raises(AttributeError, match="immutable"):
        COPPER.C11 = np.float64(1.0)  # type: ignore[assignment]
