"""Engineering constants: what tests along the axes measure, of any anisotropy."""

import numpy as np
import pytest
from hypothesis import given

from fourthrank import Compliance, Notation, Ordering, ShapeError, Stress
from fourthrank.moduli import engineering_constants
from tests.strategies import generators, random_stiffness

VOIGT = Notation.voigt(Ordering("11 22 33 23 13 12"))


@given(generators)
def test_constants_are_what_a_test_along_the_axes_measures(rng: np.random.Generator) -> None:
    """Uniaxial stress gives E and nu, pure shear stress gives G: each from the strains that `S @ stress` has."""
    C = random_stiffness(rng, (3,))
    constants, S = engineering_constants(C), C.inverse()
    for i in range(3):
        sigma = np.zeros((3, 3))
        sigma[i, i] = 1.0
        eps = (S @ Stress.from_tensor(sigma)).tensor()
        np.testing.assert_allclose(getattr(constants, f"E{i + 1}"), 1.0 / eps[:, i, i], rtol=1e-12)
        for j in {0, 1, 2} - {i}:
            found = getattr(constants, f"nu{i + 1}{j + 1}")
            np.testing.assert_allclose(found, -eps[:, j, j] / eps[:, i, i], rtol=1e-10, atol=1e-12)
    for i, j in ((0, 1), (0, 2), (1, 2)):
        sigma = np.zeros((3, 3))
        sigma[i, j] = sigma[j, i] = 1.0
        eps = (S @ Stress.from_tensor(sigma)).tensor()
        np.testing.assert_allclose(getattr(constants, f"G{i + 1}{j + 1}"), 0.5 / eps[:, i, j], rtol=1e-12)


def test_a_compliance_and_its_stiffness_have_the_same_constants() -> None:
    """Both kinds are read; arrays have the batch's shape and are read-only."""
    C = random_stiffness(np.random.default_rng(5), (2, 3))
    first, second = engineering_constants(C), engineering_constants(C.inverse())
    assert first.shape == (2, 3)
    np.testing.assert_allclose(first.E2, second.E2, rtol=1e-13)
    assert not first.E1.flags.writeable


def test_the_table_names_each_constant() -> None:
    """The printed text pairs every symbol with its own value."""
    S = Compliance.from_matrix(np.diag([0.5, 0.25, 0.2, 0.1, 0.125, 1.0]), VOIGT)
    text = str(engineering_constants(S).table(unit="GPa"))
    for words in ("E1 = 2", "E2 = 4", "E3 = 5", "G23 = 10", "G13 = 8", "G12 = 1", "(GPa)", "nu21 = 0"):
        assert words in text
    with pytest.raises(ShapeError, match=r"batch has shape \(1,\)"):
        engineering_constants(Compliance.stack([S])).table(unit="GPa")
