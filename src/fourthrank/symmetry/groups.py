"""Symmetry objects: groups of rotations given by generators, and the tensors that are invariant under them."""

from collections.abc import Sequence
from functools import lru_cache
from typing import Final, TypeVar, final

import numpy as np
from numpy.typing import ArrayLike, NDArray

from .._arrays import read_only, take_in
from .._fourth_rank import FourthRank
from .._frozen import Frozen
from .._mandel import WORKING, turn_matrices
from .._packing import Side
from .._table import Table
from .._value import check_notation, make, widen, working
from ..errors import ShapeError, SymmetryError
from ..notation import Notation
from ..rotation.matrices import RotationLike, take_rotation, unit_vectors
from ..tensors import Compliance, Stiffness
from ..translation import Translator
from ._invariants import fixed_maps, fixed_space, from_constants
from .pattern import pattern_table
from .projection import Metric, distances, project, project_map, shares

__all__ = ["Symmetry", "from_generators"]

FourthRankT = TypeVar("FourthRankT", bound=FourthRank)

_SAME: Final = 1e-6
"""Rotations whose matrices differ by less are one element of a group."""
_LARGEST_ORDER: Final = 240
_CONTAINED: Final = 1e-7


@final
class Symmetry(Frozen):
    """A symmetry of linear elasticity: a group of rotations, and the stiffnesses that are invariant under it.

    Made by `isotropic`, `cubic`, `transversely_isotropic`, `tetragonal`, `trigonal`, `orthotropic`, `monoclinic`,
    `triclinic` and `from_generators`; immutable. A tensor of even rank cannot tell R from -R, so rotations are enough.

    The invariant tensors are the common solutions of ``K C K^T = C`` for each generator (K its orthogonal 6x6 matrix),
    and of ``L C + C L^T = 0`` for each axis about which every turn is a symmetry (L the derivative of K).

    Attributes
    ----------
    name : str
        The name of the class.
    count : int
        The number of independent constants.
    basis : ndarray of float64, shape (count, 6, 6)
        An orthonormal basis of the invariant tensors, in Mandel form in the order 11 22 33 23 13 12.
    generators : ndarray of float64, shape (n, 3, 3)
        The rotations that generate the group, in the present axes.
    free_axes : ndarray of float64, shape (m, 3)
        The axes about which every rotation is a symmetry; none for a finite group.
    axes : ndarray of float64, shape (3, 3)
        The axes of the symmetry, its rows, in the present axes; the identity unless `in_axes` was used.

    Examples
    --------
    >>> from fourthrank import symmetry
    >>> symmetry.cubic().count
    3
    >>> symmetry.cubic().contains(symmetry.tetragonal(axis=3))
    True
    """

    __slots__ = ("_own", "axes", "basis", "count", "free_axes", "generators", "name")

    name: str
    count: int
    basis: NDArray[np.float64]
    generators: NDArray[np.float64]
    free_axes: NDArray[np.float64]
    axes: NDArray[np.float64]
    _own: "Symmetry | None"

    def __init__(self, *_: object, **__: object) -> None:
        raise TypeError("a Symmetry is made by the functions of fourthrank.symmetry, for example orthotropic()")

    @property
    def own(self) -> "Symmetry":
        """The same symmetry in its own axes, before any use of `in_axes`."""
        return self if self._own is None else self._own

    @property
    def rotations(self) -> NDArray[np.float64]:
        """All rotations of a finite group, shape (n, 3, 3), the identity first; a continuous group has no list."""
        if len(self.free_axes):
            raise SymmetryError(
                f"{self.name} symmetry is a continuous group: it has infinitely many rotations and no list of them; "
                "use .generators and .free_axes, or .basis, which needs no list"
            )
        return read_only(close(self.generators))

    def project(self, C: FourthRankT, *, metric: Metric = "euclidean") -> FourthRankT:
        """Return the closest tensors that have this symmetry.

        Euclidean: ``P C = sum_k (C : B_k) B_k`` over the orthonormal basis, the average over the group.
        Log-Euclidean: ``exp(P log C)``; the projection of the inverse is the inverse of the projection.

        Parameters
        ----------
        C : Stiffness or Compliance, batch shape (...)
            The tensors.
        metric : {"euclidean", "log_euclidean"}
            The distance that is minimised.

        Returns
        -------
        same kind
            The projected tensors.

        Raises
        ------
        AdmissibilityError
            If a tensor is not positive definite and the metric is log-Euclidean.
        DataError
            If the metric is unknown, or is log-Euclidean and the tensors are complex.

        References
        ----------
        Gazis, D. C., Tadjbakhsh, I. and Toupin, R. A. (1963), Acta Cryst. 16, 917-922. Moakher, M. and Norris, A. N.
        (2006), J. Elasticity 85, 215-263.

        Examples
        --------
        >>> from fourthrank import Notation, Ordering, Stiffness, symmetry
        >>> voigt = Notation.voigt(Ordering("11 22 33 23 13 12"))
        >>> C = Stiffness.from_triangle(
        ...     [10, 4, 4, 0, 0, 0, 12, 4, 0, 0, 0, 11, 0, 0, 0, 3, 0, 0, 4, 0, 5], voigt, by="rows"
        ... )
        >>> symmetry.cubic().project(C).matrix(voigt)[0].round(6)
        array([11.,  4.,  4.,  0.,  0.,  0.])
        """
        return make(type(C), project(take_fourth_rank(C), self.basis, metric, type(C).__name__))

    def project_map(self, matrix: ArrayLike, notation: Notation, *, rows: Side, columns: Side) -> NDArray[np.float64]:
        """Return the closest matrices of linear maps that have this symmetry; the maps need not be symmetric.

        A strain concentration tensor or a product of a stiffness and a compliance lacks the major symmetry, so that
        its invariants are more than those in `basis`: the common solutions of ``K M K^T = M`` among all 6x6 matrices.

        Parameters
        ----------
        matrix : array_like, shape (..., 6, 6)
            The maps in a notation.
        notation : Notation
            How they are written; its ordering must be complete.
        rows, columns : {"stress", "strain"}
            What the maps give (rows) and what they take (columns).

        Returns
        -------
        ndarray of float64 (complex128 for complex maps), shape (..., 6, 6)
            The projected maps in the same notation; the distance that is minimised is that of the tensors.

        Raises
        ------
        NotationError, OrderingError, ShapeError, DataError
            If the notation is not complete, a side is neither of the two, or the matrices are no finite 6x6 ones.

        Examples
        --------
        >>> import numpy as np
        >>> from fourthrank import Notation, Ordering, symmetry
        >>> voigt = Notation.voigt(Ordering("11 22 33 23 13 12"))
        >>> concentration = np.diag([1.0, 2.0, 3.0, 4.0, 5.0, 6.0])
        >>> symmetry.cubic().project_map(concentration, voigt, rows="strain", columns="strain").diagonal().round(12)
        array([2., 2., 2., 5., 5., 5.])
        """
        check_notation(notation)
        given = take_in(matrix, "matrix", (6, 6))
        held = Translator(notation, WORKING).map(widen(given), rows=rows, columns=columns)
        projected = project_map(held, _invariant_maps(self))
        return Translator(WORKING, notation).map(projected, rows=rows, columns=columns, check=False)

    def distance(
        self, C: Stiffness | Compliance, *, relative: bool = True, metric: Metric = "euclidean"
    ) -> NDArray[np.float64]:
        """Return how far tensors are from having this symmetry: ``norm(C - P C)``.

        Parameters
        ----------
        C : Stiffness or Compliance, batch shape (...)
            The tensors.
        relative : bool
            Whether to divide by ``norm(C)``; the relative distance of a zero tensor is 0.
        metric : {"euclidean", "log_euclidean"}
            The log-Euclidean distance is that of the logarithms.

        Returns
        -------
        ndarray of float64, shape (...)
            The distances; absolute Euclidean ones are in the unit of the tensors.

        Raises
        ------
        AdmissibilityError, DataError
            As in `project`.
        """
        return distances(take_fourth_rank(C), self.basis, metric, relative, type(C).__name__)

    def share(self, C: Stiffness | Compliance) -> NDArray[np.float64]:
        """Return the fraction of the squared norm that has this symmetry: ``norm(P C)^2 / norm(C)^2``.

        Parameters
        ----------
        C : Stiffness or Compliance, batch shape (...)
            The tensors.

        Returns
        -------
        ndarray of float64, shape (...)
            Between 0 and 1; 1 minus the square of the relative distance, and 1 for a zero tensor.
        """
        return shares(take_fourth_rank(C), self.basis)

    def in_axes(self, A: RotationLike) -> "Symmetry":
        """Return the same symmetry with its own axes along the rows of A.

        A generator R becomes ``A^T R A``, so that ``s.in_axes(A).project(C)`` is ``s.project(C.in_axes(A))``, turned
        back. Used on a symmetry that has other axes already, the rows of A are read in these.

        Parameters
        ----------
        A : array_like, shape (3, 3), or object with ``as_matrix()``
            One set of axes, one axis a row.

        Returns
        -------
        Symmetry
            The symmetry in these axes.

        Raises
        ------
        RotationError
            If the axes are not orthonormal and right-handed.
        ShapeError
            If there is more than one set.
        """
        rows = take_rotation(A, "A")
        if rows.ndim != 2:
            raise ShapeError(f"a symmetry has one set of axes, A must have shape (3, 3), got {rows.shape}")
        return _turned(self.own, self.axes @ rows)

    def contains(self, other: "Symmetry") -> bool:
        """Tell whether the group of `other` is a subgroup of this one, as far as elastic constants can tell.

        That holds exactly if every tensor with this symmetry has the other one too. The present axes of both count.

        Parameters
        ----------
        other : Symmetry
            The symmetry that may be part of this one.

        Returns
        -------
        bool
            Whether it is.
        """
        mine, theirs = self.basis.reshape(-1, 36), other.basis.reshape(-1, 36)
        return bool(np.abs(mine - (mine @ theirs.T) @ theirs).max() < _CONTAINED)

    def pattern(self, notation: Notation, *, kind: type[Stiffness] | type[Compliance] = Stiffness) -> Table:
        """Return which matrix elements vanish, are equal, or follow from others, as a table.

        Parameters
        ----------
        notation : Notation
            The notation in which the matrix is meant; its ordering must be complete.
        kind : type
            `Stiffness` or `Compliance`: their factors differ.

        Returns
        -------
        Table
            Prints as labelled text. The independent elements are those met first, row by row; a dot is a zero.

        Raises
        ------
        OrderingError, NotationError
            If the notation is none, or its ordering is not complete.

        Examples
        --------
        >>> from fourthrank import Notation, Ordering, symmetry
        >>> voigt = Notation.voigt(Ordering("11 22 33 23 13 12"))
        >>> print(symmetry.transversely_isotropic(axis=3).pattern(voigt))
        transversely isotropic Stiffness, 5 independent constants
        Notation.voigt(Ordering('11 22 33 23 13 12'))
             11   22   33   23   13               12
        11  C11  C12  C13    .    .                .
        22  C12  C11  C13    .    .                .
        33  C13  C13  C33    .    .                .
        23    .    .    .  C44    .                .
        13    .    .    .    .  C44                .
        12    .    .    .    .    .  1/2 C11-1/2 C12
        """
        return pattern_table(self.name, self.basis, notation, kind)

    def __eq__(self, other: object) -> bool:
        """Tell whether both have the same name, generators and axes."""
        if not isinstance(other, Symmetry):
            return NotImplemented
        return self._key() == other._key()

    def __hash__(self) -> int:
        return hash(self._key())

    def __repr__(self) -> str:
        turned = "" if np.array_equal(self.axes, np.eye(3)) else f", axes along {_axes_text(self.axes)}"
        return f"<Symmetry: {self.name}, {self.count} independent constants{turned}>"

    def __reduce__(self) -> tuple[object, ...]:
        if self._own is None:
            return build, (self.name, self.generators, self.free_axes)
        return _turned, (self._own, self.axes)

    def _key(self) -> tuple[str, bytes, bytes, bytes]:
        # Adding zero makes minus zeros equal to zeros.
        return (
            self.name,
            (self.generators + 0.0).tobytes(),
            (self.free_axes + 0.0).tobytes(),
            (self.axes + 0.0).tobytes(),
        )


