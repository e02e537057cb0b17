"""Every constructor of rotations agrees with scipy's `Rotation` and refuses what is no rotation."""

from collections.abc import Callable
from typing import Literal

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from hypothesis.extra import numpy as hnp
from numpy.typing import NDArray
from scipy.spatial.transform import Rotation

import fourthrank as fr
from fourthrank import rotation

TOLERANCE = 64 * np.finfo(float).eps
BATCHES = hnp.array_shapes(min_dims=0, max_dims=3, min_side=0, max_side=3)
ANGLES = st.floats(-720.0, 720.0)
AXES = st.permutations("123").flatmap(lambda p: st.sampled_from(["".join(p), p[0] + p[1] + p[0]]))
LETTERS = str.maketrans("123", "xyz")


def by_scipy(
    constructor: Callable[[NDArray[np.float64]], Rotation], rows: NDArray[np.float64], batch: tuple[int, ...]
) -> NDArray[np.float64]:
    """Return scipy's matrices in a batch of any shape; not every release of scipy takes an empty one."""
    if rows.size == 0:
        return np.empty((*batch, 3, 3))
    flat = rows.reshape(-1, rows.shape[-1])
    return np.asarray(constructor(flat).as_matrix(), np.float64).reshape(*batch, 3, 3)


def assert_rotations(matrices: NDArray[np.float64], batch: tuple[int, ...]) -> None:
    assert matrices.shape == (*batch, 3, 3)
    assert matrices.dtype == np.float64
    assert np.abs(matrices @ matrices.swapaxes(-1, -2) - np.eye(3)).max(initial=0.0) < TOLERANCE
    assert (np.linalg.det(matrices) > 0.0).all()


@given(data=st.data(), batch=BATCHES, degrees=st.booleans())
def test_about_axis_is_the_right_handed_turn_of_scipy(
    data: st.DataObject, batch: tuple[int, ...], degrees: bool
) -> None:
    """R is the matrix of the rotation vector n t, for any length of the axis."""
    rng = np.random.default_rng(data.draw(st.integers(0, 2**32)))
    axis = rng.standard_normal((*batch, 3))
    angle = data.draw(hnp.arrays(float, batch, elements=ANGLES))
    radians = np.deg2rad(angle) if degrees else angle
    unit = axis / np.linalg.norm(axis, axis=-1, keepdims=True)
    R = rotation.about_axis(1e200 * axis, angle, degrees=degrees)
    assert_rotations(R, batch)
    expected = by_scipy(Rotation.from_rotvec, unit * radians[..., None], batch)
    np.testing.assert_allclose(R, expected, rtol=0, atol=1e-12)  # radians up to 720, themselves rounded


def test_about_axis_broadcasts_axes_against_angles() -> None:
    """Axes of batch (2, 1) and angles of batch (3,) give batch (2, 3)."""
    R = rotation.about_axis([[[1, 0, 0]], [[0, 1, 0]]], [10, 20, 30], degrees=True)
    assert_rotations(R, (2, 3))
    np.testing.assert_array_equal(R[1, 2], rotation.about_axis([0, 1, 0], 30, degrees=True))


@pytest.mark.parametrize("turns", [-5, -1, 0, 1, 2, 3, 4, 4_000_000_001])
def test_quarter_turns_in_degrees_are_exact(turns: int) -> None:
    """Elements of whole quarter turns are 0, 1 or -1, and no zero has a minus sign."""
    R = rotation.about_axis([0, 0, 1], 90.0 * turns, degrees=True)
    c, s = ((1, 0), (0, 1), (-1, 0), (0, -1))[turns % 4]
    np.testing.assert_array_equal(R, [[c, -s, 0], [s, c, 0], [0, 0, 1]])


@given(
    angles=hnp.arrays(float, st.tuples(st.integers(0, 4), st.just(3)), elements=ANGLES),
    axes=AXES,
    composition=st.sampled_from(["intrinsic", "extrinsic"]),
    letters=st.booleans(),
    capitals=st.booleans(),
)
def test_euler_angles_agree_with_scipy(
    angles: NDArray[np.float64],
    axes: str,
    composition: Literal["intrinsic", "extrinsic"],
    letters: bool,
    capitals: bool,
) -> None:
    """The word decides between fixed and moving axes, the letters' case does not."""
    word = axes.translate(LETTERS) if letters else axes
    R = rotation.from_euler(angles, axes=word.upper() if capitals else word, composition=composition, degrees=True)
    assert_rotations(R, angles.shape[:-1])
    sequence = axes.translate(LETTERS)
    sequence = sequence.upper() if composition == "intrinsic" else sequence
    expected = by_scipy(lambda rows: Rotation.from_euler(sequence, rows, degrees=True), angles, angles.shape[:-1])
    np.testing.assert_allclose(R, expected, rtol=0, atol=1e-14)


