"""The common part of the value objects: immutable batches of tensors in the working form."""

from abc import abstractmethod
from collections.abc import Callable, Sequence
from numbers import Number
from types import EllipsisType
from typing import Any, ClassVar, Final, Never, Self, TypeAlias, TypeVar, cast

import numpy as np
from numpy.typing import ArrayLike, NDArray

from . import _mandel
from ._arrays import Inexact, broadcast_batches, check_finite, read_only, take_in
from ._frozen import Frozen
from .errors import DataError, ImplicitNotationError, NotationError, ShapeError
from .notation import Notation
from .rotation.matrices import RotationLike, take_rotation

Index: TypeAlias = (
    int | slice | EllipsisType | Sequence[int] | Sequence[bool] | NDArray[np.integer[Any]] | NDArray[np.bool_] | None
)

_DOUBLE: Final = np.dtype(np.float64)


class Quantity(Frozen):
    """A batch of tensors of one kind, held read-only in the working form; the base of the value objects."""

    __slots__ = ("_held",)

    _held: Inexact
    _core: ClassVar[tuple[int, ...]]
    _reading: ClassVar[str]

    # numpy leaves operators to this class, which knows no numpy operand: `array * stiffness` is an error.
    __array_ufunc__ = None
    __iter__ = None

    def __init__(self, *_: Never, **__: Never) -> None:
        raise TypeError(f"{type(self).__name__} is made by its from_... constructors, which ask for what is needed")

    @classmethod
    def _hold(cls, array: Inexact) -> Self:
        """Return an object that owns `array`, which must be in the working form and referenced by nobody else."""
        self = object.__new__(cls)
        object.__setattr__(self, "_held", read_only(widen(array)))
        return self

    # Not NoReturn: type checkers would take the object for something that numpy can read.
    def __array__(self, *_: object, **__: object) -> object:
        raise ImplicitNotationError(
            f"a {type(self).__name__} is no bare array: its numbers depend on the component order and the shear "
            f"weights; name a notation ({self._reading}), or ask for the full tensor (.tensor())"
        )

    @property
    def shape(self) -> tuple[int, ...]:
        """The shape of the batch; () for a single tensor."""
        return self._held.shape[: self._held.ndim - len(self._core)]

    @property
    def ndim(self) -> int:
        """The number of axes of the batch."""
        return self._held.ndim - len(self._core)

    @property
    def size(self) -> int:
        """How many tensors there are."""
        return int(np.prod(self.shape, dtype=np.intp))

    @property
    def is_complex(self) -> bool:
        """Whether the components are complex (viscoelastic moduli, harmonic states)."""
        return self._held.dtype.kind == "c"

    @property
    def real(self) -> Self:
        """The real part."""
        return self._hold(np.real(self._held).copy())

    @property
    def imag(self) -> Self:
        """The imaginary part; zero where the components are real."""
        return self._hold(np.imag(self._held).copy())

    def norm(self) -> NDArray[np.float64]:
        """Return the Frobenius norm of the full tensor, the root of the sum of all its squared components.

        Returns
        -------
        ndarray of float64, shape (...)
            One norm for each tensor, in the unit of the components; independent of axes and notation.
        """
        parts = (np.real(self._held), np.imag(self._held)) if self.is_complex else (self._held,)
        component = "ij"[: len(self._core)]
        # einsum makes no array of squares on the way.
        squares = [np.einsum(f"...{component},...{component}->...", part, part) for part in parts]
        return np.asarray(np.sqrt(sum(squares)))

    def allclose(self, other: Self, *, rtol: float = 1e-9, atol: float = 0.0) -> bool:
        """Tell whether two batches agree: ``norm(self - other) <= atol + rtol * norm(other)`` everywhere.

        Parameters
        ----------
        other : same kind
            What to compare with; batches broadcast.
        rtol, atol : float
            Tolerances on the norm, so that neither axes nor notation matter.

        Returns
        -------
        bool
            Whether all tensors agree.
        """
        self._check_kind(other, "other")
        return bool(((self - other).norm() <= atol + rtol * other.norm()).all())

    def rotate(self, R: RotationLike, *, allow_reflection: bool = False, check: bool = True) -> Self:
        """Turn the body by R; the axes stay.

        A vector of the body goes from v to R v, so that second-order components become ``R_ik R_jl t_kl`` and
        fourth-order components ``R_ip R_jq R_kr R_ls t_pqrs``.

        Parameters
        ----------
        R : array_like, shape (..., 3, 3), or object with ``as_matrix()``
            Rotations; their batch broadcasts against that of the tensors.
        allow_reflection : bool
            Whether R may be a reflection; a tensor of even rank cannot tell R from -R.
        check : bool
            False skips all checks of R but that of its shape, for trusted rotations in a hot loop.

        Returns
        -------
        same kind
            The tensors of the turned body.

        Raises
        ------
        RotationError
            If a matrix is not orthogonal, with its defect, or is a reflection that was not asked for.
        ShapeError
            If the batches do not broadcast.
        """
        return self._turn(take_rotation(R, "R", allow_reflection=allow_reflection, check=check), "R")

    def in_axes(self, A: RotationLike, *, allow_reflection: bool = False, check: bool = True) -> Self:
        """Return the components along new axes, the rows of A; the body stays.

        The new second-order components are ``A_ik A_jl t_kl``, and the fourth-order ones
        ``A_ip A_jq A_kr A_ls t_pqrs``.

        Parameters
        ----------
        A : array_like, shape (..., 3, 3), or object with ``as_matrix()``
            Sets of axes, one axis a row, in the present axes; their batch broadcasts against that of the tensors.
        allow_reflection : bool
            Whether the axes may be left-handed; a tensor of even rank cannot tell.
        check : bool
            False skips all checks of A but that of its shape, for trusted axes in a hot loop.

        Returns
        -------
        same kind
            The same tensors along the new axes.

        Raises
        ------
        RotationError
            If a set of axes is not orthonormal, with its defect, or is left-handed and that was not asked for.
        ShapeError
            If the batches do not broadcast.
        """
        return self._turn(take_rotation(A, "A", allow_reflection=allow_reflection, check=check), "A")

    def scaled(self, factor: ArrayLike) -> Self:
        """Return each tensor of the batch times its own factor.

        Parameters
        ----------
        factor : array_like, shape (...)
            One factor for each tensor; broadcasts against the batch.

        Returns
        -------
        same kind
            The scaled tensors.

        Raises
        ------
        ShapeError, DataError
            If the batches do not broadcast, or a factor is not finite.
        """
        factors = take_in(factor, "factor", ())
        check_finite(factors, "factor", 0, lambda _: "factor")
        broadcast_batches(self=self.shape, factor=factors.shape)
        return self._hold(np.asarray(self._held * factors.reshape(factors.shape + (1,) * len(self._core))))

    def reshape(self, *shape: int) -> Self:
        """Return the same tensors in a batch of another shape.

        Parameters
        ----------
        *shape : int
            The new shape of the batch; one length may be -1.

        Returns
        -------
        same kind
            The same tensors in the same (row-major) order.

        Raises
        ------
        ShapeError
            If the number of tensors does not fit.
        """
        try:
            held = self._held.reshape(*np.empty(self.shape, np.bool_).reshape(shape).shape, *self._core)
        except ValueError:
            raise ShapeError(f"a batch of shape {self.shape} cannot be reshaped to {shape}") from None
        return self._hold(held.view())

    @classmethod
    def stack(cls, items: Sequence[Self]) -> Self:
        """Join tensors of equal batch shape along a new first axis of the batch.

        Parameters
        ----------
        items : sequence of the same kind
            At least one object.

        Returns
        -------
        same kind
            A batch of shape (len(items), ...).

        Raises
        ------
        ShapeError
            If there are none, or their batch shapes differ.
        """
        if not items:
            raise ShapeError("stack needs at least one item")
        for item in items:
            cls._check_kind(item, "every item")
        shapes = {item.shape for item in items}
        if len(shapes) != 1:
            raise ShapeError(f"stack needs items of equal batch shape, got {' and '.join(map(str, sorted(shapes)))}")
        return cls._hold(np.stack([item._held for item in items]))

    def __getitem__(self, index: Index | tuple[Index, ...]) -> Self:
        key = index if isinstance(index, tuple) else (index,)
        # Only the batch is indexed: an Ellipsis must not swallow the axes of the tensor, and a key that is too long
        # for the batch fails here and not in them.
        np.broadcast_to(np.False_, self.shape)[key]
        if any(part is Ellipsis for part in key):
            key = (*key, *(slice(None),) * len(self._core))
        return self._hold(np.array(self._held[key]))

    def __add__(self, other: Self) -> Self:
        if type(other) is not type(self):
            return NotImplemented
        return self._combine(other, np.add)

    def __sub__(self, other: Self) -> Self:
        if type(other) is not type(self):
            return NotImplemented
        return self._combine(other, np.subtract)

    def __mul__(self, factor: complex) -> Self:
        if not isinstance(factor, Number):  # callers without a checker
            return NotImplemented
        return self.scaled(factor)

    __rmul__ = __mul__

    def __truediv__(self, divisor: complex) -> Self:
        if not isinstance(divisor, Number):  # callers without a checker
            return NotImplemented
        if not np.isfinite(divisor) or not divisor:
            raise DataError(f"a {type(self).__name__} cannot be divided by {divisor}")
        return self._hold(np.asarray(self._held / divisor))

    def __neg__(self) -> Self:
        return self._hold(-self._held)

    def __pos__(self) -> Self:
        return self

    def __eq__(self, other: object) -> bool:
        """Tell whether both are of one kind, of one batch shape, and equal in every component."""
        if type(other) is not type(self):
            return NotImplemented
        return bool(np.array_equal(self._held, cast(Self, other)._held))

    __hash__ = None  # type: ignore[assignment]  # equality is by value, and the values are long

    def __repr__(self) -> str:
        kind = "complex" if self.is_complex else "real"
        size = f", norm {float(self.norm()):.6g}" if self.shape == () else ""
        return f"<{type(self).__name__}: batch shape {self.shape}, {kind}{size}; held as {_mandel.WORKING!r}>"

    def __reduce__(self) -> tuple[Callable[[Inexact], Self], tuple[Inexact]]:
        return self._hold, (self._held,)

    def _turn(self, matrices: NDArray[np.float64], name: str) -> Self:
        if matrices.ndim > 2:
            broadcast_batches(**{type(self).__name__: self.shape, name: matrices.shape[:-2]})
        return self._hold(self._turned(matrices))

    @abstractmethod
    def _turned(self, rotations: NDArray[np.float64]) -> Inexact:
        """Return the held array turned by rotations, shape (..., 3, 3)."""

    def _combine(self, other: Self, operation: np.ufunc) -> Self:
        broadcast_batches(left=self.shape, right=other.shape)
        return self._hold(np.asarray(operation(self._held, other._held)))

    @classmethod
    def _check_kind(cls, other: object, name: str) -> None:
        if type(other) is not cls:
            raise TypeError(f"{name} must be a {cls.__name__}, got {type(other).__name__}")


