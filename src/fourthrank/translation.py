"""Translation: the precomputed passage from one notation to another."""

from functools import lru_cache
from typing import Any, final, overload

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ._arrays import Inexact, Scalar, check_finite, take_in
from ._frozen import Frozen
from ._gather import Gather
from ._packing.weights import Side, read_side
from .errors import NotationError
from .notation import Notation

__all__ = ["Translator"]


@final
class Translator(Frozen):
    """The passage of vectors and matrices from one notation to another, precomputed.

    A pure change of order is exact, and so is every change of weights by powers of two; a factor sqrt 2 is correctly
    rounded. There is one gather and at most one multiplication, and no full tensor on the way.

    Parameters
    ----------
    source, target : Notation
        From which notation to which. Their orderings must list the same pairs.

    Raises
    ------
    NotationError
        If the two orderings do not list the same pairs.

    Examples
    --------
    >>> from fourthrank import Notation, Ordering, Translator
    >>> supplier = Notation.tensorial(Ordering("11 22 33 12 13 23"))
    >>> solver = Notation.voigt(Ordering("11 22 33 23 13 12"))
    >>> Translator(supplier, solver).strain([1.0, 2.0, 3.0, 0.12, 0.13, 0.23])
    array([1.  , 2.  , 3.  , 0.46, 0.26, 0.24])
    """

    __slots__ = ("_gathers", "_source", "_target")

    _source: Notation
    _target: Notation
    # Index tables, made on first use; a race between threads makes the same table twice and loses nothing.
    _gathers: dict[tuple[Side, ...], Gather]

    def __init__(self, source: Notation, target: Notation) -> None:
        for name, notation in (("source", source), ("target", target)):
            if not isinstance(notation, Notation):  # pyright: ignore[reportUnnecessaryIsInstance]  # callers without a checker
                raise NotationError(f"{name} must be a Notation, got {notation!r}")
        if not source.ordering.has_same_pairs(target.ordering):
            raise NotationError(
                f"'{source.ordering}' and '{target.ordering}' do not list the same pairs: components would be lost or "
                "invented; for plane problems use moduli.plane_stress_stiffness or moduli.plane_strain_stiffness"
            )
        object.__setattr__(self, "_source", source)
        object.__setattr__(self, "_target", target)
        object.__setattr__(self, "_gathers", {})

    @property
    def source(self) -> Notation:
        """The notation that is read."""
        return self._source

    @property
    def target(self) -> Notation:
        """The notation that is written."""
        return self._target

    @overload
    def stress(
        self, vector: NDArray[Scalar], *, out: NDArray[Scalar] | None = None, check: bool = True
    ) -> NDArray[Scalar]: ...
    @overload
    def stress(
        self, vector: ArrayLike, *, out: NDArray[np.inexact] | None = None, check: bool = True
    ) -> NDArray[np.inexact]: ...
    def stress(self, vector: ArrayLike, *, out: NDArray[Any] | None = None, check: bool = True) -> NDArray[Any]:
        """Translate stress vectors.

        Parameters
        ----------
        vector : array_like, shape (..., n)
            Stress vectors in the source notation, in any consistent unit.
        out : ndarray, shape (..., n), optional
            Takes the result; it may be `vector` itself.
        check : bool
            False skips the check of finiteness.

        Returns
        -------
        ndarray, shape (..., n)
            ``t_K = (w_K / w_I) * s_I``, I and K being the places of the same pair.

        Raises
        ------
        ShapeError
            If the trailing shape does not fit, or `out` does not.
        DataError
            If a component is not finite.

        Examples
        --------
        >>> from fourthrank import Notation, Ordering, Translator
        >>> source = Notation.voigt(Ordering("11 22 33 12 13 23"))
        >>> target = Notation.voigt(Ordering("11 22 33 23 13 12"))
        >>> Translator(source, target).stress([1.0, 2.0, 3.0, 12.0, 13.0, 23.0])
        array([ 1.,  2.,  3., 23., 13., 12.])
        """
        return self._vector(vector, "stress", out, check)

    @overload
    def strain(
        self, vector: NDArray[Scalar], *, out: NDArray[Scalar] | None = None, check: bool = True
    ) -> NDArray[Scalar]: ...
    @overload
    def strain(
        self, vector: ArrayLike, *, out: NDArray[np.inexact] | None = None, check: bool = True
    ) -> NDArray[np.inexact]: ...
    def strain(self, vector: ArrayLike, *, out: NDArray[Any] | None = None, check: bool = True) -> NDArray[Any]:
        """Translate strain vectors.

        Parameters
        ----------
        vector : array_like, shape (..., n)
            Strain vectors in the source notation.
        out : ndarray, shape (..., n), optional
            Takes the result; it may be `vector` itself.
        check : bool
            False skips the check of finiteness.

        Returns
        -------
        ndarray, shape (..., n)
            ``t_K = (w_K / w_I) * e_I``, I and K being the places of the same pair.

        Raises
        ------
        ShapeError
            If the trailing shape does not fit, or `out` does not.
        DataError
            If a component is not finite.

        Examples
        --------
        >>> from fourthrank import Notation, Ordering, Translator
        >>> order = Ordering("11 22 33 23 13 12")
        >>> Translator(Notation.voigt(order), Notation.tensorial(order)).strain([0, 0, 0, 2, 4, 6])
        array([0., 0., 0., 1., 2., 3.])
        """
        return self._vector(vector, "strain", out, check)

    @overload
    def stiffness(
        self, matrix: NDArray[Scalar], *, out: NDArray[Scalar] | None = None, check: bool = True
    ) -> NDArray[Scalar]: ...
    @overload
    def stiffness(
        self, matrix: ArrayLike, *, out: NDArray[np.inexact] | None = None, check: bool = True
    ) -> NDArray[np.inexact]: ...
    def stiffness(self, matrix: ArrayLike, *, out: NDArray[Any] | None = None, check: bool = True) -> NDArray[Any]:
        """Translate stiffness matrices; in partial orderings, the 3x3 or 4x4 matrices of plane problems.

        Parameters
        ----------
        matrix : array_like, shape (..., n, n)
            Stiffness matrices in the source notation, in any consistent unit.
        out : ndarray, shape (..., n, n), optional
            Takes the result; it may be `matrix` itself.
        check : bool
            False skips the check of finiteness.

        Returns
        -------
        ndarray, shape (..., n, n)
            The matrix of the same map in the target notation.

        Raises
        ------
        ShapeError, DataError
            As `stress`.

        Examples
        --------
        >>> import numpy as np
        >>> from fourthrank import Notation, Ordering, Translator
        >>> order = Ordering("11 22 33 23 13 12")
        >>> voigt, mandel = Notation.voigt(order), Notation.mandel(order)
        >>> np.diag(Translator(voigt, mandel).stiffness(np.eye(6)))
        array([1., 1., 1., 2., 2., 2.])
        """
        return self._matrix(matrix, "stiffness", "stress", "strain", out, check)

    @overload
    def compliance(
        self, matrix: NDArray[Scalar], *, out: NDArray[Scalar] | None = None, check: bool = True
    ) -> NDArray[Scalar]: ...
    @overload
    def compliance(
        self, matrix: ArrayLike, *, out: NDArray[np.inexact] | None = None, check: bool = True
    ) -> NDArray[np.inexact]: ...
    def compliance(self, matrix: ArrayLike, *, out: NDArray[Any] | None = None, check: bool = True) -> NDArray[Any]:
        """Translate compliance matrices; in partial orderings, the 3x3 or 4x4 matrices of plane problems.

        Parameters
        ----------
        matrix : array_like, shape (..., n, n)
            Compliance matrices in the source notation, in any consistent unit.
        out : ndarray, shape (..., n, n), optional
            Takes the result; it may be `matrix` itself.
        check : bool
            False skips the check of finiteness.

        Returns
        -------
        ndarray, shape (..., n, n)
            The matrix of the same map in the target notation.

        Raises
        ------
        ShapeError, DataError
            As `stress`.

        Examples
        --------
        >>> import numpy as np
        >>> from fourthrank import Notation, Ordering, Translator
        >>> order = Ordering("11 22 33 23 13 12")
        >>> voigt, mandel = Notation.voigt(order), Notation.mandel(order)
        >>> np.diag(Translator(voigt, mandel).compliance(np.eye(6)))
        array([1. , 1. , 1. , 0.5, 0.5, 0.5])
        """
        return self._matrix(matrix, "compliance", "strain", "stress", out, check)

    @overload
    def map(
        self,
        matrix: NDArray[Scalar],
        *,
        rows: Side,
        columns: Side,
        out: NDArray[Scalar] | None = None,
        check: bool = True,
    ) -> NDArray[Scalar]: ...
    @overload
    def map(
        self,
        matrix: ArrayLike,
        *,
        rows: Side,
        columns: Side,
        out: NDArray[np.inexact] | None = None,
        check: bool = True,
    ) -> NDArray[np.inexact]: ...
    def map(
        self,
        matrix: ArrayLike,
        *,
        rows: Side,
        columns: Side,
        out: NDArray[Any] | None = None,
        check: bool = True,
    ) -> NDArray[Any]:
        """Translate the matrices of any linear map between stress and strain.

        Parameters
        ----------
        matrix : array_like, shape (..., n, n)
            Matrices in the source notation.
        rows, columns : {"stress", "strain"}
            What the map gives (rows) and what it takes (columns).
        out : ndarray, shape (..., n, n), optional
            Takes the result; it may be `matrix` itself.
        check : bool
            False skips the check of finiteness.

        Returns
        -------
        ndarray, shape (..., n, n)
            The matrix of the same map in the target notation.

        Raises
        ------
        NotationError
            If `rows` or `columns` is neither of the two.
        ShapeError, DataError
            As `stress`.

        Examples
        --------
        >>> import numpy as np
        >>> from fourthrank import Notation, Ordering, Translator
        >>> order = Ordering("11 22 33 23 13 12")
        >>> translator = Translator(Notation.voigt(order), Notation.mandel(order))
        >>> float(translator.map(np.ones((6, 6)), rows="strain", columns="strain")[0, 3])
        1.4142135623730951
        """
        return self._matrix(matrix, "matrix", read_side("rows", rows), read_side("columns", columns), out, check)

    def __eq__(self, other: object) -> bool:
        if not isinstance(other, Translator):
            return NotImplemented
        return self._source == other._source and self._target == other._target

    def __hash__(self) -> int:
        return hash((Translator, self._source, self._target))

    def __repr__(self) -> str:
        return f"Translator({self._source!r}, {self._target!r})"

    def __reduce__(self) -> tuple[type["Translator"], tuple[Notation, Notation]]:
        return Translator, (self._source, self._target)

    def _vector(self, vector: ArrayLike, kind: Side, out: NDArray[Any] | None, check: bool) -> Inexact:
        name = f"{kind} vector"
        array = take_in(vector, name, (self._source.ordering.size,))
        gather = self.vector_gather(kind)
        if not check:
            return gather(array, out)
        return gather.checked(array, out, lambda: check_finite(array, name, 1, self._source.label_places))

    def _matrix(
        self, matrix: ArrayLike, name: str, rows: Side, columns: Side, out: NDArray[Any] | None, check: bool
    ) -> Inexact:
        array = take_in(matrix, name, (self._source.ordering.size,) * 2)
        gather = self.matrix_gather(rows, columns)
        if not check:
            return gather(array, out)
        return gather.checked(array, out, lambda: check_finite(array, name, 2, self._source.label_places))

    def vector(self, array: Inexact, kind: Side, out: NDArray[Any] | None = None) -> Inexact:
        """Translate checked vectors; for use inside the library."""
        return self.vector_gather(kind)(array, out)

    def vector_gather(self, kind: Side) -> Gather:
        """Return the precomputed map of vectors; for use inside the library."""
        return self._gathers.get((kind,)) or self._make_vector_gather(kind)

    def matrix(self, array: Inexact, rows: Side, columns: Side, out: NDArray[Any] | None = None) -> Inexact:
        """Translate checked matrices; for use inside the library."""
        return self.matrix_gather(rows, columns)(array, out)

    def matrix_gather(self, rows: Side, columns: Side) -> Gather:
        """Return the precomputed map of matrices; for use inside the library."""
        return self._gathers.get((rows, columns)) or self._make_matrix_gather(rows, columns)

    def _make_vector_gather(self, kind: Side) -> Gather:
        index = [self._source.ordering.position(*pair) for pair in self._target.ordering.pairs]
        old, new = self._source.side_squares(kind), self._target.side_squares(kind)
        squares = [square / old[place] for square, place in zip(new, index, strict=True)]
        n = len(index)
        gather = Gather((n,), (n,), index, squares, self._source.sign() * self._target.sign())
        self._gathers[(kind,)] = gather
        return gather

    def _make_matrix_gather(self, rows: Side, columns: Side) -> Gather:
        places = [self._source.ordering.position(*pair) for pair in self._target.ordering.pairs]
        n = len(places)
        index = [n * i + j for i in places for j in places]
        old, new = self._source.matrix_squares(rows, columns), self._target.matrix_squares(rows, columns)
        gather = Gather((n, n), (n, n), index, [s / old[i] for s, i in zip(new, index, strict=True)])
        self._gathers[(rows, columns)] = gather
        return gather


@lru_cache(maxsize=512)
def passage(source: Notation, target: Notation) -> Translator:
    """Return the translator between two notations, made once; for use inside the library."""
    return Translator(source, target)
