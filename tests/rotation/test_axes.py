"""Sets of axes: from two vectors, in a lattice by name, along crystal directions and plane normals."""

from typing import Literal, get_args

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from hypothesis.extra import numpy as hnp
from numpy.typing import NDArray

import fourthrank as fr
from fourthrank import rotation

BATCHES = hnp.array_shapes(min_dims=0, max_dims=2, min_side=0, max_side=3)
PAIRS = [(i, j) for i in range(3) for j in range(3) if i != j]
TOLERANCE = 1e-13


def assert_axes(A: NDArray[np.float64]) -> None:
    assert np.abs(A @ A.swapaxes(-1, -2) - np.eye(3)).max(initial=0.0) < 1e-15
    assert (np.linalg.det(A) > 0.0).all()


@given(
    seed=st.integers(0, 2**32), batch=BATCHES, pair=st.sampled_from(PAIRS), scale=st.sampled_from([1e-200, 1, 1e200])
)
def test_two_vectors_fix_the_axes(seed: int, batch: tuple[int, ...], pair: tuple[int, int], scale: float) -> None:
    """The exact vector is its axis; the other one lies in the half plane of its axis."""
    exact, other = np.random.default_rng(seed).standard_normal((2, *batch, 3))
    i, j = pair
    names: tuple[Literal["x1"], Literal["x2"], Literal["x3"]] = ("x1", "x2", "x3")
    vectors = {"x1": None, "x2": None, "x3": None} | {names[i]: scale * exact, names[j]: other}
    A = rotation.axes_from_vectors(**vectors, exact=names[i])
    assert A.shape == (*batch, 3, 3)
    assert_axes(A)
    np.testing.assert_allclose(A[..., i, :], exact / np.linalg.norm(exact, axis=-1, keepdims=True), atol=1e-15)
    components = (A @ other[..., None])[..., 0]
    assert (components[..., j] > 0.0).all()
    assert np.abs(components[..., 3 - i - j]).max(initial=0.0) < 1e-14 * (1 + np.abs(other).max(initial=0.0))


CELLS = {
    "triclinic": ([8.1, 12.9, 7.2], [93.0, 116.0, 90.5]),
    "monoclinic": ([9.7, 8.9, 5.3], [90.0, 106.0, 90.0]),
    "orthorhombic": ([4.8, 10.2, 6.0], [90.0, 90.0, 90.0]),
    "tetragonal": ([4.6, 4.6, 3.0], [90.0, 90.0, 90.0]),
    "trigonal": ([4.9, 4.9, 5.4], [90.0, 90.0, 120.0]),
    "hexagonal": ([2.7, 2.7, 4.9], [90.0, 90.0, 120.0]),
    "cubic": ([5.4, 5.4, 5.4], [90.0, 90.0, 90.0]),
}
# Cells with the shape of the crystal system named; the numbers are made up.


def cell_of(setting: str) -> tuple[list[float], list[float]]:
    return CELLS[setting.removeprefix("IEEE 176 ")] if setting.startswith("IEEE") else CELLS["trigonal"]


@pytest.mark.parametrize("setting", get_args(rotation.Setting))
@pytest.mark.parametrize("degrees", [True, False])
def test_lattice_vectors_have_the_lengths_and_angles(setting: rotation.Setting, degrees: bool) -> None:
    """The metric of the lattice does not depend on the setting, and the vectors are right-handed."""
    lengths, angles = cell_of(setting)
    L = rotation.lattice_vectors(lengths, angles if degrees else np.deg2rad(angles), setting=setting, degrees=degrees)
    np.testing.assert_allclose(np.linalg.norm(L, axis=-1), lengths, rtol=1e-14)
    unit = L / np.linalg.norm(L, axis=-1, keepdims=True)
    cosines = [unit[1] @ unit[2], unit[2] @ unit[0], unit[0] @ unit[1]]
    np.testing.assert_allclose(np.rad2deg(np.arccos(cosines)), angles, rtol=1e-13)
    assert np.linalg.det(L) > 0.0


def along(vector: NDArray[np.float64], axis: int) -> bool:
    """Tell whether a vector points along a positive coordinate axis."""
    return bool(np.abs(vector / np.linalg.norm(vector) - np.eye(3)[axis]).max() < 1e-15)


