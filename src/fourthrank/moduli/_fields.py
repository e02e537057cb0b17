"""What the sets of constants share: taking numbers in, checking bounds, patterns, and the refusal of another class."""

from collections.abc import Callable, Mapping

import numpy as np
from numpy.typing import ArrayLike, NDArray

from .._arrays import Inexact, broadcast_batches, check_finite, member_text, read_only, read_tolerance, take_in
from .._value import widen, working
from ..errors import ModuliError
from ..tensors import Compliance, Stiffness


def take_constants(given: Mapping[str, ArrayLike]) -> dict[str, NDArray[np.float64]]:
    """Return the named constants as finite read-only arrays of one batch shape, float64 or complex128."""
    arrays = {name: take_in(value, name, ()) for name, value in given.items()}
    for name, array in arrays.items():
        check_finite(array, name, 0, _label_of(name))
    batch = broadcast_batches(**{name: array.shape for name, array in arrays.items()})
    return {name: read_only(np.broadcast_to(widen(array), batch).copy()) for name, array in arrays.items()}


def require(holds: NDArray[np.bool_], symbol: str, value: Inexact, bound: str, way_on: str) -> None:
    """Raise `ModuliError` for the first batch member where a constant violates its bound."""
    if not holds.all():
        member = tuple(int(i) for i in np.unravel_index(int(holds.argmin()), holds.shape))
        raise ModuliError(f"{symbol}{member_text(member)} is {value[member]:.10g}, but must be {bound}; {way_on}")


def cubic_pattern(normal: Inexact, coupling: Inexact, shear: Inexact) -> Inexact:
    """Return working-form matrices with one value for normal components, one for their coupling, one for shear."""
    array = np.zeros((*np.shape(normal), 6, 6), np.result_type(normal, coupling, shear))
    array[..., :3, :3] = np.asarray(coupling)[..., None, None]
    for k in range(3):
        array[..., k, k] = normal
        array[..., 3 + k, 3 + k] = shear
    return array


def check_class(tensor: Stiffness | Compliance, fitted: Inexact, rtol: float | None, name: str, way_on: str) -> None:
    """Raise `ModuliError` where a tensor differs from the one of its class that was fitted to it, with the amount."""
    array = working(tensor)
    tolerance = read_tolerance(rtol, "rtol", array.dtype)
    size, misfit = tensor.norm(), np.sqrt((np.abs(array - fitted) ** 2).sum(axis=(-2, -1)))
    excess = np.asarray(misfit > tolerance * size)
    if excess.any():
        member = tuple(int(i) for i in np.unravel_index(int(excess.argmax()), excess.shape))
        raise ModuliError(
            f"{type(tensor).__name__.lower()}{member_text(member)} is not {name}: it differs from the tensor of the "
            f"constants read from it by {misfit[member] / size[member]:.3g} of its norm; the tolerance is "
            f"rtol={tolerance:.2g}; {way_on}"
        )


def _label_of(name: str) -> Callable[[tuple[int, ...]], str]:
    return lambda _: name