def from_generators(
    *rotations: RotationLike,
    free_axes: ArrayLike | None = None,
    name: str = "user-defined",
    allow_reflection: bool = False,
) -> Symmetry:
    """Return the symmetry of a group of your own.

    Parameters
    ----------
    *rotations : array_like, shape (..., 3, 3), or object with ``as_matrix()``
        The generators, one by one or as lists; a full list of the group will do as well.
    free_axes : array_like, shape (..., 3), optional
        Axes about which every rotation is a symmetry (a continuous group).
    name : str
        What messages and tables call it.
    allow_reflection : bool
        Whether generators may be reflections; elastic constants cannot tell R from -R, and -R is taken.

    Returns
    -------
    Symmetry
        With the common invariant tensors of all generators.

    Raises
    ------
    RotationError
        If a generator is no rotation, or a free axis has no direction.
    SymmetryError
        If there are no free axes and the generators do not close to a finite group of at most 240 rotations.

    Examples
    --------
    >>> from fourthrank import rotation, symmetry
    >>> symmetry.from_generators(rotation.about_axis([0, 0, 1], 90, degrees=True)).count
    7
    """
    taken = [take_rotation(R, "generator", allow_reflection=allow_reflection).reshape(-1, 3, 3) for R in rotations]
    generators = np.concatenate([np.empty((0, 3, 3)), *taken])
    generators = generators * np.sign(np.linalg.det(generators))[:, None, None]
    vectors = np.empty((0, 3)) if free_axes is None else unit_vectors(free_axes, "free_axes").reshape(-1, 3)
    if not len(vectors):
        close(generators)
    return build(name, generators, vectors)


