"""Scratch memory for the kernels: one array in each thread, of fixed size, kept between calls.

Fresh scratch in every call makes the allocator give pages back and fault them in again, which costs more than the work
itself at a few thousand items. The size is fixed, so that nothing grows with a batch.
"""

import threading
from collections.abc import Generator
from contextlib import contextmanager
from typing import Final

import numpy as np
from numpy.typing import NDArray

from ._arrays import BLOCK_ITEMS

COMPONENTS: Final = 114
"""How many components of a block the scratch memory holds: three 6x6 matrices and a vector."""


class _Kept(threading.local):
    memory: NDArray[np.float64] | None = None


_kept: Final = _Kept()


@contextmanager
def scratch() -> Generator[NDArray[np.float64]]:
    """Lend the thread's array of shape (COMPONENTS, BLOCK_ITEMS); its contents are arbitrary."""
    memory = _kept.memory
    if memory is None:
        memory = np.empty((COMPONENTS, BLOCK_ITEMS))
    # While it is lent the thread has none: a finalizer or signal handler that comes in between gets its own.
    _kept.memory = None
    try:
        yield memory
    finally:
        _kept.memory = memory
