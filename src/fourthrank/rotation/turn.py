"""A rotation made ready for a loop: its 6x6 matrices in one notation, applied to raw arrays."""

from typing import Any, Final, final, overload

import numpy as np
from numpy.typing import ArrayLike, NDArray

from .. import _mandel
from .._arrays import Inexact, Scalar, broadcast_batches, check_finite, default_rtol, take_in, take_out
from .._frozen import Frozen
from .._packing.weights import Side
from .._turning import SQUARE, UPPER, map_vectors, turn_by_one, turn_matrices, turning_matrix
from ..errors import NotationError, OrderingError
from ..notation import Notation
from ..translation import passage
from .bond import strain_matrix, stress_matrix
from .matrices import RotationLike, take_rotation

__all__ = ["Turn"]

_FEW: Final = 100
"""Up to so many matrices the blocks of larger batches do not pay."""


@final
class Turn(Frozen):
    """Rotations with their 6x6 matrices in one notation, made once and applied to raw arrays many times.

    What ``x.rotate(R)`` does to value objects, this does to arrays, with nothing built inside the loop: a vector of the
    body goes from v to R v, ``sigma'_ij = R_ik R_jl sigma_kl`` and ``C'_ijkl = R_ip R_jq R_kr R_ls C_pqrs``. For new
    components along the rows of A, as in ``x.in_axes(A)``, give A for R.

    Parameters
    ----------
    R : array_like, shape (..., 3, 3), or object with ``as_matrix()``
        Rotations of the body, or sets of axes (rows).
    notation : Notation
        How the arrays are written; its ordering must be complete.
    allow_reflection : bool
        Whether R may be a reflection; a tensor of even rank cannot tell R from -R.

    Raises
    ------
    RotationError
        If a matrix is no rotation.
    NotationError, OrderingError
        If `notation` is no notation, or its ordering is partial.

    Examples
    --------
    >>> from fourthrank import Notation, Ordering, rotation
    >>> voigt = Notation.voigt(Ordering("11 22 33 23 13 12"))
    >>> ply = rotation.Turn(rotation.about_axis([0, 0, 1], 90, degrees=True), voigt)
    >>> ply.stress([1.0, 0.0, 0.0, 0.0, 0.0, 5.0])
    array([ 0.,  1.,  0.,  0.,  0., -5.])
    """

    __slots__ = ("_cast", "_folds", "_notation", "_rotations", "_vectors")

    _notation: Notation
    _rotations: NDArray[np.float64]
    _vectors: dict[Side, NDArray[np.float64]]
    _folds: dict[tuple[Side, Side], "_Fold"]
    # Copies in other precisions, made on first use; a race between threads makes the same copy twice, no more.
    _cast: dict[tuple[Side, str], Inexact]

    def __init__(self, R: RotationLike, notation: Notation, *, allow_reflection: bool = False) -> None:
        if not isinstance(notation, Notation):  # pyright: ignore[reportUnnecessaryIsInstance]  # callers without a checker
            raise NotationError(f"notation must be a Notation, got {notation!r}")
        if not notation.ordering.complete:
            raise OrderingError(
                f"a turn mixes all six components, the ordering '{notation.ordering}' has {notation.ordering.size}: "
                "use a complete ordering"
            )
        matrices = take_rotation(R, "R", allow_reflection=allow_reflection).copy()
        # An even rank cannot tell R from -R, so that the matrices of a reflection are those of the rotation.
        proper = matrices * np.sign(np.linalg.det(matrices))[..., None, None]
        vectors: dict[Side, NDArray[np.float64]] = {
            "stress": stress_matrix(proper, notation),
            "strain": strain_matrix(proper, notation),
        }
        for array in (matrices, *vectors.values()):
            array.flags.writeable = False
        folds: dict[tuple[Side, Side], _Fold] = {}
        if matrices.ndim == 2:
            turning = turning_matrix(_mandel.rotation_matrices(matrices))
            folds = {sides: _Fold(notation, *sides, turning) for sides in _SIDES}
        object.__setattr__(self, "_notation", notation)
        object.__setattr__(self, "_rotations", matrices)
        object.__setattr__(self, "_vectors", vectors)
        object.__setattr__(self, "_folds", folds)
        object.__setattr__(self, "_cast", {})

    @property
    def notation(self) -> Notation:
        """How the arrays are written."""
        return self._notation

    @property
    def shape(self) -> tuple[int, ...]:
        """The shape of the batch of rotations; () for a single one."""
        return self._rotations.shape[:-2]

    @property
    def matrix(self) -> NDArray[np.float64]:
        """The rotations R, shape (..., 3, 3), read-only."""
        return self._rotations

    @property
    def stress_matrix(self) -> NDArray[np.float64]:
        """The matrices of stress vectors, shape (..., 6, 6), read-only."""
        return self._vectors["stress"]

    @property
    def strain_matrix(self) -> NDArray[np.float64]:
        """The matrices of strain vectors, shape (..., 6, 6), read-only."""
        return self._vectors["strain"]

    def inverse(self) -> "Turn":
        """Return the turn back, by the transposed rotations.

        Returns
        -------
        Turn
            In the same notation.
        """
        return Turn(self._rotations.swapaxes(-1, -2), self._notation, allow_reflection=True)

    @overload
    def stress(
        self, vector: NDArray[Scalar], *, out: NDArray[Scalar] | None = None, check: bool = True
    ) -> NDArray[Scalar]: ...
    @overload
    def stress(
        self, vector: ArrayLike, *, out: NDArray[np.inexact] | None = None, check: bool = True
    ) -> NDArray[np.inexact]: ...
    def stress(self, vector: ArrayLike, *, out: NDArray[Any] | None = None, check: bool = True) -> NDArray[Any]:
        """Turn stress vectors: ``s'_I = M_IJ s_J``, that is ``sigma'_ij = R_ik R_jl sigma_kl``.

        Parameters
        ----------
        vector : array_like, shape (..., 6)
            Stress vectors in the notation, in any consistent unit; batches broadcast against that of the rotations.
        out : ndarray, shape (..., 6), optional
            Takes the result; it may be `vector` itself.
        check : bool
            False skips the check of finiteness.

        Returns
        -------
        ndarray, shape (..., 6)
            The turned vectors, in the dtype of `vector` (float64 for integers).

        Raises
        ------
        ShapeError
            If the trailing shape is not (6,), batches do not broadcast, or `out` does not fit.
        DataError
            If a component is not finite.

        Examples
        --------
        >>> import numpy as np
        >>> from fourthrank import Notation, Ordering, rotation
        >>> turn = rotation.Turn(np.eye(3), Notation.voigt(Ordering("11 22 33 23 13 12")))
        >>> turn.stress([1, 2, 3, 4, 5, 6])
        array([1., 2., 3., 4., 5., 6.])
        """
        return self._turn_vector(vector, "stress", out, check)

    @overload
    def strain(
        self, vector: NDArray[Scalar], *, out: NDArray[Scalar] | None = None, check: bool = True
    ) -> NDArray[Scalar]: ...
    @overload
    def strain(
        self, vector: ArrayLike, *, out: NDArray[np.inexact] | None = None, check: bool = True
    ) -> NDArray[np.inexact]: ...
    def strain(self, vector: ArrayLike, *, out: NDArray[Any] | None = None, check: bool = True) -> NDArray[Any]:
        """Turn strain vectors: ``e'_I = N_IJ e_J``, that is ``eps'_ij = R_ik R_jl eps_kl``.

        Parameters
        ----------
        vector : array_like, shape (..., 6)
            Strain vectors in the notation; batches broadcast against that of the rotations.
        out : ndarray, shape (..., 6), optional
            Takes the result; it may be `vector` itself.
        check : bool
            False skips the check of finiteness.

        Returns
        -------
        ndarray, shape (..., 6)
            The turned vectors, in the dtype of `vector` (float64 for integers).

        Raises
        ------
        ShapeError, DataError
            As `stress`.

        Examples
        --------
        >>> from fourthrank import Notation, Ordering, rotation
        >>> quarter = rotation.about_axis([0, 0, 1], 90, degrees=True)
        >>> turn = rotation.Turn(quarter, Notation.voigt(Ordering("11 22 33 23 13 12")))
        >>> turn.strain([1.0, 0.0, 0.0, 0.0, 0.0, 0.5])
        array([ 0. ,  1. ,  0. ,  0. ,  0. , -0.5])
        """
        return self._turn_vector(vector, "strain", out, check)

    @overload
    def stiffness(
        self, matrix: NDArray[Scalar], *, out: NDArray[Scalar] | None = None, check: bool = True
    ) -> NDArray[Scalar]: ...
    @overload
    def stiffness(
        self, matrix: ArrayLike, *, out: NDArray[np.inexact] | None = None, check: bool = True
    ) -> NDArray[np.inexact]: ...
    def stiffness(self, matrix: ArrayLike, *, out: NDArray[Any] | None = None, check: bool = True) -> NDArray[Any]:
        """Turn stiffness matrices of tensors with the major symmetry: ``C'_ijkl = R_ip R_jq R_kr R_ls C_pqrs``.

        Parameters
        ----------
        matrix : array_like, shape (..., 6, 6)
            Stiffness matrices in the notation, in any consistent unit; batches broadcast against that of the
            rotations.
        out : ndarray, shape (..., 6, 6), optional
            Takes the result; it may be `matrix` itself.
        check : bool
            False skips the checks of finiteness and of the major symmetry. Only one triangle is read then.

        Returns
        -------
        ndarray, shape (..., 6, 6)
            The turned matrices, in the dtype of `matrix` (float64 for integers), symmetric bit for bit in a
            work-conjugate notation.

        Raises
        ------
        ShapeError
            If the trailing shape is not (6, 6), batches do not broadcast, or `out` does not fit.
        DataError
            If a component is not finite.
        SymmetryError
            If the tensor lacks the major symmetry, by more than 1e-9 (single precision: 1e-5) of its largest component.

        Examples
        --------
        >>> import numpy as np
        >>> from fourthrank import Notation, Ordering, rotation
        >>> quarter = rotation.about_axis([0, 0, 1], 90, degrees=True)
        >>> turn = rotation.Turn(quarter, Notation.voigt(Ordering("11 22 33 23 13 12")))
        >>> np.diag(turn.stiffness(np.diag([1.0, 2.0, 3.0, 4.0, 5.0, 6.0])))
        array([2., 1., 3., 5., 4., 6.])
        """
        return self._turn_matrix(matrix, "stiffness", ("stress", "strain"), out, check)

    @overload
    def compliance(
        self, matrix: NDArray[Scalar], *, out: NDArray[Scalar] | None = None, check: bool = True
    ) -> NDArray[Scalar]: ...
    @overload
    def compliance(
        self, matrix: ArrayLike, *, out: NDArray[np.inexact] | None = None, check: bool = True
    ) -> NDArray[np.inexact]: ...
    def compliance(self, matrix: ArrayLike, *, out: NDArray[Any] | None = None, check: bool = True) -> NDArray[Any]:
        """Turn compliance matrices of tensors with the major symmetry: ``S'_ijkl = R_ip R_jq R_kr R_ls S_pqrs``.

        Parameters
        ----------
        matrix : array_like, shape (..., 6, 6)
            Compliance matrices in the notation, in any consistent unit; batches broadcast against that of the
            rotations.
        out : ndarray, shape (..., 6, 6), optional
            Takes the result; it may be `matrix` itself.
        check : bool
            False skips the checks of finiteness and of the major symmetry. Only one triangle is read then.

        Returns
        -------
        ndarray, shape (..., 6, 6)
            The turned matrices, in the dtype of `matrix` (float64 for integers), symmetric bit for bit in a
            work-conjugate notation.

        Raises
        ------
        ShapeError, DataError, SymmetryError
            As `stiffness`.

        Examples
        --------
        >>> import numpy as np
        >>> from fourthrank import Notation, Ordering, rotation
        >>> quarter = rotation.about_axis([0, 0, 1], 90, degrees=True)
        >>> turn = rotation.Turn(quarter, Notation.voigt(Ordering("11 22 33 23 13 12")))
        >>> np.diag(turn.compliance(np.diag([1.0, 2.0, 3.0, 4.0, 5.0, 6.0])))
        array([2., 1., 3., 5., 4., 6.])
        """
        return self._turn_matrix(matrix, "compliance", ("strain", "stress"), out, check)

    def __eq__(self, other: object) -> bool:
        """Tell whether both hold the same rotations, bit for bit, in the same notation."""
        if not isinstance(other, Turn):
            return NotImplemented
        return self._notation == other._notation and bool(np.array_equal(self._rotations, other._rotations))

    __hash__ = None  # type: ignore[assignment]  # equality is by value, and the values are long

    def __repr__(self) -> str:
        return f"<Turn: batch shape {self.shape}, for arrays in {self._notation!r}>"

    def __reduce__(self) -> tuple[object, ...]:
        return _rebuild, (self._rotations, self._notation)

    def _turn_vector(self, vector: ArrayLike, side: Side, out: NDArray[Any] | None, check: bool) -> Inexact:
        array = take_in(vector, f"{side} vector", (6,))
        if check:
            check_finite(array, f"{side} vector", 1, self._notation.label_places)
        single = self._rotations.ndim == 2
        shape = array.shape
        if not single:
            shape = (*broadcast_batches(**{f"{side} vector": shape[:-1], "R": self.shape}), 6)
        if out is not None:
            take_out(out, shape, array.dtype)
        matrix = self._vectors[side]
        if array.dtype.char not in "dD":
            matrix = self._in_precision(side, array.dtype)
        turned: Inexact = map_vectors(matrix, array) if single else np.einsum("...ij,...j->...i", matrix, array)
        if out is None:
            return turned
        out[...] = turned
        return out

    def _turn_matrix(
        self, matrix: ArrayLike, name: str, sides: tuple[Side, Side], out: NDArray[Any] | None, check: bool
    ) -> Inexact:
        array = take_in(matrix, name, (6, 6))
        there = passage(self._notation, _mandel.WORKING)
        if check:
            check_finite(array, name, 2, self._notation.label_places)
            # Where the matrices themselves are symmetric, so are the tensors, without a translation.
            if not (self._notation.work_conjugate and _mandel.is_symmetric(array)):
                held, way_on = there.matrix(array, *sides), "average the two triangles first"
                _mandel.check_major(held, default_rtol(array.dtype), name, array, self._notation, way_on)
        if self._rotations.ndim == 2:
            return self._folds[sides](array, out)
        shape = (*broadcast_batches(**{name: array.shape[:-2], "R": self.shape}), 6, 6)
        if out is not None:
            take_out(out, shape, array.dtype)
        turned = turn_matrices(_mandel.symmetric_part(there.matrix(array, *sides)), self._rotations)
        result = passage(_mandel.WORKING, self._notation).matrix(turned, *sides).astype(array.dtype, copy=False)
        if out is None:
            return result
        out[...] = result
        return out

    def _in_precision(self, side: Side, dtype: np.dtype[Any]) -> Inexact:
        key = (side, dtype.char.lower())
        if key not in self._cast:
            self._cast[key] = self._vectors[side].astype(key[1])
        return self._cast[key]