@given(
    angles=hnp.arrays(float, st.tuples(st.integers(0, 4), st.just(3)), elements=st.floats(-7.0, 7.0)),
)
def test_bunge_angles_turn_the_crystal_into_the_specimen(angles: NDArray[np.float64]) -> None:
    """R = Z(phi1) X(Phi) Z(phi2), and its transpose is Bunge's printed g."""
    R = rotation.from_bunge_euler(angles[:, 0], angles[:, 1], angles[:, 2])
    assert_rotations(R, angles.shape[:-1])
    expected = by_scipy(lambda rows: Rotation.from_euler("ZXZ", rows), angles, angles.shape[:-1])
    np.testing.assert_allclose(R, expected, rtol=0, atol=1e-14)
    # Bunge (1982), Texture Analysis in Materials Science, eq. 2.50; value from memory.
    (c1, c, c2), (s1, s, s2) = np.cos(angles.T), np.sin(angles.T)
    g = np.array(
        [
            [c1 * c2 - s1 * s2 * c, s1 * c2 + c1 * s2 * c, s2 * s],
            [-c1 * s2 - s1 * c2 * c, -s1 * s2 + c1 * c2 * c, c2 * s],
            [s1 * s, -c1 * s, c],
        ]
    )
    np.testing.assert_allclose(R, np.moveaxis(g, (0, 1), (2, 1)), rtol=0, atol=1e-14)


def test_bunge_angles_broadcast() -> None:
    """One angle may be shared by a batch of the others."""
    R = rotation.from_bunge_euler([10, 20, 30], 40, [[50], [60]], degrees=True)
    assert_rotations(R, (2, 3))
    np.testing.assert_array_equal(R[1, 2], rotation.from_bunge_euler(30, 40, 60, degrees=True))


@given(seed=st.integers(0, 2**32), batch=BATCHES, last=st.booleans(), scale=st.sampled_from([1.0, 1e-300, 1e300]))
def test_quaternions_agree_with_scipy(seed: int, batch: tuple[int, ...], last: bool, scale: float) -> None:
    """Both places of the scalar part give scipy's matrix; normalisation works at any size."""
    q = np.random.default_rng(seed).standard_normal((*batch, 4))
    unit = q / np.linalg.norm(q, axis=-1, keepdims=True)
    given_q = unit if last else np.roll(unit, 1, axis=-1)
    R = rotation.from_quaternion(given_q * scale, scalar="last" if last else "first", normalize=scale != 1.0)
    assert_rotations(R, batch)
    expected = by_scipy(Rotation.from_quat, unit, batch)
    np.testing.assert_allclose(R, expected, rtol=0, atol=1e-14)


def test_single_precision_quaternions_pass_with_their_own_tolerance() -> None:
    """A float32 unit quaternion is off by 1e-8, which double precision would refuse."""
    q = np.array([0.1, 0.2, 0.3, np.sqrt(0.86)], np.float32)
    assert_rotations(rotation.from_quaternion(q, scalar="last"), ())


@given(seed=st.integers(0, 2**32), batch=BATCHES, exponent=st.integers(-300, 1), degrees=st.booleans())
def test_rotation_vectors_agree_with_scipy(seed: int, batch: tuple[int, ...], exponent: int, degrees: bool) -> None:
    """R of a vector of any length, tiny ones included, is scipy's."""
    vector = np.random.default_rng(seed).standard_normal((*batch, 3)) * 10.0**exponent
    R = rotation.from_rotation_vector(np.rad2deg(vector) if degrees else vector, degrees=degrees)
    assert_rotations(R, batch)
    expected = by_scipy(Rotation.from_rotvec, vector, batch)
    np.testing.assert_allclose(R, expected, rtol=0, atol=1e-13)


def test_zero_rotation_vector_is_no_turn() -> None:
    """The zero vector has no direction and needs none."""
    np.testing.assert_array_equal(rotation.from_rotation_vector([0, 0, 0]), np.eye(3))


@pytest.mark.parametrize(("n", "batch"), [(5, (5,)), (0, (0,)), ((), ()), ((2, 3), (2, 3)), (np.int64(2), (2,))])
def test_random_rotations_repeat_with_their_seed(n: int | tuple[int, ...], batch: tuple[int, ...]) -> None:
    """The same generator state gives the same rotations, in the shape that was asked for."""
    R = rotation.random(n, np.random.default_rng(3))
    assert_rotations(R, batch)
    np.testing.assert_array_equal(R, rotation.random(n, np.random.default_rng(3)))


def test_random_rotations_are_uniform() -> None:
    """Angles of uniform rotations have the density (1 - cos t) / pi, and turned axes are uniform on the sphere."""
    R = rotation.random(20_000, np.random.default_rng(11))
    angle = np.sort(rotation.angle_between(np.eye(3), R))
    empirical = (np.arange(angle.size) + 0.5) / angle.size
    # Miles (1965), Biometrika 52, 636: the distribution function of the angle; value from memory.
    assert np.abs(empirical - (angle - np.sin(angle)) / np.pi).max() < 1.63 / np.sqrt(angle.size)  # 1 % level
    for column in np.moveaxis(R, 0, -1).reshape(9, -1):
        assert np.abs(np.sort(column) - (2 * empirical - 1)).max() < 2 * 1.63 / np.sqrt(angle.size)


