"""Large batches, which go through in blocks, give what their members give one by one, and are looked at as closely."""

from collections.abc import Callable
from typing import Any

import numpy as np
import pytest
from numpy.typing import NDArray

import fourthrank as fr

SOURCE = fr.Notation(fr.Ordering("11 22 33 12 13 23"), stress_shear=1.0, strain_shear=2.0, compression_positive=True)
TARGET = fr.Notation.mandel(fr.Ordering("13 22 33 23 11 12"))
PLANE = fr.Notation.voigt(fr.Ordering("12 11 22"))
TRANSLATOR = fr.Translator(SOURCE, TARGET)
COUNTS = [101, 2000, 4500]
"""More than what goes at once, one whole block of most operations, and several with a rest."""


def tensors(count: int, *, plane: bool = False) -> NDArray[np.float64]:
    """Return symmetric 3x3 tensors."""
    values = np.random.default_rng(count).standard_normal((count, 3, 3))
    values = values + values.swapaxes(-1, -2)
    if plane:
        values[:, 2, :2] = values[:, :2, 2] = values[:, 2, 2] = 0.0
    return values


def matrices(count: int) -> NDArray[np.float64]:
    """Return symmetric 6x6 matrices."""
    values = np.random.default_rng(count).standard_normal((count, 6, 6))
    return values + values.swapaxes(-1, -2)


OPERATIONS: dict[str, tuple[Callable[[int], NDArray[Any]], Callable[..., NDArray[Any]]]] = {
    "pack strain": (tensors, SOURCE.pack_strain),
    "pack plane stress": (lambda count: tensors(count, plane=True), PLANE.pack_stress),
    "unpack stress": (lambda count: matrices(count)[:, 0], SOURCE.unpack_stress),
    "unpack plane strain": (lambda count: matrices(count)[:, 0, :3].copy(), PLANE.unpack_strain),
    "pack stiffness": (lambda count: SOURCE.unpack_stiffness(matrices(count)), TARGET.pack_stiffness),
    "unpack compliance": (matrices, TARGET.unpack_compliance),
    "translate strain": (lambda count: matrices(count)[:, 0], TRANSLATOR.strain),
    "translate compliance": (matrices, TRANSLATOR.compliance),
}


@pytest.mark.parametrize("name", list(OPERATIONS))
@pytest.mark.parametrize("count", COUNTS)
@pytest.mark.parametrize("dtype", ["float32", "float64", "longdouble", "complex128"])
def test_a_large_batch_gives_what_its_members_give(name: str, count: int, dtype: str) -> None:
    """Bit for bit, checked or not, into a new array or into `out`, whatever its memory looks like."""
    make, operation = OPERATIONS[name]
    data = make(count).astype(dtype)
    whole = operation(data)
    assert whole.dtype == data.dtype
    for k in (0, 1, count // 2, count - 1):
        np.testing.assert_array_equal(whole[k], operation(data[k]))
    np.testing.assert_array_equal(operation(data, check=False), whole)
    np.testing.assert_array_equal(operation(data[::-1]), whole[::-1])
    for out in (np.full_like(whole, np.nan), np.full((*whole.shape, 2), np.nan, dtype)[..., 1]):
        assert operation(data, out=out) is out
        np.testing.assert_array_equal(out, whole)


@pytest.mark.parametrize("name", list(OPERATIONS))
@pytest.mark.parametrize("count", [1, 50, *COUNTS])
@pytest.mark.parametrize("with_out", [False, True])
def test_a_component_that_is_not_finite_is_found(name: str, count: int, with_out: bool) -> None:
    """In the last member; the message names it, and `out` stays as it was."""
    make, operation = OPERATIONS[name]
    data = make(count)
    out = np.zeros_like(operation(data)) if with_out else None
    data[-1].flat[0] = np.nan
    with pytest.raises(fr.DataError, match=rf"component .* of batch member \({count - 1},\) is nan"):
        operation(data, out=out)
    assert out is None or not out.any()
    operation(data, check=False)


@pytest.mark.parametrize("name", ["pack strain", "pack plane stress", "pack stiffness"])
@pytest.mark.parametrize("count", [1, 50, *COUNTS])
def test_lacking_symmetry_is_found(name: str, count: int) -> None:
    """Rounding passes and more does not; the message names the member."""
    make, operation = OPERATIONS[name]
    data = make(count)
    place = (-1, 0, 1) if data.ndim == 3 else (-1, 0, 1, 0, 2)
    value = data[place]
    data[place] = value + 1e-12
    operation(data)
    data[place] = value + 1e-6
    with pytest.raises(fr.SymmetryError, match=rf"of batch member \({count - 1},\) must be equal"):
        operation(data)


@pytest.mark.parametrize("kind", [fr.Stiffness, fr.Compliance])
@pytest.mark.parametrize("count", COUNTS)
def test_large_batches_of_matrices_are_made_symmetric(kind: Any, count: int) -> None:
    """Rounding is averaged away, more is refused unless that was asked for, and the input stays as it was."""
    data = matrices(count)
    data[-1, 0, 5] += 1e-12
    before = data.copy()
    read = kind.from_matrix(data, TARGET)
    np.testing.assert_array_equal(data, before)
    written = read.matrix(TARGET)
    np.testing.assert_array_equal(written, written.swapaxes(-1, -2))
    np.testing.assert_allclose(written, (data + data.swapaxes(-1, -2)) / 2, rtol=0, atol=1e-15)
    assert read[-1] == kind.from_matrix(data[-1], TARGET)
    assert kind.from_matrix(data, TARGET, check=False) == read
    data[-1, 0, 5] += 1.0
    with pytest.raises(fr.SymmetryError, match=rf"batch member \({count - 1},\)"):
        kind.from_matrix(data, TARGET)
    assert kind.from_matrix(data, TARGET, symmetrize=True)[-1] == kind.from_matrix(data[-1], TARGET, symmetrize=True)
    full = kind.from_tensor(read.tensor())
    assert full.allclose(read, rtol=1e-15)


@pytest.mark.parametrize("count", COUNTS)
def test_the_extra_memory_does_not_grow_with_the_batch(count: int) -> None:
    """Beyond the result there is scratch memory of a fixed size: less than 6 MB, whatever the size of the batch."""
    import tracemalloc

    from fourthrank import rotation

    C = fr.Stiffness.from_matrix(matrices(10 * count) + 20.0 * np.eye(6), TARGET)
    R = rotation.random(10 * count, np.random.default_rng(0))
    calls: list[Callable[[], Any]] = [lambda: C.rotate(R), lambda: C.rotate(R[0]), C.inverse, lambda: C.matrix(SOURCE)]
    for call in calls:
        call()
        tracemalloc.start()
        call()
        peak = tracemalloc.get_traced_memory()[1]
        tracemalloc.stop()
        assert peak < 1.2 * 288 * 10 * count + 6e6
