"""One kernel for packing, unpacking and translating: pick components, and scale them by exactly rounded factors."""

from collections.abc import Callable, Sequence
from fractions import Fraction
from math import isqrt, prod
from typing import Any, Final, TypeAlias

import numpy as np
from numpy.typing import NDArray

from ._arrays import Inexact, blocks, is_finite, take_out

Equal: TypeAlias = tuple[NDArray[np.intp], NDArray[np.intp]]
_TOGETHER: Final = 16
_FEW: Final = 100


class Gather:
    """The map ``out[..., k] = factor[k] * array[..., index[k]]`` on flattened trailing axes.

    Factors are square roots of rational numbers (a notation's weights are rational, or square roots of 2 times a
    rational), kept as exact squares, and rounded once for each dtype. So a factor 1, 2 or 4 is exact, and sqrt 2 is
    within half an ulp, whatever chain of notations led to it.

    Parameters
    ----------
    source, target : tuple of int
        Trailing shapes of what is read and of the result.
    index : sequence of int
        Flat places in `source`, one for each component of `target`; None for a component that is zero.
    squares : sequence of Fraction
        The squares of the factors.
    sign : {1, -1}
        The common sign of the factors.
    """

    __slots__ = ("_factors", "_sign", "_squares", "_trivial", "_width", "_zeros", "index", "source", "target")

    def __init__(
        self,
        source: tuple[int, ...],
        target: tuple[int, ...],
        index: Sequence[int | None],
        squares: Sequence[Fraction],
        sign: int = 1,
    ) -> None:
        self.source = source
        self.target = target
        self._width = prod(source)
        self.index = np.array([0 if i is None else i for i in index], dtype=np.intp)
        self._zeros = np.array([k for k, i in enumerate(index) if i is None], dtype=np.intp)
        self._squares = tuple(squares)
        self._sign = sign
        self._trivial = sign == 1 and all(square == 1 for square in squares)
        self._factors: dict[str, NDArray[Any]] = {}

    def __call__(self, array: Inexact, out: NDArray[Any] | None = None) -> Inexact:
        """Apply the map to an array whose trailing shape is `source`; the result is a new array, or `out`."""
        shape = array.shape[: array.ndim - len(self.source)] + self.target
        factors = None if self._trivial else self.factors(array.dtype)
        if out is not None:
            take_out(out, shape, array.dtype)
            if not out.flags.c_contiguous or out.dtype != array.dtype or np.may_share_memory(array, out):
                out[...] = self(array)
                return out
        elif array.size <= _FEW * self._width and not len(self._zeros):
            # A few items, with as few calls as can be.
            single = array.size == self._width
            few: Inexact = (array if single else array.reshape(-1, self._width)).take(self.index, None if single else 1)
            if factors is not None:
                few *= factors
            return few.reshape(shape)
        result = np.empty(shape, array.dtype) if out is None else out
        self._fill(array.reshape(-1, self._width), factors, result.reshape(-1, len(self.index)))
        return result

    def checked(
        self, array: Inexact, out: NDArray[Any] | None, check: Callable[[], object], equal: Equal | None = None
    ) -> Inexact:
        """Apply the map to an array that was not looked at yet; `check` raises what there is to say against it.

        Data without fault are finite, and their components `equal` are the same bit for bit. A large batch is looked at
        block by block, while the block is in the cache; only where that finds something, the thorough check runs.
        """
        flat = array.reshape(-1, self._width)
        if out is not None or len(flat) <= _FEW:
            if not _is_clean(flat, equal):
                check()
            return self(array, out)
        result = np.empty(array.shape[: array.ndim - len(self.source)] + self.target, array.dtype)
        factors = None if self._trivial else self.factors(array.dtype)
        if not self._fill(flat, factors, result.reshape(-1, len(self.index)), look=True, equal=equal):
            check()
        return result

    def write_components(self, components: Inexact, out: Inexact) -> None:
        """Apply the map to the items of a block with its components first, (n, m), and write them as rows of `out`."""
        picked = components.take(self.index, axis=0)
        if not self._trivial:
            picked *= self.factors(components.dtype)[:, None]
        np.copyto(out, picked.T)

    def _fill(
        self,
        flat: Inexact,
        factors: NDArray[Any] | None,
        result: Inexact,
        *,
        look: bool = False,
        equal: Equal | None = None,
    ) -> bool:
        """Write the result, and return whether the data are clean as far as they were looked at."""
        width = len(self.index)
        clean = True
        for part in blocks(len(flat), max(width, self._width)):
            if look and clean:
                clean = _is_clean(flat[part], equal)
            block = result[part]
            # mode="clip" lets take write straight into `out`; the index is in range by construction.
            flat[part].take(self.index, axis=1, mode="clip", out=block)
            if factors is not None:
                # Several items at a time: numpy's loop over a handful of components is slow.
                whole = len(block) // _TOGETHER * _TOGETHER
                many = block[:whole].reshape(-1, _TOGETHER * width)
                many *= np.tile(factors, _TOGETHER)
                block[whole:] *= factors
            if len(self._zeros):
                block[:, self._zeros] = 0.0
        return clean

    def factors(self, dtype: np.dtype[Any]) -> NDArray[Any]:
        """Return the factors, rounded to the real precision of `dtype`."""
        factors = self._factors.get(dtype.char)
        if factors is None:
            real = np.dtype(dtype.char.lower())
            factors = np.array([self._sign * _root(square, real) for square in self._squares], real)
            self._factors[dtype.char] = factors
        return factors


def _is_clean(rows: Inexact, equal: Equal | None) -> bool:
    """Tell whether rows are finite, and component equal[0][k] the same as component equal[1][k]."""
    if not is_finite(rows):
        return False
    if equal is None:
        return True
    same = rows.take(equal[0], axis=1) == rows.take(equal[1], axis=1)
    return b"\0" not in same.tobytes() if len(rows) <= _FEW else bool(same.all())


def _root(square: Fraction, dtype: np.dtype[Any]) -> Any:
    """Return the square root of a rational number, rounded to `dtype`."""
    numerator, denominator = square.numerator, square.denominator
    p, q = isqrt(numerator), isqrt(denominator)
    wide = np.longdouble
    if p * p == numerator and q * q == denominator:
        # A quotient of Python's integers is correctly rounded to double precision.
        return wide(p) / wide(q) if dtype == wide else dtype.type(p / q)
    # Beyond double precision first, so that the only rounding that counts is the last one.
    return dtype.type(np.sqrt(wide(numerator) / wide(denominator)))
