"""`Turn` does to raw arrays in a notation what `rotate` does to value objects."""

import copy
import pickle
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from hypothesis.extra import numpy as hnp
from numpy.typing import NDArray
from scipy.spatial.transform import Rotation

import fourthrank as fr
from fourthrank import rotation

PAIRS = ["11", "22", "33", "23", "13", "12"]
WEIGHTS = st.sampled_from([(1.0, 2.0), (2.0**0.5, 2.0**0.5), (1.0, 1.0), (2.0, 1.0), (3.0, 0.5)])


def notation_of(pairs: list[str], weights: tuple[float, float], sign: bool) -> fr.Notation:
    """Return a notation of these parts."""
    ordering = fr.Ordering(" ".join(pairs))
    return fr.Notation(ordering, stress_shear=weights[0], strain_shear=weights[1], compression_positive=sign)


NOTATIONS = st.builds(notation_of, st.permutations(PAIRS), WEIGHTS, st.booleans())
VOIGT = fr.Notation.voigt(fr.Ordering("11 22 33 12 13 23"))
# float64 and float32 with the number of their own units in the last place that results may differ by.
DTYPES = ["float32", "float64", "longdouble", "complex64", "complex128", "clongdouble"]
FOURTH: dict[str, type[fr.Stiffness | fr.Compliance]] = {"stiffness": fr.Stiffness, "compliance": fr.Compliance}
SECOND: dict[str, type[fr.Stress | fr.Strain]] = {"stress": fr.Stress, "strain": fr.Strain}
BATCHES = st.one_of(hnp.mutually_broadcastable_shapes(num_shapes=2, max_dims=3, min_side=0, max_side=3))


def arrays(name: str, batch: tuple[int, ...], notation: fr.Notation, rng: np.random.Generator) -> NDArray[np.float64]:
    """Return random vectors, or matrices of tensors with the major symmetry, in a notation."""
    if name in SECOND:
        return rng.standard_normal((*batch, 6))
    values = rng.standard_normal((*batch, 6, 6))
    return FOURTH[name].from_matrix(values, notation, symmetrize=True).matrix(notation)


def by_objects(name: str, array: NDArray[Any], R: NDArray[np.float64], notation: fr.Notation) -> NDArray[Any]:
    """Return what the value objects give."""
    if name in SECOND:
        return SECOND[name].from_vector(array, notation).rotate(R, allow_reflection=True).vector(notation)
    turned = FOURTH[name].from_matrix(array, notation).rotate(R, allow_reflection=True)
    return turned.matrix(notation)


@pytest.mark.parametrize("name", [*SECOND, *FOURTH])
@given(seed=st.integers(0, 2**32), notation=NOTATIONS, shapes=BATCHES, reflect=st.booleans(), check=st.booleans())
def test_turn_does_what_rotate_does(
    name: str, seed: int, notation: fr.Notation, shapes: hnp.BroadcastableShapes, reflect: bool, check: bool
) -> None:
    """For all four quantities, batches that broadcast, any notation, reflections on request."""
    rng = np.random.default_rng(seed)
    array = arrays(name, shapes.input_shapes[0], notation, rng)
    R = rotation.random(shapes.input_shapes[1], rng) * (-1.0 if reflect else 1.0)
    turn = rotation.Turn(R, notation, allow_reflection=reflect)
    assert turn.notation == notation
    assert turn.shape == R.shape[:-2]
    np.testing.assert_array_equal(turn.matrix, R)
    turned = getattr(turn, name)(array, check=check)
    expected = by_objects(name, array, R, notation)
    assert (
        turned.shape == expected.shape == shapes.result_shape + array.shape[array.ndim - (1 if name in SECOND else 2) :]
    )
    np.testing.assert_allclose(turned, expected, rtol=0, atol=1e-12 * (1 + np.abs(expected).max(initial=0.0)))
    back = getattr(turn.inverse(), name)(turned, check=False)
    np.testing.assert_allclose(
        back, np.broadcast_to(array, back.shape), atol=1e-11 * (1 + np.abs(array).max(initial=0.0))
    )


@pytest.mark.parametrize("notation", [VOIGT, fr.Notation.tensorial(fr.Ordering("11 22 33 23 13 12"))], ids=repr)
@pytest.mark.parametrize("name", [*SECOND, *FOURTH])
@pytest.mark.parametrize("dtype", DTYPES)
@pytest.mark.parametrize("count", [1, 150, 2300])
@pytest.mark.parametrize("many", [False, True])
def test_turn_keeps_the_dtype_and_fills_out(
    notation: fr.Notation, name: str, dtype: str, count: int, many: bool
) -> None:
    """Every kept dtype comes back, in small and large batches, and `out` takes the result, also in place."""
    rng = np.random.default_rng(count)
    array = arrays(name, (count,), notation, rng).astype(dtype)
    R = rotation.random(count if many else (), rng)
    turn = rotation.Turn(R, notation)
    method = getattr(turn, name)
    turned = method(array)
    assert turned.dtype == array.dtype
    expected = by_objects(name, np.real(array).astype(float), R, notation)
    eps = max(np.finfo(dtype).eps, np.finfo(float).eps)
    assert np.abs(turned - expected).max() <= 200 * eps * np.abs(expected).max()
    out = np.full_like(turned, np.nan)
    assert method(array, out=out) is out
    np.testing.assert_array_equal(out, turned)
    strided = np.full((*turned.shape, 2), np.nan, dtype)[..., 0]
    method(array, out=strided)
    np.testing.assert_array_equal(strided, turned)
    in_place = array.copy()
    method(in_place, out=in_place, check=False)
    np.testing.assert_array_equal(in_place, turned)


