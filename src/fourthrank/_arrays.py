"""Taking arrays in: dtype, trailing shape, finiteness, equal components, the array that takes a result.

Raw arrays keep their dtype when it is float32, float64, longdouble or a complex one; everything else that is a number
becomes float64. Every check names the argument, the worst element in the caller's own labels, and the amount.
"""

from collections.abc import Callable, Iterator, Sequence
from typing import Any, Final, TypeAlias, TypeVar

import numpy as np
from numpy.typing import ArrayLike, NDArray

from .errors import DataError, FourthRankError, ShapeError, SymmetryError

# An array of one of the kept dtypes; which one, only the values can tell.
Inexact: TypeAlias = NDArray[Any]
Scalar = TypeVar("Scalar", bound=np.inexact)
Label: TypeAlias = Callable[[tuple[int, ...]], str]

_KEPT_DTYPES: Final = "fdgFDG"
_DOUBLE: Final = np.dtype(np.float64)
_FEW: Final = 100

BLOCK_ITEMS: Final = 2000
"""Batch members handled at a time in large batches, so that the working set stays in the cache.

Not a power of two: equal strides of 2**k bytes compete for the same cache lines.
"""


def take_in(value: ArrayLike, name: str, core: tuple[int, ...], *, hint: str = "") -> Inexact:
    """Return `value` as an array of a kept dtype whose trailing shape is `core`; never a copy without need."""
    array = value if type(value) is np.ndarray else _to_array(value, name)
    dtype = array.dtype
    # The usual case is settled by identity; the general question costs more than a small operation itself.
    if dtype is not _DOUBLE and (dtype.char not in _KEPT_DTYPES or not dtype.isnative):
        array = array.astype(_kept_dtype(dtype, name))
    shape = array.shape
    if shape[len(shape) - len(core) :] != core:
        raise ShapeError(f"{name} must have shape {shape_text(core)}, got {shape}{'; ' + hint if hint else ''}")
    return array


def _to_array(value: ArrayLike, name: str) -> NDArray[Any]:
    if np.ma.is_masked(value):
        raise DataError(f"{name} has masked elements; fill or drop them first, they would be taken for data")
    try:
        return np.asarray(value)
    except FourthRankError:
        raise
    except ValueError as error:
        raise ShapeError(f"{name} is no rectangular array of numbers: {error}") from None


def _kept_dtype(dtype: np.dtype[Any], name: str) -> np.dtype[Any]:
    """Return the dtype that stands for `dtype` inside: native, and float64 for integers and half precision."""
    if dtype.char in _KEPT_DTYPES:
        return dtype.newbyteorder("=")
    if dtype.kind in "iuf":
        return np.dtype(np.float64)
    raise DataError(f"{name} must hold real or complex numbers, got dtype {dtype}")


def shape_text(core: tuple[int, ...]) -> str:
    """Return a trailing shape as it is written in docstrings, for example '(..., 6, 6)'."""
    return f"(..., {', '.join(map(str, core))})"


def member_text(index: Sequence[int]) -> str:
    """Return how a message names a batch member: nothing for a single item."""
    return f" of batch member {tuple(int(i) for i in index)}" if len(index) else ""


def check_finite(array: Inexact, name: str, core_ndim: int, label: Label) -> None:
    """Raise `DataError` for the first component that is NaN or infinite."""
    if is_finite(array):
        return
    index = np.argwhere(~np.isfinite(array))[0]
    member, component = index[: array.ndim - core_ndim], index[array.ndim - core_ndim :]
    raise DataError(
        f"{name}: component {label(tuple(map(int, component)))}{member_text(member)} is {array[tuple(index)]}; "
        "every component must be finite"
    )


def is_finite(array: Inexact) -> bool:
    """Tell whether every element is finite."""
    if array.size <= _FEW:
        return b"\0" not in np.isfinite(array).tobytes()  # all() alone would cost a microsecond
    if array.flags.c_contiguous:
        # One pass that writes nothing: a NaN or an infinity always spoils the sum of squares. Squares may also
        # overflow, and only then does the exact test decide.
        flat = array.reshape(-1)
        with np.errstate(over="ignore", invalid="ignore"):
            square = flat.dot(flat)
        if np.isfinite(square):
            return True
    return bool(np.isfinite(array).all())


