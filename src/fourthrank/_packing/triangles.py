"""Packing of symmetric matrices: the upper triangle as a list of 21 constants, and back."""

from fractions import Fraction
from typing import Any, Literal, TypeAlias, overload

import numpy as np
from numpy.typing import ArrayLike, NDArray

from .._arrays import Inexact, Scalar, check_equal_components, check_finite, default_rtol, take_in
from .._gather import Gather
from ..errors import NotationError
from .weights import Weights

By: TypeAlias = Literal["rows", "columns"]


class TrianglePacking(Weights):
    """How a notation lists the triangle of a symmetric matrix."""

    __slots__ = ()

    @overload
    def pack_triangle(
        self,
        matrix: NDArray[Scalar],
        *,
        by: By,
        out: NDArray[Scalar] | None = None,
        check: bool = True,
    ) -> NDArray[Scalar]: ...
    @overload
    def pack_triangle(
        self,
        matrix: ArrayLike,
        *,
        by: By,
        out: NDArray[np.inexact] | None = None,
        check: bool = True,
    ) -> NDArray[np.inexact]: ...
    def pack_triangle(
        self,
        matrix: ArrayLike,
        *,
        by: By,
        out: NDArray[Any] | None = None,
        check: bool = True,
    ) -> NDArray[Any]:
        """List the upper triangle of symmetric matrices, row by row or column by column.

        Parameters
        ----------
        matrix : array_like, shape (..., n, n)
            Symmetric matrices in this notation; n = 6, or 3 or 4 in a partial ordering.
        by : {"rows", "columns"}
            The upper triangle by rows is 11 12 13 ... 16 22 23 ...; by columns it is 11 12 22 13 23 33 ... (matrix
            places). By columns of the upper triangle is the same as by rows of the lower one.
        out : ndarray, shape (..., n * (n + 1) / 2), optional
            Takes the result.
        check : bool
            False skips the checks of finiteness and symmetry.

        Returns
        -------
        ndarray, shape (..., n * (n + 1) / 2)
            21 constants for a complete ordering.

        Raises
        ------
        NotationError
            If the notation is not work-conjugate (its matrices are unsymmetric), or `by` is neither of the two.
        ShapeError, DataError, SymmetryError
            As `pack_stress`, for the symmetry of the matrix.

        Examples
        --------
        >>> import numpy as np
        >>> from fourthrank import Notation, Ordering
        >>> voigt = Notation.voigt(Ordering("11 22 33 23 13 12"))
        >>> voigt.pack_triangle(np.diag([1.0, 2.0, 3.0, 4.0, 5.0, 6.0]), by="columns").nonzero()
        (array([ 0,  2,  5,  9, 14, 20]),)
        """
        self._require_symmetric_matrices()
        n = self._ordering.size
        array = take_in(matrix, "matrix", (n, n))
        if check:
            check_finite(array, "matrix", 2, self.label_places)
            self._check_major(array)
        return self._triangle_gather(by, pack=True)(array, out)

    @overload
    def unpack_triangle(
        self,
        triangle: NDArray[Scalar],
        *,
        by: By,
        out: NDArray[Scalar] | None = None,
        check: bool = True,
    ) -> NDArray[Scalar]: ...
    @overload
    def unpack_triangle(
        self,
        triangle: ArrayLike,
        *,
        by: By,
        out: NDArray[np.inexact] | None = None,
        check: bool = True,
    ) -> NDArray[np.inexact]: ...
    def unpack_triangle(
        self,
        triangle: ArrayLike,
        *,
        by: By,
        out: NDArray[Any] | None = None,
        check: bool = True,
    ) -> NDArray[Any]:
        """Read symmetric matrices from their upper triangle, listed row by row or column by column.

        Parameters
        ----------
        triangle : array_like, shape (..., n * (n + 1) / 2)
            The constants; 21 for a complete ordering.
        by : {"rows", "columns"}
            How they are listed, see `pack_triangle`.
        out : ndarray, shape (..., n, n), optional
            Takes the result.
        check : bool
            False skips the check of finiteness.

        Returns
        -------
        ndarray, shape (..., n, n)
            Symmetric matrices in this notation.

        Raises
        ------
        NotationError
            If the notation is not work-conjugate (its matrices are unsymmetric), or `by` is neither of the two.
        ShapeError, DataError
            As `unpack_stress`.

        Examples
        --------
        >>> from fourthrank import Notation, Ordering
        >>> plane = Notation.voigt(Ordering("11 22 12"))
        >>> plane.unpack_triangle([1.0, 2.0, 3.0, 4.0, 5.0, 6.0], by="rows")
        array([[1., 2., 3.],
               [2., 4., 5.],
               [3., 5., 6.]])
        """
        self._require_symmetric_matrices()
        gather = self._triangle_gather(by, pack=False)
        array = take_in(triangle, "triangle", gather.source)
        if check:
            places = triangle_places(self._ordering.size, by)
            check_finite(array, "triangle", 1, lambda index: self.label_places(places[index[0]]))
        return gather(array, out)

    def _check_major(self, array: Inexact) -> None:
        n = self._ordering.size
        i, j = np.triu_indices(n, 1)
        check_equal_components(
            array.reshape(*array.shape[:-2], n * n),
            n * i + j,
            n * j + i,
            default_rtol(array.dtype),
            lambda k: (
                f"matrix must be symmetric: components {self.label_places((int(i[k]), int(j[k])))} and "
                f"{self.label_places((int(j[k]), int(i[k])))}"
            ),
            "average the two triangles first, if the difference is rounding or measurement",
        )

    def _require_symmetric_matrices(self) -> None:
        if not self.work_conjugate:
            raise NotationError(
                f"{self!r} is not work-conjugate: its matrices are unsymmetric, so that a triangle does not hold them; "
                "use the whole matrix, or a notation whose shear weights multiply to 2"
            )

    def _triangle_gather(self, by: By, *, pack: bool) -> Gather:
        n = self._ordering.size
        places = triangle_places(n, by)
        if pack:
            index = [n * i + j for i, j in places]
            return Gather((n, n), (len(places),), index, [Fraction(1)] * len(places))
        number = {place: k for k, place in enumerate(places)}
        index = [number[min(i, j), max(i, j)] for i in range(n) for j in range(n)]
        return Gather((len(places),), (n, n), index, [Fraction(1)] * (n * n))


def triangle_places(n: int, by: By) -> list[tuple[int, int]]:
    """Return the places of the upper triangle of an n x n matrix in the order in which they are listed."""
    if by not in ("rows", "columns"):
        raise NotationError(f"by must be 'rows' or 'columns', got by={by!r}")
    places = [(i, j) for i in range(n) for j in range(i, n)]
    return places if by == "rows" else sorted(places, key=lambda place: (place[1], place[0]))