QuantityT = TypeVar("QuantityT", bound=Quantity)


def make(kind: type[QuantityT], array: Inexact) -> QuantityT:
    """Return an object of `kind` that owns `array`, in the working form; for use inside the library."""
    return kind._hold(array)  # pyright: ignore[reportPrivateUsage]  # the one door in


def working(quantity: Quantity) -> Inexact:
    """Return the read-only array that an object holds, in the working form; for use inside the library."""
    return quantity._held  # pyright: ignore[reportPrivateUsage]  # the one door out


def widen(array: Inexact) -> Inexact:
    """Return `array` in the precision that value objects hold: float64, or complex128."""
    if array.dtype is _DOUBLE:
        return array
    return array.astype(np.complex128 if array.dtype.kind == "c" else np.float64, copy=False)


def check_notation(notation: Notation) -> None:
    """Raise `NotationError` where something else was given for a notation."""
    if not isinstance(notation, Notation):  # pyright: ignore[reportUnnecessaryIsInstance]  # callers without a checker
        raise NotationError(
            f"notation must be a Notation, got {notation!r}: for example Notation.voigt(Ordering('11 22 33 23 13 12'))"
        )


def require_single(quantity: Quantity) -> None:
    """Raise `ShapeError` unless there is exactly one tensor, without batch axes."""
    if quantity.shape != ():
        raise ShapeError(
            f"a table shows a single {type(quantity).__name__}, the batch has shape {quantity.shape}: index it first"
        )


def number_text(value: complex, digits: int) -> str:
    """Return a number to so many significant digits; minus zero is zero."""
    return f"{value + 0.0:.{digits}g}"