@pytest.mark.parametrize(
    ("setting", "cell", "x"),
    [
        ("x3 along c, x1 along a", "hexagonal", {"c": 2, "a": 0}),
        ("x3 along c, x1 along a", "monoclinic", None),
        ("x3 along c, x1 along a*", "triclinic", {"c": 2, "a*": 0}),
        ("x3 along c, x2 along b*", "triclinic", {"c": 2, "b*": 1}),
        ("x1 along a, x3 along c*", "triclinic", {"a": 0, "c*": 2}),
        # IEEE Std 176-1987, section 3.2; the directions are from memory.
        ("IEEE 176 triclinic", "triclinic", {"c": 2, "b*": 1}),
        ("IEEE 176 monoclinic", "monoclinic", {"c": 2, "b": 1, "b*": 1, "a*": 0}),
        ("IEEE 176 orthorhombic", "orthorhombic", {"a": 0, "b": 1, "c": 2}),
        ("IEEE 176 tetragonal", "tetragonal", {"a": 0, "b": 1, "c": 2}),
        ("IEEE 176 trigonal", "trigonal", {"a": 0, "b*": 1, "c": 2}),
        ("IEEE 176 hexagonal", "hexagonal", {"a": 0, "b*": 1, "c": 2}),
        ("IEEE 176 cubic", "cubic", {"a": 0, "b": 1, "c": 2}),
    ],
)
def test_settings_lay_the_axes_as_named(setting: rotation.Setting, cell: str, x: dict[str, int] | None) -> None:
    """Each axis points along the vector of the direct or reciprocal lattice that the name says."""
    lengths, angles = CELLS[cell]
    if x is None:
        with pytest.raises(fr.RotationError, match=r"impossible.*beta is 106 degrees.*two ways out"):
            rotation.lattice_vectors(lengths, angles, setting=setting, degrees=True)
        return
    L = rotation.lattice_vectors(lengths, angles, setting=setting, degrees=True)
    vectors = dict(zip("abc", L, strict=True)) | dict(zip(("a*", "b*", "c*"), np.linalg.inv(L).T, strict=True))
    assert all(along(vectors[name], axis) for name, axis in x.items())


def test_lattices_come_in_batches() -> None:
    """Lengths of batch (2, 1) and angles of batch (3,) give batch (2, 3)."""
    beta = [90.0, 100.0, 110.0]
    angles = np.stack([np.full(3, 90.0), beta, np.full(3, 90.0)], axis=-1)
    L = rotation.lattice_vectors([[[1, 2, 3]], [[4, 5, 6]]], angles, setting="IEEE 176 monoclinic", degrees=True)
    assert L.shape == (2, 3, 3, 3)
    single = rotation.lattice_vectors([4, 5, 6], [90, 110, 90], setting="IEEE 176 monoclinic", degrees=True)
    np.testing.assert_array_equal(L[1, 2], single)
    empty = rotation.lattice_vectors(np.ones((0, 3)), [90, 90, 90], setting="IEEE 176 cubic", degrees=True)
    assert empty.shape == (0, 3, 3)


@given(seed=st.integers(0, 2**32), left=st.booleans(), batch=BATCHES)
def test_directions_and_normals_follow_their_definitions(seed: int, left: bool, batch: tuple[int, ...]) -> None:
    """[uvw] is along u a + v b + w c; the normal of (hkl) is along h a* + k b* + l c*, also in left-handed lattices."""
    rng = np.random.default_rng(seed)
    vectors = rng.standard_normal((3, 3)) + 3 * np.eye(3)
    L = vectors[[1, 0, 2]] if (np.linalg.det(vectors) < 0.0) != left else vectors
    indices = rng.integers(1, 5, (*batch, 3)) * rng.choice([-1, 1], (*batch, 3))
    for function, basis in (
        (rotation.crystal_directions, L),
        (rotation.plane_normals, np.linalg.inv(L).T),
    ):
        expected = indices @ basis
        expected /= np.linalg.norm(expected, axis=-1, keepdims=True)
        np.testing.assert_allclose(function(indices, 1e-10 * L), expected, atol=1e-10)


@pytest.mark.parametrize("source", get_args(rotation.Setting)[:5])
@pytest.mark.parametrize("target", get_args(rotation.Setting)[:5])
def test_axes_between_settings_carry_the_lattice_over(source: rotation.Setting, target: rotation.Setting) -> None:
    """Components of the same lattice vectors: v_target = A v_source."""
    lengths, angles = [5.0, 6.0, 7.0], [80.0, 90.0, 70.0]
    A = rotation.axes_between_settings(lengths, angles, source=source, target=target, degrees=True)
    assert_axes(A)
    old = rotation.lattice_vectors(lengths, angles, setting=source, degrees=True)
    new = rotation.lattice_vectors(lengths, angles, setting=target, degrees=True)
    np.testing.assert_allclose(old @ A.T, new, atol=1e-14)


def test_trigonal_constants_change_sign_with_the_setting() -> None:
    """Turning x1 from a to a* (30 degrees, then 60 degrees) moves c14 to c25, and half a turn about c changes its sign.

    Nye, J. F. (1957), Physical Properties of Crystals, appendix B, and common practice: for quartz c14 is -17.91 GPa in
    one setting and +17.91 GPa in another (constants of Bechmann, R. (1958), Phys. Rev. 110, 1060).
    """
    voigt = fr.Notation.voigt(fr.Ordering("11 22 33 23 13 12"))
    c11, c12, c13, c14, c33, c44 = 86.74, 6.99, 11.91, -17.91, 107.2, 57.94
    quartz = fr.Stiffness.from_matrix(
        [
            [c11, c12, c13, c14, 0, 0],
            [c12, c11, c13, -c14, 0, 0],
            [c13, c13, c33, 0, 0, 0],
            [c14, -c14, 0, c44, 0, 0],
            [0, 0, 0, 0, c44, c14],
            [0, 0, 0, 0, c14, (c11 - c12) / 2],
        ],
        voigt,
    )
    cell = ([4.913, 4.913, 5.405], [90.0, 90.0, 120.0])
    A = rotation.axes_between_settings(
        *cell, source="IEEE 176 trigonal", target="x3 along c, x1 along a*", degrees=True
    )
    turned = quartz.in_axes(A).matrix(voigt)
    assert abs(turned[0, 3]) < TOLERANCE * c33
    assert abs(abs(turned[0, 4]) - 17.91) < TOLERANCE * c33
    half = rotation.axes_from_vectors(x3=[0, 0, 1], x1=[-1, 0, 0], exact="x3")
    np.testing.assert_allclose(quartz.in_axes(half).matrix(voigt)[0, 3], 17.91, rtol=1e-13)


