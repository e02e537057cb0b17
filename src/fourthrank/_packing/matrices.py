"""Packing of linear maps: stiffness, compliance and general maps to 6x6 matrices and back."""

from typing import Any, Final, overload

import numpy as np
from numpy.typing import ArrayLike, NDArray

from .._arrays import Inexact, Scalar, check_equal_components, check_finite, default_rtol, take_in
from .._gather import Gather
from ..errors import OrderingError
from .weights import Side, Weights, label_indices, read_side


class MatrixPacking(Weights):
    """How a notation packs the linear maps between stress and strain."""

    __slots__ = ()

    @overload
    def pack_stiffness(
        self, stiffness: NDArray[Scalar], *, out: NDArray[Scalar] | None = None, check: bool = True
    ) -> NDArray[Scalar]: ...
    @overload
    def pack_stiffness(
        self, stiffness: ArrayLike, *, out: NDArray[np.inexact] | None = None, check: bool = True
    ) -> NDArray[np.inexact]: ...
    def pack_stiffness(
        self, stiffness: ArrayLike, *, out: NDArray[Any] | None = None, check: bool = True
    ) -> NDArray[Any]:
        """Write stiffness tensors as matrices: ``C_IJ = a_I * C_ijkl * m_J / b_J``.

        Parameters
        ----------
        stiffness : array_like, shape (..., 3, 3, 3, 3)
            Tensors with the minor symmetries, in any consistent unit.
        out : ndarray, shape (..., 6, 6), optional
            Takes the result.
        check : bool
            False skips the checks of finiteness and of the minor symmetries.

        Returns
        -------
        ndarray, shape (..., 6, 6)
            The map from strain vectors to stress vectors.

        Raises
        ------
        ShapeError, DataError, SymmetryError
            As `pack_stress`, for the two minor symmetries.
        OrderingError
            If the ordering is partial.

        Examples
        --------
        >>> import numpy as np
        >>> from fourthrank import Notation, Ordering
        >>> d = np.eye(3)
        >>> shear = np.einsum("ik,jl->ijkl", d, d) + np.einsum("il,jk->ijkl", d, d)
        >>> np.diag(Notation.voigt(Ordering("11 22 33 23 13 12")).pack_stiffness(shear))
        array([2., 2., 2., 1., 1., 1.])
        """
        return self._pack_fourth(stiffness, "stiffness", "stress", "strain", out, check)

    @overload
    def unpack_stiffness(
        self, matrix: NDArray[Scalar], *, out: NDArray[Scalar] | None = None, check: bool = True
    ) -> NDArray[Scalar]: ...
    @overload
    def unpack_stiffness(
        self, matrix: ArrayLike, *, out: NDArray[np.inexact] | None = None, check: bool = True
    ) -> NDArray[np.inexact]: ...
    def unpack_stiffness(
        self, matrix: ArrayLike, *, out: NDArray[Any] | None = None, check: bool = True
    ) -> NDArray[Any]:
        """Read stiffness tensors from matrices: ``C_ijkl = C_IJ * b_J / (a_I * m_J)``.

        Parameters
        ----------
        matrix : array_like, shape (..., 6, 6)
            Stiffness matrices in this notation, in any consistent unit.
        out : ndarray, shape (..., 3, 3, 3, 3), optional
            Takes the result.
        check : bool
            False skips the check of finiteness.

        Returns
        -------
        ndarray, shape (..., 3, 3, 3, 3)
            Tensors with the minor symmetries.

        Raises
        ------
        ShapeError, DataError
            As `unpack_stress`.
        OrderingError
            If the ordering is partial.

        Examples
        --------
        >>> import numpy as np
        >>> from fourthrank import Notation, Ordering
        >>> mandel = Notation.mandel(Ordering("11 22 33 23 13 12"))
        >>> float(mandel.unpack_stiffness(np.eye(6))[0, 1, 0, 1])
        0.5
        """
        return self._unpack_fourth(matrix, "stiffness", "stress", "strain", out, check)

    @overload
    def pack_compliance(
        self, compliance: NDArray[Scalar], *, out: NDArray[Scalar] | None = None, check: bool = True
    ) -> NDArray[Scalar]: ...
    @overload
    def pack_compliance(
        self, compliance: ArrayLike, *, out: NDArray[np.inexact] | None = None, check: bool = True
    ) -> NDArray[np.inexact]: ...
    def pack_compliance(
        self, compliance: ArrayLike, *, out: NDArray[Any] | None = None, check: bool = True
    ) -> NDArray[Any]:
        """Write compliance tensors as matrices: ``S_IJ = b_I * S_ijkl * m_J / a_J``.

        Parameters
        ----------
        compliance : array_like, shape (..., 3, 3, 3, 3)
            Tensors with the minor symmetries, in any consistent unit.
        out : ndarray, shape (..., 6, 6), optional
            Takes the result.
        check : bool
            False skips the checks of finiteness and of the minor symmetries.

        Returns
        -------
        ndarray, shape (..., 6, 6)
            The map from stress vectors to strain vectors.

        Raises
        ------
        ShapeError, DataError, SymmetryError
            As `pack_stress`, for the two minor symmetries.
        OrderingError
            If the ordering is partial.

        Examples
        --------
        >>> import numpy as np
        >>> from fourthrank import Notation, Ordering
        >>> d = np.eye(3)
        >>> shear = np.einsum("ik,jl->ijkl", d, d) + np.einsum("il,jk->ijkl", d, d)
        >>> np.diag(Notation.voigt(Ordering("11 22 33 23 13 12")).pack_compliance(shear))
        array([2., 2., 2., 4., 4., 4.])
        """
        return self._pack_fourth(compliance, "compliance", "strain", "stress", out, check)

    @overload
    def unpack_compliance(
        self, matrix: NDArray[Scalar], *, out: NDArray[Scalar] | None = None, check: bool = True
    ) -> NDArray[Scalar]: ...
    @overload
    def unpack_compliance(
        self, matrix: ArrayLike, *, out: NDArray[np.inexact] | None = None, check: bool = True
    ) -> NDArray[np.inexact]: ...
    def unpack_compliance(
        self, matrix: ArrayLike, *, out: NDArray[Any] | None = None, check: bool = True
    ) -> NDArray[Any]:
        """Read compliance tensors from matrices: ``S_ijkl = S_IJ * a_J / (b_I * m_J)``.

        Parameters
        ----------
        matrix : array_like, shape (..., 6, 6)
            Compliance matrices in this notation, in any consistent unit.
        out : ndarray, shape (..., 3, 3, 3, 3), optional
            Takes the result.
        check : bool
            False skips the check of finiteness.

        Returns
        -------
        ndarray, shape (..., 3, 3, 3, 3)
            Tensors with the minor symmetries.

        Raises
        ------
        ShapeError, DataError
            As `unpack_stress`.
        OrderingError
            If the ordering is partial.

        Examples
        --------
        >>> import numpy as np
        >>> from fourthrank import Notation, Ordering
        >>> voigt = Notation.voigt(Ordering("11 22 33 23 13 12"))
        >>> float(voigt.unpack_compliance(4.0 * np.eye(6))[0, 1, 0, 1])
        1.0
        """
        return self._unpack_fourth(matrix, "compliance", "strain", "stress", out, check)

    @overload
    def pack_map(
        self,
        tensor: NDArray[Scalar],
        *,
        rows: Side,
        columns: Side,
        out: NDArray[Scalar] | None = None,
        check: bool = True,
    ) -> NDArray[Scalar]: ...
    @overload
    def pack_map(
        self,
        tensor: ArrayLike,
        *,
        rows: Side,
        columns: Side,
        out: NDArray[np.inexact] | None = None,
        check: bool = True,
    ) -> NDArray[np.inexact]: ...
    def pack_map(
        self,
        tensor: ArrayLike,
        *,
        rows: Side,
        columns: Side,
        out: NDArray[Any] | None = None,
        check: bool = True,
    ) -> NDArray[Any]:
        """Write any linear map between stress and strain as a matrix: ``M_IJ = w_I * M_ijkl * m_J / w_J``.

        Parameters
        ----------
        tensor : array_like, shape (..., 3, 3, 3, 3)
            Tensors with the minor symmetries; the major symmetry is not needed (strain concentration tensors).
        rows, columns : {"stress", "strain"}
            What the map gives (rows) and what it takes (columns).
        out : ndarray, shape (..., 6, 6), optional
            Takes the result.
        check : bool
            False skips the checks of finiteness and of the minor symmetries.

        Returns
        -------
        ndarray, shape (..., 6, 6)
            The matrix that takes a vector of kind `columns` to one of kind `rows`.

        Raises
        ------
        NotationError
            If `rows` or `columns` is neither of the two.
        ShapeError, DataError, SymmetryError, OrderingError
            As `pack_stiffness`.

        Examples
        --------
        >>> import numpy as np
        >>> from fourthrank import Notation, Ordering
        >>> voigt = Notation.voigt(Ordering("11 22 33 23 13 12"))
        >>> d = np.eye(3)
        >>> identity = (np.einsum("ik,jl->ijkl", d, d) + np.einsum("il,jk->ijkl", d, d)) / 2
        >>> bool((voigt.pack_map(identity, rows="strain", columns="strain") == np.eye(6)).all())
        True
        """
        return self._pack_fourth(tensor, "tensor", read_side("rows", rows), read_side("columns", columns), out, check)

    @overload
    def unpack_map(
        self,
        matrix: NDArray[Scalar],
        *,
        rows: Side,
        columns: Side,
        out: NDArray[Scalar] | None = None,
        check: bool = True,
    ) -> NDArray[Scalar]: ...
    @overload
    def unpack_map(
        self,
        matrix: ArrayLike,
        *,
        rows: Side,
        columns: Side,
        out: NDArray[np.inexact] | None = None,
        check: bool = True,
    ) -> NDArray[np.inexact]: ...
    def unpack_map(
        self,
        matrix: ArrayLike,
        *,
        rows: Side,
        columns: Side,
        out: NDArray[Any] | None = None,
        check: bool = True,
    ) -> NDArray[Any]:
        """Read any linear map between stress and strain from a matrix: ``M_ijkl = M_IJ * w_J / (w_I * m_J)``.

        Parameters
        ----------
        matrix : array_like, shape (..., 6, 6)
            Matrices in this notation.
        rows, columns : {"stress", "strain"}
            What the map gives (rows) and what it takes (columns).
        out : ndarray, shape (..., 3, 3, 3, 3), optional
            Takes the result.
        check : bool
            False skips the check of finiteness.

        Returns
        -------
        ndarray, shape (..., 3, 3, 3, 3)
            Tensors with the minor symmetries.

        Raises
        ------
        NotationError
            If `rows` or `columns` is neither of the two.
        ShapeError, DataError, OrderingError
            As `unpack_stiffness`.

        Examples
        --------
        >>> import numpy as np
        >>> from fourthrank import Notation, Ordering
        >>> voigt = Notation.voigt(Ordering("11 22 33 23 13 12"))
        >>> float(voigt.unpack_map(np.eye(6), rows="strain", columns="strain")[0, 1, 1, 0])
        0.5
        """
        return self._unpack_fourth(matrix, "matrix", read_side("rows", rows), read_side("columns", columns), out, check)

    def _pack_fourth(
        self, tensor: ArrayLike, name: str, rows: Side, columns: Side, out: NDArray[Any] | None, check: bool
    ) -> Inexact:
        gather = self._matrix_gather(rows, columns, pack=True)
        array = take_in(tensor, name, (3, 3, 3, 3))
        if not check:
            return gather(array, out)

        def refuse() -> None:
            check_finite(array, name, 4, label_indices)
            check_minor(array, name)

        return gather.checked(array, out, refuse, _MINOR[:2])

    def _unpack_fourth(
        self, matrix: ArrayLike, name: str, rows: Side, columns: Side, out: NDArray[Any] | None, check: bool
    ) -> Inexact:
        gather = self._matrix_gather(rows, columns, pack=False)
        array = take_in(matrix, name, (6, 6))
        if not check:
            return gather(array, out)
        return gather.checked(array, out, lambda: check_finite(array, name, 2, self.label_places))

    def _matrix_gather(self, rows: Side, columns: Side, *, pack: bool) -> Gather:
        key = (rows, columns, "pack" if pack else "unpack")
        gather = self._gathers.get(key)
        if gather is None:
            if not self._ordering.complete:
                raise OrderingError(
                    f"a 6x6 matrix needs all six pairs, the ordering '{self._ordering}' has {self._ordering.size}: for "
                    "plane problems use moduli.plane_stress_stiffness or moduli.plane_strain_stiffness, which say "
                    "what is meant"
                )
            gather = self._gathers[key] = self._make_matrix_gather(rows, columns, pack)
        return gather

    def _make_matrix_gather(self, rows: Side, columns: Side, pack: bool) -> Gather:
        squares = self.matrix_squares(rows, columns)
        pairs = self._ordering.pairs
        if pack:
            index = [27 * i + 9 * j + 3 * k + m for i, j in pairs for k, m in pairs]
            return Gather((3, 3, 3, 3), (6, 6), index, squares)
        place = self._ordering.position
        axes = range(3)
        index = [6 * place(i, j) + place(k, m) for i in axes for j in axes for k in axes for m in axes]
        return Gather((6, 6), (3, 3, 3, 3), index, [1 / squares[p] for p in index])


def check_minor(array: Inexact, name: str) -> None:
    """Raise `SymmetryError` unless T_ijkl = T_jikl = T_ijlk."""
    left, right, names = _MINOR
    check_equal_components(
        array.reshape(*array.shape[:-4], 81),
        left,
        right,
        default_rtol(array.dtype),
        lambda k: f"{name} must have the minor symmetries: components {names[k]}",
        "a tensor without them is no map of symmetric tensors; average them, if the difference is rounding",
    )


def _minor_pairs() -> tuple[NDArray[np.intp], NDArray[np.intp], list[str]]:
    quadruples = [(i, j, k, m) for i in range(3) for j in range(3) for k in range(3) for m in range(3)]
    twins = [((min(i, j), max(i, j), min(k, m), max(k, m)), (i, j, k, m)) for i, j, k, m in quadruples]
    pairs = [(kept, dropped) for kept, dropped in twins if kept != dropped]
    place = {quadruple: n for n, quadruple in enumerate(quadruples)}
    return (
        np.array([place[kept] for kept, _ in pairs]),
        np.array([place[dropped] for _, dropped in pairs]),
        [f"{label_indices(kept)} and {label_indices(dropped)}" for kept, dropped in pairs],
    )


_MINOR: Final = _minor_pairs()
