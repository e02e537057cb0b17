"""What stress and strain have in common: second-order tensors, read from and written to vectors."""

from typing import Any, ClassVar, Self

import numpy as np
from numpy.typing import ArrayLike, NDArray

from . import _mandel
from ._arrays import Inexact, check_equal_components, check_finite, read_tolerance, take_in
from ._packing import Side
from ._packing.weights import label_indices
from ._table import Table
from ._value import Quantity, check_notation, number_text, require_single, widen
from .notation import Notation
from .translation import passage

_UPPER = np.array([1, 2, 5])
_LOWER = np.array([3, 6, 7])


class SecondRank(Quantity):
    """What stress and strain have in common."""

    __slots__ = ()

    _core: ClassVar[tuple[int, ...]] = (6,)
    _reading: ClassVar[str] = ".vector(notation)"
    _side: ClassVar[Side]

    @classmethod
    def from_vector(cls, vector: ArrayLike, notation: Notation, *, check: bool = True) -> Self:
        """Read vectors in a notation.

        Parameters
        ----------
        vector : array_like, shape (..., n)
            The components; n = 6, or 3 or 4 in a partial ordering, where the components that it lacks are zero.
        notation : Notation
            How the vectors are written.
        check : bool
            False skips the check of finiteness, for trusted data.

        Returns
        -------
        same kind
            A batch of the leading shape.

        Raises
        ------
        ShapeError
            If the trailing shape does not fit the ordering.
        DataError
            If a component is not finite.

        Examples
        --------
        >>> from fourthrank import Notation, Ordering, Stress
        >>> voigt = Notation.voigt(Ordering("11 22 33 23 13 12"))
        >>> Stress.from_vector([100.0, 0.0, 0.0, 0.0, 0.0, 20.0], voigt).tensor()
        array([[100.,  20.,   0.],
               [ 20.,   0.,   0.],
               [  0.,   0.,   0.]])
        """
        check_notation(notation)
        name = f"{cls.__name__.lower()} vector"
        array = take_in(vector, name, (notation.ordering.size,))
        if check:
            check_finite(array, name, 1, notation.label_places)
        if notation.ordering.complete:
            return cls._hold(passage(notation, _mandel.WORKING).vector(widen(array), cls._side))
        return cls._hold(_mandel.WORKING.pack_side(notation.unpack_side(widen(array), cls._side), cls._side))

    @classmethod
    def from_tensor(
        cls, tensor: ArrayLike, *, rtol: float | None = None, symmetrize: bool = False, check: bool = True
    ) -> Self:
        """Read symmetric 3x3 tensors.

        Parameters
        ----------
        tensor : array_like, shape (..., 3, 3)
            The components ``t_ij``.
        rtol : float, optional
            How far ``t_ij`` and ``t_ji`` may differ, relative to the largest component; the default is 1e-9, or 1e-5
            for single precision. What differs by less is rounding and is averaged.
        symmetrize : bool
            Whether to average ``t_ij`` and ``t_ji`` however much they differ.
        check : bool
            False skips all checks but that of the shape.

        Returns
        -------
        same kind
            A batch of the leading shape.

        Raises
        ------
        ShapeError
            If the trailing shape is not (3, 3).
        DataError
            If a component is not finite.
        SymmetryError
            If a tensor is not symmetric.
        """
        name = cls.__name__.lower()
        array = take_in(tensor, name, (3, 3))
        tolerance = read_tolerance(rtol, "rtol", array.dtype)
        if check:
            check_finite(array, name, 2, label_indices)
        if check and not symmetrize:
            check_equal_components(
                array.reshape(*array.shape[:-2], 9),
                _UPPER,
                _LOWER,
                tolerance,
                lambda k: f"{name} must be symmetric: components {('12 and 21', '13 and 31', '23 and 32')[k]}",
                "symmetrize=True averages them",
            )
        return cls._hold(_mandel.WORKING.pack_side(_mandel.symmetric_part(widen(array)), cls._side))

    def vector(self, notation: Notation, *, out: NDArray[Any] | None = None) -> NDArray[np.float64]:
        """Write vectors in a notation.

        Parameters
        ----------
        notation : Notation
            How to write them.
        out : ndarray, shape (..., n), optional
            Takes the result.

        Returns
        -------
        ndarray of float64 (complex128 where the object is complex), shape (..., n)
            The components; n = 6, or 3 or 4 in a partial ordering.

        Raises
        ------
        SymmetryError
            If a shear component that a partial ordering lacks is not zero.
        ShapeError, DataError
            If `out` does not fit.
        """
        check_notation(notation)
        if notation.ordering.complete:
            return passage(_mandel.WORKING, notation).vector(self._held, self._side, out)
        full = _mandel.WORKING.unpack_side(self._held, self._side)
        notation.check_lacking(full, self._side)
        return notation.pack_side(full, self._side, out)

    def tensor(self, *, out: NDArray[Any] | None = None) -> NDArray[np.float64]:
        """Write full tensors.

        Parameters
        ----------
        out : ndarray, shape (..., 3, 3), optional
            Takes the result.

        Returns
        -------
        ndarray of float64 (complex128 where the object is complex), shape (..., 3, 3)
            The components ``t_ij``.

        Raises
        ------
        ShapeError, DataError
            If `out` does not fit.
        """
        return _mandel.WORKING.unpack_side(self._held, self._side, out)

    def table(self, notation: Notation, *, unit: str, digits: int = 6) -> Table:
        """Return a labelled table of a single tensor's vector, with the notation and the unit in its head.

        Parameters
        ----------
        notation : Notation
            How to write the vector.
        unit : str
            The unit of the components, in words; '1' for strain.
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
        """
        require_single(self)
        cells = [number_text(value, digits) for value in self.vector(notation)]
        head = (f"{type(self).__name__} in {unit}", repr(notation))
        return Table(
            head, (), [(label, (cell,)) for label, cell in zip(notation.ordering.labels(), cells, strict=True)]
        )

    def _turned(self, rotations: NDArray[np.float64]) -> Inexact:
        return _mandel.turn_vectors(self._held, rotations)
