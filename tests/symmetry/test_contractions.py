"""The two contractions and the axes that they suggest."""

from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from fourthrank import Compliance, DataError, Notation, Ordering, Stiffness, rotation, symmetry

MANDEL = Notation.mandel(Ordering("11 22 33 23 13 12"))
SEEDS = st.integers(0, 2**32 - 1)


def definite(shape: tuple[int, ...], seed: int, kind: Any = Stiffness) -> Any:
    a = np.random.default_rng(seed).standard_normal((*shape, 6, 6))
    return kind.from_matrix(a @ a.swapaxes(-1, -2) + np.eye(6), MANDEL, symmetrize=True)


@given(st.sampled_from([(), (0,), (3,), (2, 1, 2)]), SEEDS, st.sampled_from([Stiffness, Compliance]))
def test_contractions_are_those_of_the_full_tensor(shape: tuple[int, ...], seed: int, kind: Any) -> None:
    """d_ij = C_ijkk and v_ij = C_ikjk; the axes diagonalise v, are right-handed, and the shapes are the batch's."""
    C = definite(shape, seed, kind)
    full, found = C.tensor(), symmetry.contractions(C)
    assert np.allclose(found.dilatational, np.einsum("...ijkk->...ij", full), rtol=0, atol=1e-12)
    assert np.allclose(found.voigt, np.einsum("...ikjk->...ij", full), rtol=0, atol=1e-12)
    diagonal = found.axes @ found.voigt @ found.axes.swapaxes(-1, -2)
    values = np.diagonal(diagonal, axis1=-2, axis2=-1)
    assert np.allclose(diagonal, values[..., None] * np.eye(3), rtol=0, atol=1e-11)
    assert (np.diff(values, axis=-1) >= 0.0).all()
    assert np.allclose(np.linalg.det(found.axes), 1.0)
    assert found.undetermined.shape == (*shape, 3)
    assert found.misfit.shape == shape


@given(SEEDS)
def test_an_orthotropic_tensor_has_its_axes_in_both_contractions(seed: int) -> None:
    """The guess is the answer of the search, up to order and sense of the axes; a generic tensor has a misfit."""
    R = rotation.random(1, np.random.default_rng(seed))[0]
    s = symmetry.orthotropic()
    C = s.project(definite((), seed)).rotate(R)
    guess = symmetry.contractions(C)
    assert guess.misfit < 1e-13
    assert s.in_axes(guess.axes).distance(C) < 1e-9
    assert symmetry.contractions(definite((), seed)).misfit > 1e-6


def test_equal_principal_values_leave_axes_undetermined() -> None:
    """Transverse isotropy determines one axis, cubic symmetry none; zero is no exception."""
    hexagonal = symmetry.transversely_isotropic(axis=3).project(definite((), 1))
    found = symmetry.contractions(hexagonal)
    assert found.undetermined.sum() == 2
    assert abs(found.axes[~found.undetermined][0, 2]) == pytest.approx(1.0)
    assert symmetry.contractions(symmetry.cubic().project(hexagonal)).undetermined.all()
    zero = symmetry.contractions(hexagonal.scaled(0.0))
    assert zero.undetermined.all()
    assert zero.misfit == 0.0
    assert not symmetry.contractions(definite((), 2)).undetermined.any()


def test_complex_tensors_are_refused() -> None:
    """Principal axes are real."""
    with pytest.raises(DataError, match="complex"):
        symmetry.contractions(Stiffness.from_matrix(np.eye(6) * 1j, MANDEL))
