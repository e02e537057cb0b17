"""Contractions and norms agree with sums over full tensors, for any batches that broadcast."""

from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from hypothesis.extra import numpy as hnp
from numpy.typing import NDArray

import fourthrank as fr

MANDEL = fr.Notation.mandel(fr.Ordering("11 22 33 23 13 12"))
BROADCAST = hnp.mutually_broadcastable_shapes(num_shapes=2, max_dims=3, min_side=0, max_side=3)


def numbers(shape: tuple[int, ...], rng: np.random.Generator, *, cplx: bool) -> NDArray[Any]:
    """Return random numbers, complex on request."""
    values = rng.standard_normal(shape)
    return values + 1j * rng.standard_normal(shape) if cplx else values


@pytest.mark.parametrize(
    ("fourth", "second", "result"),
    [(fr.Stiffness, fr.Strain, fr.Stress), (fr.Compliance, fr.Stress, fr.Strain)],
)
@given(seed=st.integers(0, 2**32), shapes=BROADCAST, cplx=st.tuples(st.booleans(), st.booleans()))
def test_the_map_of_a_strain_or_stress(
    fourth: Any, second: Any, result: Any, seed: int, shapes: hnp.BroadcastableShapes, cplx: tuple[bool, bool]
) -> None:
    """sigma_ij = C_ijkl eps_kl, and eps_ij = S_ijkl sigma_kl."""
    rng = np.random.default_rng(seed)
    C = fourth.from_matrix(numbers((*shapes.input_shapes[0], 6, 6), rng, cplx=cplx[0]), MANDEL, symmetrize=True)
    x = second.from_vector(numbers((*shapes.input_shapes[1], 6), rng, cplx=cplx[1]), MANDEL)
    mapped = C @ x
    assert type(mapped) is result
    assert mapped.shape == shapes.result_shape
    assert mapped.is_complex == any(cplx)
    np.testing.assert_allclose(mapped.tensor(), np.einsum("...ijkl,...kl->...ij", C.tensor(), x.tensor()), atol=1e-13)


@given(seed=st.integers(0, 2**32), shapes=BROADCAST, cplx=st.tuples(st.booleans(), st.booleans()))
def test_the_double_contraction(seed: int, shapes: hnp.BroadcastableShapes, cplx: tuple[bool, bool]) -> None:
    """sigma_ij eps_ij, without a conjugate, from either side."""
    rng = np.random.default_rng(seed)
    sigma = fr.Stress.from_vector(numbers((*shapes.input_shapes[0], 6), rng, cplx=cplx[0]), MANDEL)
    eps = fr.Strain.from_vector(numbers((*shapes.input_shapes[1], 6), rng, cplx=cplx[1]), MANDEL)
    expected = np.einsum("...ij,...ij->...", sigma.tensor(), eps.tensor())
    found = sigma.dot(eps)
    assert found.shape == shapes.result_shape
    np.testing.assert_allclose(found, expected, atol=1e-13)
    np.testing.assert_array_equal(eps.dot(sigma), found)


@given(seed=st.integers(0, 2**32), batch=hnp.array_shapes(min_dims=0, min_side=0, max_side=3), cplx=st.booleans())
def test_norms(seed: int, batch: tuple[int, ...], cplx: bool) -> None:
    """The root of the sum of the squared moduli of all components."""
    rng = np.random.default_rng(seed)
    C = fr.Stiffness.from_matrix(numbers((*batch, 6, 6), rng, cplx=cplx), MANDEL, symmetrize=True)
    eps = fr.Strain.from_vector(numbers((*batch, 6), rng, cplx=cplx), MANDEL)
    for x, axes in ((C, (-4, -3, -2, -1)), (eps, (-2, -1))):
        norm = x.norm()
        assert norm.shape == batch
        assert norm.dtype == np.float64
        np.testing.assert_allclose(norm, np.sqrt((np.abs(x.tensor()) ** 2).sum(axis=axes)), rtol=1e-14)
