"""The angle between rotations, and the rotation nearest to a matrix."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from hypothesis.extra import numpy as hnp
from scipy.spatial.transform import Rotation

import fourthrank as fr
from fourthrank import rotation

RNG = np.random.default_rng(1)
BATCHES = hnp.array_shapes(min_dims=0, max_dims=2, min_side=0, max_side=3)


@given(seed=st.integers(0, 2**32), batch=BATCHES, angle=st.floats(0.0, 180.0))
def test_angle_between_is_the_angle_of_the_turn(seed: int, batch: tuple[int, ...], angle: float) -> None:
    """Turning by t about any axis makes an angle t, near 0 and 180 degrees as well."""
    rng = np.random.default_rng(seed)
    first = rotation.random(batch, rng)
    second = rotation.about_axis(rng.standard_normal(3), angle, degrees=True) @ first
    found = rotation.angle_between(first, second, degrees=True)
    assert found.shape == batch
    np.testing.assert_allclose(found, angle, rtol=0, atol=1e-13)
    np.testing.assert_allclose(rotation.angle_between(second, first), np.deg2rad(angle), rtol=0, atol=1e-14)


def test_angle_between_takes_objects_that_give_their_matrix() -> None:
    """scipy's Rotation is accepted on both sides; batches broadcast."""
    first, second = Rotation.from_quat(RNG.standard_normal((3, 4))), Rotation.from_quat(RNG.standard_normal(4))
    expected = (second * first.inv()).magnitude()
    np.testing.assert_allclose(rotation.angle_between(first, second), expected, atol=1e-14)


def test_angle_between_refuses_batches_that_do_not_broadcast() -> None:
    """Both shapes are given."""
    rng = np.random.default_rng(0)
    with pytest.raises(fr.ShapeError, match=r"\(2,\) of first and \(3,\) of second"):
        rotation.angle_between(rotation.random(2, rng), rotation.random(3, rng))


@given(seed=st.integers(0, 2**32), batch=BATCHES, noise=st.sampled_from([0.0, 1e-9, 1e-3, 0.2]))
def test_nearest_minimises_the_distance(seed: int, batch: tuple[int, ...], noise: float) -> None:
    """R^T M is symmetric and positive definite on the plane of its two smallest values: no turn comes nearer."""
    rng = np.random.default_rng(seed)
    M = 7.0 * (rotation.random(batch, rng) + noise * rng.uniform(-1, 1, (*batch, 3, 3)))
    R = rotation.nearest(M)
    assert R.shape == (*batch, 3, 3)
    assert np.abs(R @ R.swapaxes(-1, -2) - np.eye(3)).max(initial=0.0) < 1e-14
    assert (np.linalg.det(R) > 0.0).all()
    polar = R.swapaxes(-1, -2) @ M
    assert np.abs(polar - polar.swapaxes(-1, -2)).max(initial=0.0) < 1e-13
    assert (np.linalg.eigvalsh(polar) > 0.0).all()


@pytest.mark.parametrize("seed", [0, 1, 2])
def test_nearest_completes_matrices_of_rank_two(seed: int) -> None:
    """A rotation that has lost any one direction is found again, whatever signs the singular vectors take."""
    rng = np.random.default_rng(seed)
    R = rotation.random(50, rng)
    lost = rotation.random(50, rng)[:, 0]
    flat = R @ (np.eye(3) - lost[:, :, None] * lost[:, None, :])
    np.testing.assert_allclose(rotation.nearest(flat), R, atol=1e-14)


REFUSED = [
    (
        np.stack([np.eye(3), np.diag([1.0, 1.0, -0.9])]),
        fr.RotationError,
        r"batch member \(1,\).*negative, a reflection",
    ),
    (np.diag([1.0, 1e-12, 0.0]), fr.RotationError, r"matrix \(singular values 1, 1e-12, 0\).*rank below 2"),
    (np.zeros((3, 3)), fr.RotationError, "rank below 2"),
    (np.diag([1.0, np.nan, 1.0]), fr.DataError, "matrix: component 22 is nan"),
    (np.eye(3) * 1j, fr.DataError, "matrix must be real"),
    (np.eye(2), fr.ShapeError, r"\(\.\.\., 3, 3\), got \(2, 2\)"),
]


@pytest.mark.parametrize(("matrix", "error", "message"), REFUSED)
def test_nearest_refuses_what_has_no_nearest_rotation(
    matrix: np.ndarray[tuple[int, ...], np.dtype[np.float64]], error: type[Exception], message: str
) -> None:
    """Reflections, low rank and bad data are errors that say which member and why."""
    with pytest.raises(error, match=message):
        rotation.nearest(matrix)
