"""Packing of second-order tensors: stress and strain to vectors and back."""

from fractions import Fraction
from typing import Any, Final, overload

import numpy as np
from numpy.typing import ArrayLike, NDArray

from .._arrays import Inexact, Scalar, check_equal_components, check_finite, default_rtol, take_in
from .._gather import Gather
from ..errors import SymmetryError
from .weights import Side, Weights, label_indices

_SHEAR_SIDES: Final = ((1, 2), (0, 2), (0, 1))
_UPPER: Final = np.array([3 * i + j for i, j in _SHEAR_SIDES])
_LOWER: Final = np.array([3 * j + i for i, j in _SHEAR_SIDES])


class VectorPacking(Weights):
    """How a notation packs stress and strain."""

    __slots__ = ()

    @overload
    def pack_stress(
        self, stress: NDArray[Scalar], *, out: NDArray[Scalar] | None = None, check: bool = True
    ) -> NDArray[Scalar]: ...
    @overload
    def pack_stress(
        self, stress: ArrayLike, *, out: NDArray[np.inexact] | None = None, check: bool = True
    ) -> NDArray[np.inexact]: ...
    def pack_stress(self, stress: ArrayLike, *, out: NDArray[Any] | None = None, check: bool = True) -> NDArray[Any]:
        """Write stress tensors as vectors: ``s_I = w_I * sigma_ij``.

        Parameters
        ----------
        stress : array_like, shape (..., 3, 3)
            Symmetric tensors, in any consistent unit.
        out : ndarray, shape (..., n), optional
            Takes the result.
        check : bool
            False skips the checks of finiteness and symmetry, for trusted data in a hot loop.

        Returns
        -------
        ndarray, shape (..., n)
            n = 6, or 3 or 4 in a partial ordering. A three-pair ordering leaves the normal component of the third axis
            out.

        Raises
        ------
        ShapeError
            If the trailing shape is not (3, 3), or `out` does not fit.
        DataError
            If a component is not finite.
        SymmetryError
            If ``sigma_ij != sigma_ji`` by more than 1e-9 (single precision: 1e-5) of the largest component, or a
            shear component that a partial ordering lacks is not zero.

        Examples
        --------
        >>> from fourthrank import Notation, Ordering
        >>> voigt = Notation.voigt(Ordering("11 22 33 23 13 12"))
        >>> voigt.pack_stress([[1.0, 6.0, 5.0], [6.0, 2.0, 4.0], [5.0, 4.0, 3.0]])
        array([1., 2., 3., 4., 5., 6.])
        """
        return self._pack_second(stress, "stress", out, check)

    @overload
    def unpack_stress(
        self, vector: NDArray[Scalar], *, out: NDArray[Scalar] | None = None, check: bool = True
    ) -> NDArray[Scalar]: ...
    @overload
    def unpack_stress(
        self, vector: ArrayLike, *, out: NDArray[np.inexact] | None = None, check: bool = True
    ) -> NDArray[np.inexact]: ...
    def unpack_stress(self, vector: ArrayLike, *, out: NDArray[Any] | None = None, check: bool = True) -> NDArray[Any]:
        """Read stress tensors from vectors: ``sigma_ij = sigma_ji = s_I / w_I``.

        Parameters
        ----------
        vector : array_like, shape (..., n)
            Stress vectors in this notation; n = 6, or 3 or 4 in a partial ordering.
        out : ndarray, shape (..., 3, 3), optional
            Takes the result.
        check : bool
            False skips the check of finiteness.

        Returns
        -------
        ndarray, shape (..., 3, 3)
            Symmetric tensors; components that a partial ordering lacks are zero.

        Raises
        ------
        ShapeError
            If the trailing shape does not fit the ordering, or `out` does not fit.
        DataError
            If a component is not finite.

        Examples
        --------
        >>> from fourthrank import Notation, Ordering
        >>> Notation.voigt(Ordering("11 22 12")).unpack_stress([1.0, 2.0, 6.0])
        array([[1., 6., 0.],
               [6., 2., 0.],
               [0., 0., 0.]])
        """
        return self._unpack_second(vector, "stress", out, check)

    @overload
    def pack_strain(
        self, strain: NDArray[Scalar], *, out: NDArray[Scalar] | None = None, check: bool = True
    ) -> NDArray[Scalar]: ...
    @overload
    def pack_strain(
        self, strain: ArrayLike, *, out: NDArray[np.inexact] | None = None, check: bool = True
    ) -> NDArray[np.inexact]: ...
    def pack_strain(self, strain: ArrayLike, *, out: NDArray[Any] | None = None, check: bool = True) -> NDArray[Any]:
        """Write strain tensors as vectors: ``e_I = w_I * eps_ij``.

        Parameters
        ----------
        strain : array_like, shape (..., 3, 3)
            Symmetric tensors.
        out : ndarray, shape (..., n), optional
            Takes the result.
        check : bool
            False skips the checks of finiteness and symmetry, for trusted data in a hot loop.

        Returns
        -------
        ndarray, shape (..., n)
            n = 6, or 3 or 4 in a partial ordering. A three-pair ordering leaves the normal component of the third axis
            out.

        Raises
        ------
        ShapeError
            If the trailing shape is not (3, 3), or `out` does not fit.
        DataError
            If a component is not finite.
        SymmetryError
            If ``eps_ij != eps_ji`` by more than 1e-9 (single precision: 1e-5) of the largest component, or a shear
            component that a partial ordering lacks is not zero.

        Examples
        --------
        >>> from fourthrank import Notation, Ordering
        >>> voigt = Notation.voigt(Ordering("11 22 33 23 13 12"))
        >>> voigt.pack_strain([[1.0, 6.0, 5.0], [6.0, 2.0, 4.0], [5.0, 4.0, 3.0]])
        array([ 1.,  2.,  3.,  8., 10., 12.])
        """
        return self._pack_second(strain, "strain", out, check)

    @overload
    def unpack_strain(
        self, vector: NDArray[Scalar], *, out: NDArray[Scalar] | None = None, check: bool = True
    ) -> NDArray[Scalar]: ...
    @overload
    def unpack_strain(
        self, vector: ArrayLike, *, out: NDArray[np.inexact] | None = None, check: bool = True
    ) -> NDArray[np.inexact]: ...
    def unpack_strain(self, vector: ArrayLike, *, out: NDArray[Any] | None = None, check: bool = True) -> NDArray[Any]:
        """Read strain tensors from vectors: ``eps_ij = eps_ji = e_I / w_I``.

        Parameters
        ----------
        vector : array_like, shape (..., n)
            Strain vectors in this notation; n = 6, or 3 or 4 in a partial ordering.
        out : ndarray, shape (..., 3, 3), optional
            Takes the result.
        check : bool
            False skips the check of finiteness.

        Returns
        -------
        ndarray, shape (..., 3, 3)
            Symmetric tensors; components that a partial ordering lacks are zero.

        Raises
        ------
        ShapeError
            If the trailing shape does not fit the ordering, or `out` does not fit.
        DataError
            If a component is not finite.

        Examples
        --------
        >>> from fourthrank import Notation, Ordering
        >>> Notation.voigt(Ordering("11 22 12")).unpack_strain([1.0, 2.0, 6.0])
        array([[1., 3., 0.],
               [3., 2., 0.],
               [0., 0., 0.]])
        """
        return self._unpack_second(vector, "strain", out, check)

    def _pack_second(self, tensor: ArrayLike, kind: Side, out: NDArray[Any] | None, check: bool) -> Inexact:
        array = take_in(tensor, kind, (3, 3))
        if not check:
            return self.pack_side(array, kind, out)
        if not self._ordering.complete:
            check_finite(array, kind, 2, label_indices)
            self.check_lacking(array, kind)

        def refuse() -> None:
            check_finite(array, kind, 2, label_indices)
            _check_symmetry(array, kind)

        return self._vector_gather(kind, pack=True).checked(array, out, refuse, (_UPPER, _LOWER))

    def _unpack_second(self, vector: ArrayLike, kind: Side, out: NDArray[Any] | None, check: bool) -> Inexact:
        name = f"{kind} vector"
        array = take_in(vector, name, (self._ordering.size,))
        if not check:
            return self.unpack_side(array, kind, out)
        gather = self._vector_gather(kind, pack=False)
        return gather.checked(array, out, lambda: check_finite(array, name, 1, self.label_places))

    def pack_side(self, tensor: Inexact, kind: Side, out: NDArray[Any] | None = None) -> Inexact:
        """Pack checked tensors; for use inside the library."""
        return self._vector_gather(kind, pack=True)(tensor, out)

    def unpack_side(self, vector: Inexact, kind: Side, out: NDArray[Any] | None = None) -> Inexact:
        """Unpack checked vectors; for use inside the library."""
        return self._vector_gather(kind, pack=False)(vector, out)

    def check_lacking(self, array: Inexact, kind: Side) -> None:
        """Raise `SymmetryError` where a shear component that the ordering lacks is not zero."""
        lacking = [
            (i, j) for i, j in _SHEAR_SIDES if not self._ordering.complete and (i, j) not in self._ordering.pairs
        ]
        for i, j in lacking:
            found = np.abs(array[..., i, j])
            if found.any():
                member = np.unravel_index(int(found.argmax()), found.shape)
                raise SymmetryError(
                    f"{kind}: component {i + 1}{j + 1} is {array[(*member, i, j)]:.6g} (batch member "
                    f"{tuple(map(int, member))}), but the partial ordering '{self._ordering}' has no place for it; "
                    "only a tensor whose other shear components are zero fits: use a complete ordering"
                )

    def _vector_gather(self, kind: Side, *, pack: bool) -> Gather:
        key = (kind, "pack" if pack else "unpack")
        gather = self._gathers.get(key)
        if gather is None:
            gather = self._gathers[key] = self._make_vector_gather(kind, pack)
        return gather

    def _make_vector_gather(self, kind: Side, pack: bool) -> Gather:
        squares = self.side_squares(kind)
        n = self._ordering.size
        if pack:
            return Gather((3, 3), (n,), [3 * i + j for i, j in self._ordering.pairs], squares, self.sign())
        places = {pair: place for place, pair in enumerate(self._ordering.pairs)}
        index = [places.get((min(i, j), max(i, j))) for i in range(3) for j in range(3)]
        return Gather(
            (n,), (3, 3), index, [Fraction(1) if place is None else 1 / squares[place] for place in index], self.sign()
        )


def _check_symmetry(array: Inexact, kind: Side) -> None:
    flat = array.reshape(*array.shape[:-2], 9)
    check_equal_components(
        flat,
        _UPPER,
        _LOWER,
        default_rtol(array.dtype),
        lambda k: f"{kind} must be symmetric: components {_sides_text(k)}",
        "average the two, if the difference is rounding",
    )


def _sides_text(k: int) -> str:
    i, j = _SHEAR_SIDES[k]
    return f"{i + 1}{j + 1} and {j + 1}{i + 1}"