_SIDES: Final[tuple[tuple[Side, Side], ...]] = (("stress", "strain"), ("strain", "stress"))


class _Fold:
    """One rotation of many matrices in a notation: the 21 constants times one matrix, and back into their places."""

    __slots__ = ("_after", "_square", "_turning", "_upper")

    def __init__(self, notation: Notation, rows: Side, columns: Side, turning: Inexact) -> None:
        into = passage(notation, _mandel.WORKING).matrix_gather(rows, columns)
        back = passage(_mandel.WORKING, notation).matrix_gather(rows, columns)
        double = np.dtype(np.float64)
        self._upper = into.index[UPPER]
        self._square = SQUARE[back.index]
        folded = into.factors(double)[UPPER][:, None] * turning
        factors = back.factors(double)
        # Both triangles of a work-conjugate notation have the same factors, which join the matrix.
        self._after: NDArray[np.float64] | None = None
        if notation.work_conjugate:
            per_constant = np.empty(21)
            per_constant[self._square] = factors
            folded = folded * per_constant
        else:
            self._after = factors.reshape(6, 6)
        self._turning: dict[str, Inexact] = {"d": folded}

    def __call__(self, array: Inexact, out: NDArray[Any] | None) -> Inexact:
        if out is not None:
            take_out(out, array.shape, array.dtype)
        turning = self._turning.get(array.dtype.char)
        if turning is None:
            turning = self._in_precision(array.dtype)
        count = array.size // 36
        if count <= _FEW or array.dtype.kind == "c":
            few: Inexact = (array.reshape(count, 36).take(self._upper, axis=1) @ turning).take(self._square, axis=1)
            result = few.reshape(array.shape)
        else:
            result = np.empty(array.shape, array.dtype)
            turn_by_one(array.reshape(-1, 36), turning, result.reshape(-1, 36), self._upper, self._square)
        if self._after is not None:
            result *= self._after.astype(turning.dtype, copy=False)
        if out is None:
            return result
        out[...] = result
        return out

    def _in_precision(self, dtype: np.dtype[Any]) -> Inexact:
        cast: Inexact = self._turning["d"].astype(dtype.char.lower())
        self._turning[dtype.char] = cast
        return cast


def _rebuild(rotations: NDArray[np.float64], notation: Notation) -> Turn:
    return Turn(rotations, notation, allow_reflection=True)
