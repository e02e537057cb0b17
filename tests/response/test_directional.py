"""Directional constants: definitions on full tensors, invariance, published values, and what is refused."""

from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from fourthrank import DataError, Notation, Ordering, RotationError, ShapeError, Stiffness, rotation
from fourthrank.response import linear_compressibility, poisson_ratio, shear_modulus, young_modulus
from tests.reference import case
from tests.reference.matrices import voigt_matrix
from tests.strategies import broadcastable_batches, generators, random_stiffness

VOIGT = Notation.voigt(Ordering("11 22 33 23 13 12"))


def random_pairs(rng: np.random.Generator, batch: tuple[int, ...]) -> tuple[Any, Any]:
    """Return perpendicular directions of any length."""
    axes = rotation.random(batch, rng)
    return 3.0 * axes[..., 0, :], 0.2 * axes[..., 1, :]


@given(generators, broadcastable_batches())
def test_directional_constants_are_sums_over_the_compliance_tensor(
    rng: np.random.Generator, batches: tuple[tuple[int, ...], ...]
) -> None:
    """Each of the four agrees with einsum on S_ijkl, for every broadcast of materials against directions."""
    C = random_stiffness(rng, batches[0])
    n, m = random_pairs(rng, batches[1])
    S, u, v = C.inverse().tensor(), n / 3.0, m / 0.2
    E = 1.0 / np.einsum("...ijkl,...i,...j,...k,...l->...", S, u, u, u, u)
    nu = -E * np.einsum("...ijkl,...i,...j,...k,...l->...", S, u, u, v, v)
    G = 0.25 / np.einsum("...ijkl,...i,...j,...k,...l->...", S, u, v, u, v)
    beta = np.einsum("...ijkk,...i,...j->...", S, u, u)
    for source in (C, C.inverse()):
        np.testing.assert_allclose(young_modulus(source, n), E, rtol=1e-9)
        np.testing.assert_allclose(poisson_ratio(source, n, m), nu, rtol=1e-9, atol=1e-9)
        np.testing.assert_allclose(shear_modulus(source, n, m), G, rtol=1e-9)
        np.testing.assert_allclose(linear_compressibility(source, n), beta, rtol=1e-9, atol=1e-9)


@given(generators, st.sampled_from([(), (5,)]))
def test_nothing_changes_when_body_and_directions_turn_together(
    rng: np.random.Generator, batch: tuple[int, ...]
) -> None:
    """f(R C, R n, R m) = f(C, n, m)."""
    C, R = random_stiffness(rng, batch), rotation.random((), rng)
    n, m = random_pairs(rng, batch)
    turned = C.rotate(R)
    np.testing.assert_allclose(young_modulus(turned, n @ R.T), young_modulus(C, n), rtol=1e-10)
    np.testing.assert_allclose(poisson_ratio(turned, n @ R.T, m @ R.T), poisson_ratio(C, n, m), rtol=1e-10, atol=1e-10)
    np.testing.assert_allclose(shear_modulus(turned, n @ R.T, m @ R.T), shear_modulus(C, n, m), rtol=1e-10)


def test_silicon_along_its_principal_directions() -> None:
    """E, nu and G along <100>, <110> and <111>."""
    # Hopcroft, Nix and Kenny 2010, J. Microelectromech. Syst. 19, 229-238; values from memory.
    item = case("CUB-SI-HOPCROFT")
    C = Stiffness.from_matrix(voigt_matrix(item), VOIGT)
    found = {
        "E100": young_modulus(C, [1, 0, 0]),
        "E110": young_modulus(C, [1, 1, 0]),
        "E111": young_modulus(C, [1, 1, 1]),
        "nu_100_010": poisson_ratio(C, [1, 0, 0], [0, 1, 0]),
        "nu_110_001": poisson_ratio(C, [1, 1, 0], [0, 0, 1]),
        "nu_001_110": poisson_ratio(C, [0, 0, 1], [1, 1, 0]),
        "G_110_001": shear_modulus(C, [1, 1, 0], [0, 0, 1]),
        "G_110_1m10": shear_modulus(C, [1, 1, 0], [1, -1, 0]),
    }
    for name, value in found.items():
        assert abs(float(value) - item.expected(name)) <= item.tolerance(name), name


@pytest.mark.parametrize("name", ["AUX-NU110-AG", "AUX-NU110-AU", "AUX-NU110-AL"])
def test_cubic_metals_stretched_along_110(name: str) -> None:
    """The lateral ratios along [1-10], negative for silver and gold, and along [001]."""
    # Baughman, Shacklette, Zakhidov and Stafstroem 1998, Nature 392, 362-365; values from memory.
    item = case(name)
    C = Stiffness.from_matrix(voigt_matrix(item), VOIGT)
    for figure, m in (("nu_1m10", [1, -1, 0]), ("nu_001", [0, 0, 1])):
        assert abs(float(poisson_ratio(C, [1, 1, 0], m)) - item.expected(figure)) <= item.tolerance(figure)


def test_linear_compressibilities_of_aragonite() -> None:
    """Along a and c as printed; the printed one along b does not follow from the printed constants."""
    # Liu, Chen, Lin and Yang 2005, Phys. Chem. Minerals 32, 97-102, abstract; seen.
    item = case("ORT-ARAGONITE")
    beta = 1000.0 * linear_compressibility(Stiffness.from_matrix(voigt_matrix(item), VOIGT), np.eye(3))
    for axis, name in ((0, "beta_a"), (2, "beta_c")):
        assert abs(float(beta[axis]) - item.expected(name)) <= item.tolerance(name)
    assert abs(float(beta[1]) - float(item.not_reproduced["beta_b"].computed)) < 1e-4


def test_complex_moduli_give_complex_constants() -> None:
    """A common loss factor scales Young's modulus."""
    C = random_stiffness(np.random.default_rng(3), ())
    lossy = young_modulus(C * (1 + 0.05j), [1, 2, 3])
    assert abs(lossy / young_modulus(C, [1, 2, 3]) - (1 + 0.05j)) < 1e-12


def test_directions_that_are_none_are_refused() -> None:
    """Zero, not finite, not perpendicular, not broadcasting: each names the argument, the member and the amount."""
    C = random_stiffness(np.random.default_rng(4), (2,))
    with pytest.raises(RotationError, match=r"n of batch member \(1,\) has zero length"):
        young_modulus(C, [[1, 0, 0], [0, 0, 0]])
    with pytest.raises(DataError, match=r"n: component 2 of batch member \(0,\) is nan"):
        young_modulus(C, [[1, np.nan, 0]])
    with pytest.raises(
        DataError, match=r"n and m of batch member \(1,\) must be perpendicular: their angle is 45 degrees"
    ):
        shear_modulus(C, [[1, 0, 0], [1, 0, 0]], [[0, 1, 0], [1, 1, 0]])
    with pytest.raises(ShapeError, match=r"\(2,\) of C and \(3,\) of directions"):
        young_modulus(C, np.eye(3))
