"""What stiffness and compliance have in common: fourth-order tensors, read from and written to matrices."""

from typing import Any, ClassVar, Final, Self

import numpy as np
from numpy.typing import ArrayLike, NDArray

from . import _mandel
from ._arrays import Inexact, check_finite, member_text, read_tolerance, take_in
from ._packing import By, Side
from ._packing.matrices import check_minor
from ._packing.weights import label_indices
from ._table import Table
from ._value import Quantity, check_notation, number_text, require_single, widen
from .errors import AdmissibilityError, OrderingError
from .notation import Notation
from .translation import passage

_LARGEST_CONDITION: Final = 1e15
"""Beyond this condition number (Frobenius norm) an inverse has no correct digit left."""


class FourthRank(Quantity):
    """What stiffness and compliance have in common."""

    __slots__ = ()

    _core: ClassVar[tuple[int, ...]] = (6, 6)
    _reading: ClassVar[str] = ".matrix(notation)"
    _rows: ClassVar[Side]
    _columns: ClassVar[Side]

    @classmethod
    def from_matrix(
        cls,
        matrix: ArrayLike,
        notation: Notation,
        *,
        rtol: float | None = None,
        symmetrize: bool = False,
        check: bool = True,
    ) -> Self:
        """Read 6x6 matrices in a notation.

        Parameters
        ----------
        matrix : array_like, shape (..., 6, 6)
            The matrices, in any consistent unit.
        notation : Notation
            How they are written; its ordering must be complete.
        rtol : float, optional
            How far the major symmetry of the tensor may be violated, relative to the largest component in Mandel form;
            the default is 1e-9, or 1e-5 for single precision. What differs by less is rounding and is averaged.
        symmetrize : bool
            Whether to average the two sides however much they differ (measured data).
        check : bool
            False skips all checks but that of the shape.

        Returns
        -------
        same kind
            A batch of the leading shape.

        Raises
        ------
        ShapeError
            If the trailing shape is not (6, 6).
        DataError
            If a component is not finite.
        SymmetryError
            If the tensor lacks the major symmetry; the message names the worst pair in the labels of `notation`.
        OrderingError
            If the ordering is partial.
        """
        check_notation(notation)
        name = cls._name()
        _require_complete(notation)
        array = take_in(matrix, name, (6, 6), hint="a matrix of constants; 21 constants go through from_triangle")
        tolerance = read_tolerance(rtol, "rtol", array.dtype)
        gather = passage(notation, _mandel.WORKING).matrix_gather(cls._rows, cls._columns)
        if check:
            held = gather.checked(widen(array), None, lambda: check_finite(array, name, 2, notation.label_places))
        else:
            held = gather(widen(array))
        exact = check and not symmetrize and _mandel.check_major(held, tolerance, name, array, notation)
        return cls._hold(held if exact else _mandel.symmetrize(held))

    @classmethod
    def from_tensor(
        cls, tensor: ArrayLike, *, rtol: float | None = None, symmetrize: bool = False, check: bool = True
    ) -> Self:
        """Read full tensors.

        Parameters
        ----------
        tensor : array_like, shape (..., 3, 3, 3, 3)
            The components ``t_ijkl``, with the minor and the major symmetries, in any consistent unit.
        rtol : float, optional
            How far the major symmetry may be violated, relative to the largest component in Mandel form; the default is
            1e-9, or 1e-5 for single precision. What differs by less is rounding and is averaged.
        symmetrize : bool
            Whether to average ``t_ijkl`` and ``t_klij`` however much they differ.
        check : bool
            False skips all checks but that of the shape.

        Returns
        -------
        same kind
            A batch of the leading shape.

        Raises
        ------
        ShapeError
            If the trailing shape is not (3, 3, 3, 3).
        DataError
            If a component is not finite.
        SymmetryError
            If a minor or the major symmetry is lacking.
        """
        name = cls._name()
        array = take_in(tensor, name, (3, 3, 3, 3))
        tolerance = read_tolerance(rtol, "rtol", array.dtype)
        if check:
            check_finite(array, name, 4, label_indices)
            check_minor(array, name)
        held = _mandel.WORKING.pack_map(widen(array), rows=cls._rows, columns=cls._columns, check=False)
        exact = check and not symmetrize and _mandel.check_major(held, tolerance, name, array, None)
        return cls._hold(held if exact else _mandel.symmetrize(held))

    @classmethod
    def from_triangle(cls, triangle: ArrayLike, notation: Notation, *, by: By, check: bool = True) -> Self:
        """Read the 21 constants of the upper triangle of a symmetric matrix.

        Parameters
        ----------
        triangle : array_like, shape (..., 21)
            The constants, in any consistent unit.
        notation : Notation
            How the matrix is written; its ordering must be complete, and it must be work-conjugate.
        by : {"rows", "columns"}
            Row by row (11 12 13 ... 22 23 ...) or column by column (11 12 22 13 23 33 ...).
        check : bool
            False skips the check of finiteness.

        Returns
        -------
        same kind
            A batch of the leading shape.

        Raises
        ------
        ShapeError, DataError, NotationError, OrderingError
            As `Notation.unpack_triangle` and `from_matrix`.
        """
        check_notation(notation)
        return cls.from_matrix(notation.unpack_triangle(triangle, by=by, check=check), notation, check=False)

    def matrix(self, notation: Notation, *, out: NDArray[Any] | None = None) -> NDArray[np.float64]:
        """Write 6x6 matrices in a notation.

        Parameters
        ----------
        notation : Notation
            How to write them; its ordering must be complete.
        out : ndarray, shape (..., 6, 6), optional
            Takes the result.

        Returns
        -------
        ndarray of float64 (complex128 where the object is complex), shape (..., 6, 6)
            The matrices; symmetric in a work-conjugate notation.

        Raises
        ------
        OrderingError
            If the ordering is partial.
        ShapeError, DataError
            If `out` does not fit.
        """
        check_notation(notation)
        _require_complete(notation)
        return passage(_mandel.WORKING, notation).matrix(self._held, self._rows, self._columns, out)

    def tensor(self, *, out: NDArray[Any] | None = None) -> NDArray[np.float64]:
        """Write full tensors.

        Parameters
        ----------
        out : ndarray, shape (..., 3, 3, 3, 3), optional
            Takes the result.

        Returns
        -------
        ndarray of float64 (complex128 where the object is complex), shape (..., 3, 3, 3, 3)
            The components ``t_ijkl``.

        Raises
        ------
        ShapeError, DataError
            If `out` does not fit.
        """
        return _mandel.WORKING.unpack_map(self._held, rows=self._rows, columns=self._columns, check=False, out=out)

    def triangle(self, notation: Notation, *, by: By, out: NDArray[Any] | None = None) -> NDArray[np.float64]:
        """Write the 21 constants of the upper triangle of the matrix.

        Parameters
        ----------
        notation : Notation
            How to write the matrix; its ordering must be complete, and it must be work-conjugate.
        by : {"rows", "columns"}
            Row by row (11 12 13 ... 22 23 ...) or column by column (11 12 22 13 23 33 ...).
        out : ndarray, shape (..., 21), optional
            Takes the result.

        Returns
        -------
        ndarray of float64 (complex128 where the object is complex), shape (..., 21)
            The constants.

        Raises
        ------
        NotationError
            If the notation is not work-conjugate: its matrices are unsymmetric.
        OrderingError, ShapeError, DataError
            As `matrix`.
        """
        return notation.pack_triangle(self.matrix(notation), by=by, check=False, out=out)

    def table(self, notation: Notation, *, unit: str, digits: int = 6) -> Table:
        """Return a labelled table of a single tensor's matrix, with the notation and the unit in its head.

        Parameters
        ----------
        notation : Notation
            How to write the matrix; its ordering must be complete.
        unit : str
            The unit of the components, in words.
        digits : int
            How many significant digits to show.

        Returns
        -------
        Table
            Prints as text, and shows as HTML in notebooks.

        Raises
        ------
        ShapeError
            If the batch is not a single tensor.
        OrderingError
            If the ordering is partial.
        """
        require_single(self)
        labels = notation.ordering.labels()
        rows = [[number_text(value, digits) for value in row] for row in self.matrix(notation)]
        head = (f"{type(self).__name__} in {unit}", repr(notation))
        return Table(head, labels, list(zip(labels, rows, strict=True)))

    def _turned(self, rotations: NDArray[np.float64]) -> Inexact:
        return _mandel.turn_matrices(self._held, rotations)

    def _inverted(self) -> Inexact:
        inverse, condition = _mandel.invert(self._held)
        if not condition.max(initial=0.0) <= _LARGEST_CONDITION:
            bad = ~(condition <= _LARGEST_CONDITION)
            member = tuple(map(int, np.unravel_index(int(bad.argmax()), bad.shape)))
            raise AdmissibilityError(
                f"{self._name()}{member_text(member)} is singular to working precision: its condition number is "
                f"{condition[member]:.3g}, the limit is {_LARGEST_CONDITION:.1e}; an incompressible or otherwise "
                "constrained solid has a compliance and no stiffness"
            )
        return inverse

    @classmethod
    def _name(cls) -> str:
        return cls.__name__.lower()


def _require_complete(notation: Notation) -> None:
    if not notation.ordering.complete:
        raise OrderingError(
            f"a 6x6 matrix needs all six pairs, the ordering '{notation.ordering}' has {notation.ordering.size}: for "
            "plane problems use moduli.plane_stress_stiffness or moduli.plane_strain_stiffness, which "
            "say what is meant"
        )