def build(name: str, generators: NDArray[np.float64], free_axes: NDArray[np.float64]) -> Symmetry:
    """Return a symmetry with trusted generators, in its own axes; for use inside the library."""
    return _make(name, generators, free_axes, np.eye(3), None)


def _turned(own: Symmetry, axes: NDArray[np.float64]) -> Symmetry:
    """Return a symmetry with its own axes along the rows of `axes`."""
    return _make(own.name, axes.T @ own.generators @ axes, own.free_axes @ axes, axes, own)


def _make(
    name: str,
    generators: NDArray[np.float64],
    free_axes: NDArray[np.float64],
    axes: NDArray[np.float64],
    own: Symmetry | None,
) -> Symmetry:
    self = object.__new__(Symmetry)
    # Turning is more accurate than solving again, and keeps the order of the basis.
    basis = from_constants(fixed_space(generators, free_axes)) if own is None else turn_matrices(own.basis, axes.T)
    values: dict[str, object] = {"name": name, "count": len(basis), "basis": read_only(basis), "_own": own}
    for key, array in (("generators", generators), ("free_axes", free_axes), ("axes", axes)):
        values[key] = read_only(np.array(array, np.float64))
    for key, value in values.items():
        object.__setattr__(self, key, value)
    return self


def close(generators: NDArray[np.float64]) -> NDArray[np.float64]:
    """Return all products of the generators, the identity first, or raise where they do not close."""
    group = np.eye(3)[None]
    new = group
    while len(new):
        products = (generators[:, None] @ new[None]).reshape(-1, 3, 3)
        new = _distinct(products, group)
        group = np.concatenate([group, new])
        if len(group) > _LARGEST_ORDER:
            raise SymmetryError(
                f"the {len(generators)} generators do not close to a finite group of at most {_LARGEST_ORDER} "
                "rotations; the usual cause is an angle that is no whole part of a turn, or a generator with too few "
                "digits; a group that turns freely about an axis is given by free_axes"
            )
    return group


