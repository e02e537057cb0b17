"""What is taken for a rotation, and what is refused."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from hypothesis.extra import numpy as hnp
from numpy.typing import ArrayLike
from scipy.spatial.transform import Rotation

import fourthrank as fr
from fourthrank import rotation

VOIGT = fr.Notation.voigt(fr.Ordering("11 22 33 23 13 12"))
SIGMA = fr.Stress.from_vector([1.0, 2.0, 3.0, 4.0, 5.0, 6.0], VOIGT)
BATCHES = hnp.array_shapes(min_dims=0, max_dims=2, min_side=0, max_side=3)


@given(seed=st.integers(0, 2**32), batch=BATCHES, reflect=st.booleans())
def test_rotations_pass_in_any_batch(seed: int, batch: tuple[int, ...], reflect: bool) -> None:
    """Orthogonal matrices pass, reflections on request; an even rank cannot tell R from -R."""
    R = rotation.random(batch, np.random.default_rng(seed))
    turned = SIGMA.rotate(-R if reflect else R, allow_reflection=reflect)
    assert turned == SIGMA.rotate(R)
    assert SIGMA.in_axes(-R if reflect else R, allow_reflection=reflect) == turned


def test_large_batches_pass_block_by_block() -> None:
    """Reflections on request, and matrices that are rotations just within the tolerance."""
    R = rotation.random(2500, np.random.default_rng(9))
    expected = SIGMA.rotate(R)
    assert SIGMA.rotate(-R, allow_reflection=True) == expected
    assert SIGMA.rotate(R * (1.0 + 4e-10)).allclose(expected, rtol=1e-8)
    with pytest.raises(fr.RotationError, match=r"largest element of R R\^T - 1 is 1.2e-09"):
        SIGMA.rotate(R * (1.0 + 6e-10))


def test_lists_objects_and_other_dtypes_are_taken() -> None:
    """Nested lists, integers, float32, scipy's Rotation, read-only and strided arrays are all rotations."""
    R = Rotation.from_quat(np.random.default_rng(4).standard_normal((5, 4)))
    expected = SIGMA.rotate(R.as_matrix())
    assert SIGMA.rotate(R) == expected
    assert SIGMA.rotate(R.as_matrix().tolist()) == expected
    strided = np.zeros((10, 3, 6))[::2, :, ::2]
    strided[...] = R.as_matrix()
    strided.flags.writeable = False
    assert SIGMA.rotate(strided) == expected
    assert SIGMA.rotate(R.as_matrix().astype(np.float32)).allclose(expected, rtol=1e-6)
    assert SIGMA.rotate([[0, -1, 0], [1, 0, 0], [0, 0, 1]]).allclose(
        SIGMA.rotate(rotation.about_axis([0, 0, 1], np.pi / 2))
    )


def member(matrix: ArrayLike) -> np.ndarray[tuple[int, ...], np.dtype[np.float64]]:
    """Return a batch of shape (2, 3000) that holds `matrix` beyond the first block, at place (1, 17)."""
    batch = np.tile(np.eye(3), (2, 3000, 1, 1))
    batch[1, 17] = matrix
    return batch


SKEW = [[1.0, 0.0, 0.0], [0.0, 1.0, 1e-6], [0.0, 0.0, 1.0]]
MIRROR = np.diag([1.0, -1.0, 1.0])
REFUSED = [
    (
        SKEW,
        fr.RotationError,
        r"R is no rotation: the largest element of R R\^T - 1 is 1e-06, .* 1e-09, its determinant is 1;",
    ),
    (member(SKEW), fr.RotationError, r"R of batch member \(1, 17\) is no rotation: .* 1e-06"),
    (2 * np.eye(3), fr.RotationError, r"is 3, .* determinant is 8; .*rotation\.nearest"),
    (MIRROR, fr.RotationError, r"R is a reflection \(determinant -1\)"),
    (member(MIRROR), fr.RotationError, r"R of batch member \(1, 17\) is a reflection"),
    (np.diag([1.0, 1.0, np.nan]), fr.DataError, "R: component 33 is nan"),
    (member(np.diag([1.0, np.inf, 1.0])), fr.DataError, r"R: component 22 of batch member \(1, 17\) is inf"),
    (np.full((3, 3), np.nan), fr.DataError, "R: component 11 is nan"),
    (np.diag([1e200, 1.0, 1.0]), fr.RotationError, "R is no rotation"),
    (member(np.diag([1e200, 1.0, 1.0])), fr.RotationError, r"\(1, 17\) is no rotation"),
    (np.eye(3) + 0j, fr.DataError, "R must be real"),
    (np.eye(2), fr.ShapeError, r"R must have shape \(\.\.\., 3, 3\), got \(2, 2\)"),
    ("identity", fr.DataError, "R must hold real"),
]


@pytest.mark.parametrize(("R", "error", "message"), REFUSED)
def test_what_is_no_rotation_is_refused(R: object, error: type[Exception], message: str) -> None:
    """The first bad member is named, with its defect and its determinant."""
    with pytest.raises(error, match=message):
        SIGMA.rotate(R)  # type: ignore[arg-type]


def test_tolerance_of_single_precision_is_its_own() -> None:
    """A float32 rotation is off by 1e-7 and passes; off by 1e-4 it is refused."""
    R = rotation.about_axis([1, 2, 3], 1.0).astype(np.float32)
    SIGMA.rotate(R)
    with pytest.raises(fr.RotationError, match="the tolerance is 1e-05"):
        SIGMA.rotate(R * np.float32(1.0001))


def test_batches_of_tensors_and_rotations_must_broadcast() -> None:
    """Both shapes are given."""
    with pytest.raises(fr.ShapeError, match=r"\(3,\) of Stress and \(2,\) of R"):
        fr.Stress.stack([SIGMA] * 3).rotate(np.stack([np.eye(3)] * 2))
