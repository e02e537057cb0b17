"""Admissibility: definiteness, the weakest mode, and the bounds on engineering constants."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from fourthrank import Compliance, DataError, Notation, Ordering, Stiffness
from fourthrank.assurance import admissibility
from fourthrank.moduli import Orthotropic
from tests.reference import case
from tests.strategies import generators

VOIGT = Notation.voigt(Ordering("11 22 33 23 13 12"))
MANDEL = Notation.mandel(Ordering("11 22 33 23 13 12"))


def voigt_compliance(nu12: float, nu13: float, nu23: float, E3: float = 1.0) -> Compliance:
    """Return an orthotropic compliance that the constructor of `Orthotropic` would refuse, E1 = E2 = 1, G = 1."""
    S = np.diag([1.0, 1.0, 1.0 / E3, 1.0, 1.0, 1.0])
    S[0, 1] = S[1, 0] = -nu12
    S[0, 2] = S[2, 0] = -nu13
    S[1, 2] = S[2, 1] = -nu23
    return Compliance.from_matrix(S, VOIGT)


@given(generators, st.sampled_from([(), (4,), (0,)]))
def test_the_smallest_eigenvalue_and_its_mode_belong_together(rng: np.random.Generator, batch: tuple[int, ...]) -> None:
    """C : e = lambda e for the mode, whose energy is lambda, and no other strain of unit norm has less."""
    A = rng.normal(size=(*batch, 6, 6))
    C = Stiffness.from_matrix(A + A.swapaxes(-1, -2), MANDEL)
    report = admissibility(C)
    sigma = (C @ report.mode).vector(MANDEL)
    expected = report.smallest[..., None] * report.mode.vector(MANDEL)
    np.testing.assert_allclose(sigma, expected, atol=1e-13 * 20)
    np.testing.assert_allclose(report.mode.norm(), np.ones(batch), rtol=1e-14)
    others = rng.normal(size=(50, *batch, 6))
    others /= np.linalg.norm(others, axis=-1, keepdims=True)
    energy = np.einsum("k...i,...ij,k...j->k...", others, C.matrix(MANDEL), others)
    assert (energy >= report.smallest - 1e-12).all()
    assert (energy <= report.largest + 1e-12).all()
    np.testing.assert_array_equal(report.positive_definite, report.smallest > 0)


@given(generators)
def test_orthotropic_bounds_decide_like_the_eigenvalues(rng: np.random.Generator) -> None:
    """In the axes of an orthotropic solid all bounds hold exactly where the tensor is positive definite."""
    nu12, nu13, nu23 = rng.uniform(-1.2, 1.2, 3)
    S = voigt_compliance(nu12, nu13, nu23, E3=float(rng.uniform(0.2, 3.0)))
    report = admissibility(S)
    if abs(float(report.smallest)) > 1e-9:
        assert report.admissible == (not report.violated)


@pytest.mark.parametrize(
    ("constants", "broken"),
    [
        ((1.1, 0.0, 0.0), {"|nu12| < sqrt(E1 / E2)", "|nu21| < sqrt(E2 / E1)"}),
        ((0.0, -1.1, 0.0), {"|nu13| < sqrt(E1 / E3)", "|nu31| < sqrt(E3 / E1)"}),
        ((0.7, 0.7, 0.7), set[str]()),
    ],
)
def test_the_violated_bound_is_named(constants: tuple[float, float, float], broken: set[str]) -> None:
    """Three ratios of 0.7 keep each its own bound and break the one on all together."""
    report = admissibility(voigt_compliance(*constants))
    assert not report.admissible
    together = "nu12 nu21 + nu23 nu32 + nu13 nu31 + 2 nu21 nu32 nu13 < 1"
    assert {bound.text for bound in report.violated} == broken | {together}
    assert all((bound.margin < 0).all() for bound in report.violated)


def test_margins_are_the_distance_to_the_bound() -> None:
    """The printed Douglas-fir ratios keep their bounds, by margins that follow from them."""
    # Wood Handbook FPL-GTR-282 (2021), Tables 5-1 and 5-2; shear ratios from memory.
    fir = case("WOOD-DOUGLASFIR")
    ER, ET = fir.value("ER"), fir.value("ET")
    wood = Orthotropic(
        E1=1.0, E2=ER, E3=ET, G12=0.064, G13=0.078, G23=0.007,
        nu12=fir.value("nuLR"), nu13=fir.value("nuLT"), nu23=fir.value("nuRT"),
    )  # fmt: skip
    report = admissibility(wood.stiffness())
    bounds = {bound.text: bound for bound in report.inequalities}
    assert report.admissible
    assert not report.violated
    assert bounds["|nu12| < sqrt(E1 / E2)"].margin == pytest.approx(ER**-0.5 - 0.292)
    assert bounds["|nu32| < sqrt(E3 / E2)"].margin == pytest.approx((ET / ER) ** 0.5 - 0.390 * ET / ER)
    assert bounds["G23 > 0"].left == bounds["G23 > 0"].margin == pytest.approx(0.007)
    assert report.smallest == pytest.approx(2 * 0.007)


def test_the_text_tells_the_worst_of_a_batch() -> None:
    """The report names the failing member, its eigenvalue and mode, the count, and each violated bound."""
    good = np.diag([2.0, 2.0, 2.0, 1.0, 1.0, 1.0])
    bad = good.copy()
    bad[5, 5] = -0.1
    report = admissibility(Stiffness.from_matrix([good, bad, good], VOIGT))
    text = str(report)
    for words in (
        "Admissibility of a stiffness of batch member (1,): NOT POSITIVE DEFINITE; 1 of the batch of 3 are not",
        "smallest eigenvalue -0.2 (the smallest Kelvin modulus), largest 2",
        "unit norm: 12 0.707",
        "VIOLATED",
    ):
        assert words in text.replace("12 -0.707", "12 0.707")
    html = report._repr_html_()  # pyright: ignore[reportPrivateUsage]  # what a notebook calls
    assert "<table>" in html
    assert "&lt; sqrt" in html
    single = str(admissibility(Compliance.from_matrix(good, VOIGT)))
    assert "Admissibility of a compliance: positive definite\n" in single
    assert "the reciprocal of the largest Kelvin modulus" in single
    assert "VIOLATED" not in single


def test_a_singular_tensor_is_reported_and_not_raised() -> None:
    """Zero stiffness has no engineering constants: no bound holds, and nothing warns."""
    report = admissibility(Stiffness.from_matrix(np.zeros((6, 6)), VOIGT))
    assert not report.admissible
    assert len(report.violated) == len(report.inequalities) == 13
    assert "NOT POSITIVE DEFINITE" in str(report)


def test_empty_batches_and_complex_moduli() -> None:
    """An empty batch is admissible and says so; complex moduli are refused with the way on."""
    empty = admissibility(Stiffness.from_matrix(np.zeros((0, 6, 6)), VOIGT))
    assert empty.admissible
    html = empty._repr_html_()  # pyright: ignore[reportPrivateUsage]  # what a notebook calls
    assert str(empty) == html == "Admissibility of a stiffness: an empty batch"
    with pytest.raises(DataError, match=r"complex Stiffness: look at its \.real part"):
        admissibility(Stiffness.from_matrix(np.eye(6) * (1 + 0.1j), VOIGT))