def test_cube_rotations_are_the_group_of_24() -> None:
    """Twenty-four different exact matrices, closed under products and transposes, the identity first."""
    R = rotation.cube_rotations()
    assert_rotations(R, (24,))
    np.testing.assert_array_equal(R[0], np.eye(3))
    members = {m.tobytes() for m in R}
    assert len(members) == 24
    products = np.einsum("aij,bjk->abik", R, R).reshape(-1, 3, 3) + 0.0
    assert {m.tobytes() for m in products} == members
    assert {np.ascontiguousarray(m.T).tobytes() for m in R} == members
    expected = Rotation.create_group("O").as_matrix()
    assert all(np.abs(expected - m).max(axis=(1, 2)).min() < 1e-14 for m in R)


REFUSED = [
    (lambda: rotation.about_axis([[1, 0, 0], [0, 0, 0]], 1), fr.RotationError, r"axis of batch member \(1,\) has zero"),
    (lambda: rotation.about_axis([1, 0], 1), fr.ShapeError, r"axis must have shape \(\.\.\., 3\), got \(2,\)"),
    (lambda: rotation.about_axis(np.array([1, 0, 1j]), 1), fr.DataError, "axis must be real, got dtype complex128"),
    (lambda: rotation.about_axis([1, np.nan, 0], 1), fr.DataError, "axis: component 2 is nan"),
    (lambda: rotation.about_axis([1, 0, 0], np.inf), fr.DataError, "angle.*is inf"),
    (lambda: rotation.about_axis(np.ones((2, 3)), np.ones(3)), fr.ShapeError, r"\(2,\) of axis and \(3,\) of angle"),
    (lambda: rotation.from_bunge_euler(0, [1, np.nan], 0), fr.DataError, r"Phi.*batch member \(1,\) is nan"),
    (
        lambda: rotation.from_bunge_euler([1, 2], 0, [1, 2, 3]),
        fr.ShapeError,
        r"\(2,\) of phi1 and \(\) of Phi and \(3,\)",
    ),
    (lambda: rotation.from_euler([1, 2], axes="313", composition="intrinsic"), fr.ShapeError, r"angles.*\(\.\.\., 3\)"),
    (lambda: rotation.from_euler([1, 2, 3], axes="133", composition="intrinsic"), fr.RotationError, "axes='133'"),
    (lambda: rotation.from_euler([1, 2, 3], axes="1y3", composition="intrinsic"), fr.RotationError, "axes='1y3'"),
    (lambda: rotation.from_euler([1, 2, 3], axes="12", composition="intrinsic"), fr.RotationError, "neighbours"),
    (lambda: rotation.from_euler([1, 2, 3], axes="abc", composition="intrinsic"), fr.RotationError, "three digits"),
    (lambda: rotation.from_euler([1, 2, 3], axes=313, composition="intrinsic"), fr.RotationError, "axes=313"),  # type: ignore[arg-type]
    (lambda: rotation.from_euler([1, 2, 3], axes="313", composition="fixed"), fr.RotationError, "composition='fixed'"),  # type: ignore[arg-type]
    (lambda: rotation.from_quaternion([1, 0, 0, 0], scalar="w"), fr.RotationError, "scalar='w'"),  # type: ignore[arg-type]
    (lambda: rotation.from_quaternion([2, 0, 0, 0], scalar="first"), fr.RotationError, "norm is 2, the tolerance"),
    (
        lambda: rotation.from_quaternion([[1.0, 0.0, 0.0, 0.0], [0.6, 0.8, 0.01, 0.0]], scalar="first"),
        fr.RotationError,
        r"batch member \(1,\) is no unit quaternion: its norm is 1\.0000499",
    ),
    (lambda: rotation.from_quaternion([0, 0, 0, 0], scalar="first", normalize=True), fr.RotationError, "q is zero"),
    (lambda: rotation.from_quaternion([1, 0, 0], scalar="first"), fr.ShapeError, r"\(\.\.\., 4\)"),
    (lambda: rotation.from_rotation_vector([1, 0, np.inf]), fr.DataError, "vector: component 3 is inf"),
    (lambda: rotation.random(-1, np.random.default_rng()), fr.ShapeError, "n=-1"),
    (lambda: rotation.random(True, np.random.default_rng()), fr.ShapeError, "n=True"),
    (lambda: rotation.random(2, 7), fr.DataError, r"numpy\.random\.default_rng\(seed\)"),  # type: ignore[arg-type]
]


@pytest.mark.parametrize(("call", "error", "message"), REFUSED)
def test_what_is_no_rotation_is_refused(call: object, error: type[Exception], message: str) -> None:
    """The error names the argument, the member and the amount."""
    assert callable(call)
    with pytest.raises(error, match=message):
        call()