@pytest.mark.parametrize("name", list(FOURTH))
@pytest.mark.parametrize("count", [1, 40, 150, 2300])
@pytest.mark.parametrize("many", [False, True])
def test_matrices_turned_in_a_conjugate_notation_are_symmetric_bit_for_bit(name: str, count: int, many: bool) -> None:
    """C_IJ == C_JI exactly."""
    rng = np.random.default_rng(4)
    turn = rotation.Turn(rotation.random(count if many else (), rng), VOIGT)
    turned = getattr(turn, name)(arrays(name, (count,), VOIGT, rng))
    np.testing.assert_array_equal(turned, turned.swapaxes(-1, -2))


def test_turn_keeps_complex_values() -> None:
    """Real and imaginary parts turn on their own."""
    rng = np.random.default_rng(1)
    turn = rotation.Turn(rotation.random((), rng), VOIGT)
    storage, loss = arrays("stiffness", (3,), VOIGT, rng), arrays("stiffness", (3,), VOIGT, rng)
    np.testing.assert_allclose(
        turn.stiffness(storage + 1j * loss), turn.stiffness(storage) + 1j * turn.stiffness(loss), atol=1e-13
    )


def test_turn_holds_the_matrices_of_its_notation() -> None:
    """They are those of `stress_matrix` and `strain_matrix`, read-only; objects with as_matrix() are accepted."""
    R = Rotation.from_quat(np.random.default_rng(3).standard_normal((4, 4)))
    turn = rotation.Turn(R, VOIGT)
    np.testing.assert_array_equal(turn.stress_matrix, rotation.stress_matrix(R, VOIGT))
    np.testing.assert_array_equal(turn.strain_matrix, rotation.strain_matrix(R, VOIGT))
    for held in (turn.matrix, turn.stress_matrix, turn.strain_matrix):
        assert not held.flags.writeable


def test_turn_is_a_value() -> None:
    """It is immutable, independent of the array that it came from, equal to its copies, and says what it is."""
    R = rotation.about_axis([0, 1, 0], 0.4)
    turn = rotation.Turn(R, VOIGT)
    R[...] = np.eye(3)
    assert turn == rotation.Turn(rotation.about_axis([0, 1, 0], 0.4), VOIGT)
    assert turn == pickle.loads(pickle.dumps(turn)) == copy.deepcopy(turn)
    assert turn != rotation.Turn(R, VOIGT)
    assert turn != rotation.Turn(turn.matrix, fr.Notation.mandel(VOIGT.ordering))
    assert turn != "turn"
    assert repr(turn) == "<Turn: batch shape (), for arrays in Notation.voigt(Ordering('11 22 33 12 13 23'))>"
    with pytest.raises(AttributeError, match="Turn is immutable"):
        turn.shape = (1,)  # type: ignore[misc]
    with pytest.raises(TypeError, match="unhashable"):
        hash(turn)


SINGLE = rotation.Turn(np.eye(3), VOIGT)
BATCH = rotation.Turn(np.stack([np.eye(3)] * 2), VOIGT)
SKEW = np.eye(6) + 1e-3 * np.eye(6, k=5)
REFUSED = [
    (lambda: rotation.Turn(2 * np.eye(3), VOIGT), fr.RotationError, "R is no rotation"),
    (lambda: rotation.Turn(-np.eye(3), VOIGT), fr.RotationError, "R is a reflection"),
    (lambda: rotation.Turn(np.eye(3), "voigt"), fr.NotationError, "notation must be a Notation, got 'voigt'"),  # type: ignore[arg-type]
    (
        lambda: rotation.Turn(np.eye(3), fr.Notation.voigt(fr.Ordering("11 22 12"))),
        fr.OrderingError,
        "a turn mixes all six components, the ordering '11 22 12' has 3",
    ),
    (lambda: SINGLE.stress([1.0] * 5), fr.ShapeError, r"stress vector must have shape \(\.\.\., 6\), got \(5,\)"),
    (lambda: SINGLE.strain([1, 2, 3, 4, np.nan, 6]), fr.DataError, "strain vector: component 13 is nan"),
    (lambda: SINGLE.stiffness(SKEW), fr.SymmetryError, r"stiffness must have the major .* average the two triangles"),
    (lambda: BATCH.compliance(SKEW), fr.SymmetryError, "compliance must have the major symmetry"),
    (lambda: SINGLE.compliance(np.full((6, 6), np.inf)), fr.DataError, r"compliance: component \[11, 11\] is inf"),
    (lambda: BATCH.stress(np.ones((3, 6))), fr.ShapeError, r"\(3,\) of stress vector and \(2,\) of R"),
    (lambda: BATCH.stiffness(np.ones((3, 6, 6))), fr.ShapeError, r"\(3,\) of stiffness and \(2,\) of R"),
    (
        lambda: SINGLE.stress(np.ones(6), out=np.ones(5)),
        fr.ShapeError,
        r"out must have the shape of the result, \(6,\)",
    ),
    (lambda: SINGLE.stiffness(np.eye(6), out=np.ones(6)), fr.ShapeError, r"\(6, 6\), got \(6,\)"),
    (lambda: BATCH.stiffness(np.eye(6), out=np.eye(6)), fr.ShapeError, r"\(2, 6, 6\), got \(6, 6\)"),
]


@pytest.mark.parametrize(("call", "error", "message"), REFUSED)
def test_turn_refuses_what_it_cannot_serve(call: object, error: type[Exception], message: str) -> None:
    """The error names the argument and what was expected."""
    assert callable(call)
    with pytest.raises(error, match=message):
        call()


def test_unchecked_data_pass_through() -> None:
    """check=False lets NaN through and reads one triangle only."""
    assert np.isnan(SINGLE.stress([np.nan] * 6, check=False)).all()
    np.testing.assert_array_equal(SINGLE.stiffness(SKEW.T, check=False), np.eye(6))