def default_rtol(dtype: np.dtype[Any]) -> float:
    """Return the relative tolerance of entry checks: 1e-5 in single precision, else 1e-9."""
    return 1e-5 if dtype.char in "fF" else 1e-9


def read_tolerance(value: float | None, name: str, dtype: np.dtype[Any]) -> float:
    """Return the caller's tolerance, checked, or the default for `dtype`."""
    if value is None:
        return default_rtol(dtype)
    if not 0.0 <= value < np.inf:
        raise DataError(f"{name} must be a finite number that is not negative, got {name}={value!r}")
    return float(value)


def check_equal_components(
    flat: Inexact,
    left: NDArray[np.intp],
    right: NDArray[np.intp],
    rtol: float,
    describe: Callable[[int], str],
    hint: str,
    entries: Callable[[tuple[int, ...], int], str] | None = None,
) -> bool:
    """Raise `SymmetryError` where components that must be equal differ by more than `rtol` of the largest component.

    Return whether they are equal exactly. `flat` has shape (..., n); component left[k] must equal component right[k];
    `describe(k)` names the pair. Where `flat` does not hold the caller's own numbers, `entries(member, k)` states them.
    """
    if flat.size == 0:
        return True
    rows = flat.reshape(-1, flat.shape[-1])
    exact = True
    for part in blocks(len(rows), flat.shape[-1]):
        block = rows[part]
        first, second = block.take(left, axis=1), block.take(right, axis=1)
        if (first == second).all():
            continue
        exact = False
        defect = np.abs(first - second)
        largest = np.abs(block).max(axis=1)
        # Written so that a NaN, possible in unchecked data only, is reported and not passed.
        if not (defect <= rtol * largest[:, None]).all():
            with np.errstate(divide="ignore", invalid="ignore"):
                relative = defect / largest[:, None]
            item, k = np.unravel_index(int(relative.argmax()), relative.shape)
            member = tuple(map(int, np.unravel_index(part.start + int(item), flat.shape[:-1])))
            if entries is None:
                found = (
                    f"must be equal: {first[item, k]:.10g} and {second[item, k]:.10g} differ by {defect[item, k]:.3g},"
                )
            else:
                found = f"must be equal: {entries(member, int(k))}; the components differ by"
            raise SymmetryError(
                f"{describe(int(k))}{member_text(member)} {found} {relative[item, k]:.2g} of the largest "
                f"component; the tolerance is rtol={rtol:.2g}; {hint}"
            )
    return exact


def blocks(count: int, width: int) -> "Iterator[slice[int, int]]":
    """Return slices of a large batch whose items have so many components; see `BLOCK_ITEMS`."""
    step = BLOCK_ITEMS * 36 // max(width, 36)
    return (slice(start, min(start + step, count)) for start in range(0, count, step))


def take_out(out: NDArray[Any], shape: tuple[int, ...], dtype: np.dtype[Any]) -> None:
    """Check the caller's `out` before anything is written to it."""
    if not isinstance(out, np.ndarray):  # pyright: ignore[reportUnnecessaryIsInstance]  # callers without a checker
        raise DataError(f"out must be a numpy array, got {type(out).__name__}")
    if out.shape != shape:
        raise ShapeError(f"out must have the shape of the result, {shape}, got {out.shape}")
    if not np.can_cast(dtype, out.dtype, "same_kind"):
        raise DataError(f"out of dtype {out.dtype} cannot take a result of dtype {dtype}")
    if not out.flags.writeable:
        raise DataError("out is read-only")


def broadcast_batches(**shapes: tuple[int, ...]) -> tuple[int, ...]:
    """Return the common batch shape; the keywords name the arguments in the error."""
    distinct = set(shapes.values()) - {()}
    if len(distinct) <= 1:  # the usual case, at a third of the cost
        return distinct.pop() if distinct else ()
    try:
        return np.broadcast_shapes(*shapes.values())
    except ValueError:
        listed = " and ".join(f"{shape} of {name}" for name, shape in shapes.items())
        raise ShapeError(
            f"batch shapes {listed} do not broadcast: give them equal lengths, or 1, axis by axis from the last"
        ) from None


def read_only(array: NDArray[Any]) -> NDArray[Any]:
    """Return `array` after marking it read-only."""
    array.flags.writeable = False
    return array
