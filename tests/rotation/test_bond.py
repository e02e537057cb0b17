"""The 6x6 matrices of rotations: Bond's matrices in any notation, and the orthogonal one."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from hypothesis.extra import numpy as hnp
from scipy.spatial.transform import Rotation

import fourthrank as fr
from fourthrank import rotation

PAIRS = ["11", "22", "33", "23", "13", "12"]
WEIGHTS = st.sampled_from([1.0, 2.0, 2.0**0.5, 0.5, 3.0])


def notation_of(pairs: list[str], stress: float, strain: float, sign: bool) -> fr.Notation:
    """Return a notation of these parts."""
    ordering = fr.Ordering(" ".join(pairs))
    return fr.Notation(ordering, stress_shear=stress, strain_shear=strain, compression_positive=sign)


NOTATIONS = st.builds(notation_of, st.permutations(PAIRS), WEIGHTS, WEIGHTS, st.booleans())
BATCHES = st.one_of(hnp.array_shapes(min_dims=0, max_dims=2, min_side=0, max_side=3), st.just((2, 130)))
VOIGT = fr.Notation.voigt(fr.Ordering("11 22 33 23 13 12"))


@given(seed=st.integers(0, 2**32), notation=NOTATIONS, batch=BATCHES)
def test_bond_matrices_turn_vectors_as_the_tensors_turn(
    seed: int, notation: fr.Notation, batch: tuple[int, ...]
) -> None:
    """M s and N e are the vectors of the turned stress and strain; C' = M C N^-1 is that of the turned stiffness."""
    rng = np.random.default_rng(seed)
    R = rotation.random(batch, rng)
    M, N = rotation.stress_matrix(R, notation), rotation.strain_matrix(R, notation)
    assert M.shape == N.shape == (*batch, 6, 6)
    vector = rng.standard_normal(6)
    sigma, eps = fr.Stress.from_vector(vector, notation), fr.Strain.from_vector(vector, notation)
    np.testing.assert_allclose(M @ vector, sigma.rotate(R).vector(notation), rtol=0, atol=1e-12)
    np.testing.assert_allclose(N @ vector, eps.rotate(R).vector(notation), rtol=0, atol=1e-12)
    C = fr.Stiffness.from_matrix(rng.standard_normal((6, 6)), notation, symmetrize=True)
    expected = C.rotate(R).matrix(notation)
    np.testing.assert_allclose(M @ C.matrix(notation) @ np.linalg.inv(N), expected, rtol=0, atol=1e-11)


@given(seed=st.integers(0, 2**32), notation=NOTATIONS, batch=BATCHES)
def test_bond_matrices_obey_their_own_laws(seed: int, notation: fr.Notation, batch: tuple[int, ...]) -> None:
    """M(Q R) = M(Q) M(R), M(R^T) = M(R)^-1, det M = 1, and M^-1 = N^T where the notation is work-conjugate."""
    rng = np.random.default_rng(seed)
    Q, R = rotation.random(batch, rng), rotation.random(batch, rng)
    for matrix in (rotation.stress_matrix, rotation.strain_matrix):
        np.testing.assert_allclose(matrix(Q @ R, notation), matrix(Q, notation) @ matrix(R, notation), atol=1e-12)
        back = matrix(R.swapaxes(-1, -2), notation)
        np.testing.assert_allclose(back @ matrix(R, notation), np.broadcast_to(np.eye(6), back.shape), atol=1e-12)
        np.testing.assert_allclose(np.linalg.det(back), np.ones(batch), rtol=1e-12)
        if notation.work_conjugate:
            other = rotation.strain_matrix if matrix is rotation.stress_matrix else rotation.stress_matrix
            np.testing.assert_allclose(back, other(R, notation).swapaxes(-1, -2), atol=1e-12)


def test_bond_matrices_as_printed() -> None:
    """A turn about x3 by t, formula by formula.

    Auld, B. A. (1973), Acoustic Fields and Waves in Solids, vol. I, section 3.D (after Bond 1943); value from memory.
    The coordinates turn there, so that the matrix of the axes A is meant.
    """
    t = 0.3
    c, s = np.cos(t), np.sin(t)
    A = rotation.about_axis([0, 0, 1], t).T
    M = np.array(
        [
            [c * c, s * s, 0, 0, 0, np.sin(2 * t)],
            [s * s, c * c, 0, 0, 0, -np.sin(2 * t)],
            [0, 0, 1, 0, 0, 0],
            [0, 0, 0, c, -s, 0],
            [0, 0, 0, s, c, 0],
            [-np.sin(2 * t) / 2, np.sin(2 * t) / 2, 0, 0, 0, np.cos(2 * t)],
        ]
    )
    np.testing.assert_allclose(rotation.stress_matrix(A, VOIGT), M, atol=1e-15)
    N = M.copy()
    N[:3, 3:] /= 2
    N[3:, :3] *= 2
    np.testing.assert_allclose(rotation.strain_matrix(A, VOIGT), N, atol=1e-15)


@given(seed=st.integers(0, 2**32), pairs=st.permutations(PAIRS), batch=BATCHES)
def test_mandel_matrix_is_orthogonal(seed: int, pairs: list[str], batch: tuple[int, ...]) -> None:
    """K K^T = 1 in any order of the pairs; K is Bond's matrix of the Mandel notation, for stress and strain alike."""
    ordering = fr.Ordering(" ".join(pairs))
    R = rotation.random(batch, np.random.default_rng(seed))
    K = rotation.mandel_matrix(R, ordering)
    identity = np.broadcast_to(np.eye(6), K.shape)
    np.testing.assert_allclose(K @ K.swapaxes(-1, -2), identity, rtol=0, atol=64 * np.finfo(float).eps)
    for matrix in (rotation.stress_matrix, rotation.strain_matrix):
        np.testing.assert_array_equal(K, matrix(R, fr.Notation.mandel(ordering)))


@pytest.mark.parametrize("size", [3, 200])
def test_bond_matrices_take_objects_that_give_their_matrix(size: int) -> None:
    """scipy's Rotation is accepted."""
    R = Rotation.from_quat(np.random.default_rng(2).standard_normal((size, 4)))
    np.testing.assert_array_equal(rotation.stress_matrix(R, VOIGT), rotation.stress_matrix(R.as_matrix(), VOIGT))


@pytest.mark.parametrize("matrix", [rotation.stress_matrix, rotation.strain_matrix])
def test_bond_matrices_refuse_what_they_cannot_serve(matrix: object) -> None:
    """No rotation, and a partial ordering, which cannot hold the turned components."""
    assert callable(matrix)
    with pytest.raises(fr.RotationError, match=r"R is no rotation"):
        matrix(2 * np.eye(3), VOIGT)
    with pytest.raises(fr.NotationError, match="do not list the same pairs"):
        matrix(np.eye(3), fr.Notation.voigt(fr.Ordering("11 22 12")))
