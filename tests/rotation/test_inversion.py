"""Inverses: exactly symmetric, with a residual of a few eps times the condition number, by every method."""

from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from numpy.typing import NDArray

import fourthrank as fr
from fourthrank import _mandel, rotation

EPS = np.finfo(float).eps
MANDEL = fr.Notation.mandel(fr.Ordering("11 22 33 23 13 12"))
COUNTS = [1, 3, 150, 2100]
"""Both sides of the change to blocks, and of the first block."""


def with_values(values: NDArray[Any], rng: np.random.Generator) -> NDArray[Any]:
    """Return symmetric matrices with these eigenvalues."""
    Q = np.linalg.qr(rng.standard_normal((*values.shape, 6)))[0]
    matrix = (Q * values[..., None, :]) @ Q.swapaxes(-1, -2)
    return np.asarray((matrix + matrix.swapaxes(-1, -2)) / 2)


def norm(matrix: NDArray[Any]) -> NDArray[np.float64]:
    return np.asarray(np.linalg.norm(matrix, axis=(-2, -1)))


def check_inverse(matrix: NDArray[Any], inverse: NDArray[Any], bound: float) -> None:
    np.testing.assert_array_equal(inverse, inverse.swapaxes(-1, -2))
    for product in (matrix @ inverse, inverse @ matrix):
        assert (norm(product - np.eye(6)) <= bound * EPS * norm(matrix) * norm(inverse)).all()


@pytest.mark.parametrize("count", COUNTS)
@given(seed=st.integers(0, 2**32), decades=st.floats(0.0, 14.0))
def test_residual_is_a_few_eps_times_the_condition_number(count: int, seed: int, decades: float) -> None:
    """|C S - 1| < 8 eps |C| |S| up to a condition number of 1e14, also on the other side."""
    rng = np.random.default_rng(seed)
    values = 10.0 ** -rng.uniform(0.0, decades, (count, 6))
    values[:, :2] = 1.0, 10.0**-decades
    C = fr.Stiffness.from_matrix(7.0 * with_values(values, rng), MANDEL)
    S = C.inverse()
    assert type(S) is fr.Compliance
    check_inverse(C.matrix(MANDEL), S.matrix(MANDEL), 8.0)


@pytest.mark.parametrize("count", COUNTS)
def test_indefinite_matrices_are_inverted_as_well(count: int) -> None:
    """Negative eigenvalues in one member of the batch, or in all of them."""
    rng = np.random.default_rng(3)
    values = rng.uniform(0.1, 1.0, (count, 6))
    values[count // 2, 3] *= -1.0
    matrix = with_values(values, rng)
    inverse, bound = _mandel.invert(matrix)
    check_inverse(matrix, inverse, 30.0)
    assert (bound >= norm(matrix) * norm(inverse) / 6.5).all()
    matrix = with_values(-values, rng)
    check_inverse(matrix, _mandel.invert(matrix)[0], 30.0)
    # A first pivot that is nearly nothing, where elimination in order would lose everything.
    matrix[-1] = np.eye(6)[[1, 0, 2, 3, 4, 5]] + 1e-13 * np.eye(6)
    check_inverse(matrix, _mandel.invert(matrix)[0], 30.0)


@pytest.mark.parametrize("count", COUNTS)
def test_beyond_1e15_the_bound_is_the_condition_number(count: int) -> None:
    """|M| |X| in the Frobenius norm, for the nearly singular member of a batch."""
    matrix = np.tile(np.eye(6), (count, 1, 1))
    matrix[-1, 5, 5] = 1e-16
    bound = _mandel.invert(matrix)[1]
    np.testing.assert_allclose(bound[-1], 5**0.5 * 1e16, rtol=1e-12)
    assert (bound[:-1] <= 36.0).all()


@pytest.mark.parametrize("count", COUNTS)
@given(seed=st.integers(0, 2**32), decades=st.floats(0.0, 12.0))
def test_complex_moduli_are_inverted_as_well(count: int, seed: int, decades: float) -> None:
    """Symmetric, not Hermitian: storage and loss moduli positive definite, to the same residual."""
    rng = np.random.default_rng(seed)
    storage = with_values(10.0 ** -rng.uniform(0.0, decades, (count, 6)), rng)
    loss = with_values(10.0 ** -rng.uniform(0.0, decades, (count, 6)), rng)
    C = fr.Stiffness.from_matrix(storage + 0.3j * loss, MANDEL)
    check_inverse(C.matrix(MANDEL), C.inverse().matrix(MANDEL), 30.0)


def test_complex_matrices_without_a_definite_real_part_are_inverted_as_well() -> None:
    """The general inverse takes over, symmetric all the same, and one singular member does not spoil the others."""
    rng = np.random.default_rng(4)
    values = rng.choice([-1.0, 1.0], (50, 6)) * rng.uniform(0.5, 1.0, (50, 6))
    matrix = with_values(values, rng) + 1j * with_values(values, rng)
    inverse = _mandel.invert(matrix)[0]
    check_inverse(matrix, inverse, 300.0)
    matrix[7] = 0.0
    again, bound = _mandel.invert(matrix)
    assert bound[7] == np.inf
    assert np.isnan(again[7]).all()
    np.testing.assert_array_equal(np.delete(again, 7, axis=0), np.delete(inverse, 7, axis=0))


@pytest.mark.parametrize("count", COUNTS)
@pytest.mark.parametrize("factor", [1.0, 1.0 + 0.1j])
@pytest.mark.parametrize("smallest", [0.0, 1e-17])
def test_a_singular_member_is_named(count: int, factor: complex, smallest: float) -> None:
    """An incompressible or otherwise constrained solid has no inverse; the error says which member."""
    values = np.ones((count, 6))
    values[-1, 5] = smallest
    matrix = np.zeros((count, 6, 6), complex) + np.eye(6)
    matrix[-1] = np.diag(values[-1])
    data = (factor * matrix) if factor != 1.0 else matrix.real
    with pytest.raises(fr.AdmissibilityError, match=rf"batch member \({count - 1},\) is singular to working precision"):
        fr.Compliance.from_matrix(data, MANDEL).inverse()


@pytest.mark.parametrize("count", COUNTS)
def test_unchecked_data_that_are_not_finite_have_no_inverse(count: int) -> None:
    """A NaN that came in with check=False is no reason for a result, and spoils no other member."""
    matrix = np.tile(np.eye(6), (count, 1, 1))
    matrix[-1, 2, 2] = np.nan
    with pytest.raises(fr.AdmissibilityError, match="singular to working precision: its condition number is inf"):
        fr.Stiffness.from_matrix(matrix, MANDEL, check=False).inverse()
    for sign in (1.0, -1.0):
        inverse, bound = _mandel.invert(sign * matrix)
        assert np.isnan(inverse[-1]).all()
        assert bound[-1] == np.inf
        np.testing.assert_array_equal(inverse[:-1], sign * matrix[:-1])


def test_the_inverse_turns_with_the_tensor() -> None:
    """(R C)^-1 = R (C^-1), on a batch of any shape, an empty one too."""
    rng = np.random.default_rng(5)
    for batch in ((), (0,), (2, 3), (3, 0, 2), (20, 10)):
        C = fr.Stiffness.from_matrix(with_values(rng.uniform(0.1, 1.0, (*batch, 6)), rng), MANDEL)
        R = rotation.random(batch, rng)
        assert C.rotate(R).inverse().allclose(C.inverse().rotate(R), rtol=1e-12)
        assert C.inverse().shape == batch