CUBIC = np.eye(3)
REFUSED = [
    (
        lambda: rotation.axes_from_vectors(x1=[1, 0, 0], exact="x1"),
        fr.RotationError,
        "exactly two of x1, x2, x3, got x1",
    ),
    (lambda: rotation.axes_from_vectors(exact="x1"), fr.RotationError, "got none"),
    (
        lambda: rotation.axes_from_vectors(x1=[1, 0, 0], x2=[0, 1, 0], exact="x3"),
        fr.RotationError,
        r"\(x1 or x2\).*'x3'",
    ),
    (
        lambda: rotation.axes_from_vectors(x1=[[1, 0, 0], [0, 2, 0]], x2=[0, -1, 1e-7], exact="x1"),
        fr.RotationError,
        r"x1 and x2 of batch member \(1,\) are parallel \(the sine of their angle is 1e-07\)",
    ),
    (
        lambda: rotation.axes_from_vectors(x1=np.ones((2, 3)), x2=np.ones((3, 3)), exact="x1"),
        fr.ShapeError,
        r"\(2,\) of x1 and \(3,\) of x2",
    ),
    (
        lambda: rotation.lattice_vectors([1, 1, 1], [90, 90, 90], setting="x3 along a", degrees=True),  # type: ignore[arg-type]
        fr.RotationError,
        "setting must be one of 'x3 along c, x1 along a', .* got setting='x3 along a'",
    ),
    (
        lambda: rotation.axes_between_settings([1, 1, 1], [90, 90, 90], source="IEEE 176 cubic", target="cubic"),  # type: ignore[arg-type]
        fr.RotationError,
        "target must be one of",
    ),
    (
        lambda: rotation.lattice_vectors([[1, 1, 1], [1, -2, 1]], [90, 90, 90], setting="IEEE 176 cubic", degrees=True),
        fr.RotationError,
        r"b of batch member \(1,\) must be positive, got -2",
    ),
    (
        lambda: rotation.lattice_vectors([1, 1, 1], [90, 90, 180], setting="IEEE 176 cubic", degrees=True),
        fr.RotationError,
        "gamma must be between 0 and 180 degrees, got 180",
    ),
    (
        lambda: rotation.lattice_vectors([1, 1, 1], [90, 90, 90], setting="IEEE 176 triclinic"),
        fr.RotationError,
        "alpha must be between 0 and 180 degrees, got 90",
    ),
    (
        lambda: rotation.lattice_vectors([1, 1, 1], [150, 60, 60], setting="IEEE 176 triclinic", degrees=True),
        fr.RotationError,
        "the angles do not close to a lattice",
    ),
    (
        lambda: rotation.lattice_vectors([1, 2, 1], [90, 90, 120], setting="IEEE 176 hexagonal", degrees=True),
        fr.RotationError,
        "does not fit 'IEEE 176 hexagonal', which needs a = b, alpha = 90 degrees, .* gamma = 120 degrees",
    ),
    (
        lambda: rotation.lattice_vectors([1, 2, 1], [90, 90, 91], setting="IEEE 176 monoclinic", degrees=True),
        fr.RotationError,
        "which needs alpha = 90 degrees, gamma = 90 degrees",
    ),
    (lambda: rotation.plane_normals([0, 0, 0], CUBIC), fr.RotationError, r"hkl is \(0, 0, 0\)"),
    (lambda: rotation.crystal_directions([1, 0, 0], np.ones((3, 3))), fr.RotationError, "lattice has no volume"),
    (lambda: rotation.crystal_directions([1, 0, 0], np.zeros((3, 3))), fr.RotationError, "lattice has no volume"),
    (lambda: rotation.crystal_directions([1, 0, 0], 1j * CUBIC), fr.DataError, "lattice must be real"),
    (lambda: rotation.crystal_directions([1, 0, 0], np.nan * CUBIC), fr.DataError, "lattice: component 11 is nan"),
    (
        lambda: rotation.crystal_directions(np.ones((2, 3)), np.stack([CUBIC] * 3)),
        fr.ShapeError,
        r"\(2,\) of uvw and \(3,\) of lattice",
    ),
]


@pytest.mark.parametrize(("call", "error", "message"), REFUSED)
def test_what_gives_no_axes_is_refused(call: object, error: type[Exception], message: str) -> None:
    """The error names the argument, the member, the amount and the way on."""
    assert callable(call)
    with pytest.raises(error, match=message):
        call()