def _distinct(products: NDArray[np.float64], group: NDArray[np.float64]) -> NDArray[np.float64]:
    """Return the products that are not yet in the group, each once."""
    found: list[NDArray[np.float64]] = []
    known = group.reshape(-1, 9)
    for row in products.reshape(-1, 9):
        if np.abs(known - row).max(axis=1).min() > _SAME:
            known = np.concatenate([known, row[None]])
            found.append(row.reshape(3, 3))
    return np.array(found).reshape(-1, 3, 3)


@lru_cache(maxsize=64)
def _invariant_maps(symmetry: Symmetry) -> NDArray[np.float64]:
    return fixed_maps(symmetry.generators, symmetry.free_axes)


def take_fourth_rank(C: FourthRank) -> NDArray[np.float64]:
    """Return the held array of a stiffness or compliance, or raise where something else was given."""
    if not isinstance(C, FourthRank):  # pyright: ignore[reportUnnecessaryIsInstance]  # callers without a checker
        raise TypeError(f"C must be a Stiffness or a Compliance, got {type(C).__name__}")
    return working(C)


def _axes_text(axes: NDArray[np.float64]) -> str:
    rows: Sequence[Sequence[float]] = (axes + 0.0).tolist()
    return ", ".join("[" + " ".join(f"{x:.4g}" for x in row) + "]" for row in rows)
