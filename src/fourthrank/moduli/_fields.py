"""Taking elastic constants in: numbers of any batch shape, checked for sign and bounds, broadcast to one batch."""

from collections.abc import Callable, Mapping

import numpy as np
from numpy.typing import ArrayLike, NDArray

from .._arrays import Inexact, broadcast_batches, check_finite, member_text, read_only, take_in
from .._value import widen
from ..errors import ModuliError


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


def _label_of(name: str) -> Callable[[tuple[int, ...]], str]:
    return lambda _: name
