"""Notations: how stress, strain and the linear maps between them are written as vectors and matrices.

A `Notation` is an `Ordering` with a weight for the shear components of stress, one for those of strain, and a sign. It
packs full tensors into vectors and 6x6 matrices and unpacks them again. Everything follows from how it packs stress and
strain, and from the demand that ``stress_vector = stiffness_matrix @ strain_vector`` holds.
"""

import math
from typing import final

from ._packing import MatrixPacking, TrianglePacking, VectorPacking
from .ordering import Ordering

__all__ = ["Notation"]


@final
class Notation(VectorPacking, MatrixPacking, TrianglePacking):
    """A vector and matrix notation of symmetric second-order tensors and of the linear maps between them.

    With a the shear weight of stress and b that of strain, the vectors are ``s_I = w_I * sigma_ij`` (w = a for a shear
    pair, 1 for a normal pair) and ``e_I = w_I * eps_ij`` (w = b or 1). The matrix of a linear map is then
    ``M_IJ = w_I * M_ijkl * m_J / w_J``, with m = 2 for a shear pair and 1 for a normal pair, and on each side the
    weights of the kind that stands there.

    Parameters
    ----------
    ordering : Ordering
        Which pair stands where.
    stress_shear, strain_shear : float
        The weights of the shear components, positive. ``math.sqrt(2)`` is taken as the exact square root.
    compression_positive : bool
        Whether stress and strain carry the opposite sign (common practice in soil and rock mechanics). Stiffness and
        compliance are the same either way.

    Raises
    ------
    NotationError
        If a weight is not a positive finite number, or `ordering` is no `Ordering`.

    Examples
    --------
    >>> from fourthrank import Notation, Ordering
    >>> Notation(Ordering("11 22 33 12 13 23"), stress_shear=1, strain_shear=2).work_conjugate
    True
    """

    __slots__ = ()

    @classmethod
    def voigt(cls, ordering: Ordering, *, compression_positive: bool = False) -> "Notation":
        """Return the notation of Voigt: engineering shear strain (weight 2), stress without factor.

        Parameters
        ----------
        ordering : Ordering
            Which pair stands where.
        compression_positive : bool
            Whether stress and strain carry the opposite sign.

        Returns
        -------
        Notation
            Stiffness carries no factors in it; compliance carries 2 and 4.

        References
        ----------
        Nye, J. F. (1957), Physical Properties of Crystals, chapter VIII.
        """
        return cls(ordering, stress_shear=1.0, strain_shear=2.0, compression_positive=compression_positive)

    @classmethod
    def mandel(cls, ordering: Ordering, *, compression_positive: bool = False) -> "Notation":
        """Return the notation of Mandel (Kelvin): weight sqrt 2 for shear stress and shear strain.

        Parameters
        ----------
        ordering : Ordering
            Which pair stands where.
        compression_positive : bool
            Whether stress and strain carry the opposite sign.

        Returns
        -------
        Notation
            An isometry: lengths, eigenvalues and inverses are those of the tensors.

        References
        ----------
        Mehrabadi, M. M. and Cowin, S. C. (1990), Q. J. Mech. Appl. Math. 43, 15-41.
        """
        root = math.sqrt(2.0)
        return cls(ordering, stress_shear=root, strain_shear=root, compression_positive=compression_positive)

    @classmethod
    def tensorial(cls, ordering: Ordering, *, compression_positive: bool = False) -> "Notation":
        """Return the notation without weights: shear strain is the tensor's component, not doubled.

        Parameters
        ----------
        ordering : Ordering
            Which pair stands where.
        compression_positive : bool
            Whether stress and strain carry the opposite sign.

        Returns
        -------
        Notation
            Not work-conjugate: the matrices of stiffness and compliance are unsymmetric in it.
        """
        return cls(ordering, stress_shear=1.0, strain_shear=1.0, compression_positive=compression_positive)

    def __eq__(self, other: object) -> bool:
        if not isinstance(other, Notation):
            return NotImplemented
        return self is other or self._key() == other._key()

    def __hash__(self) -> int:
        return self._hash

    def __repr__(self) -> str:
        sign = ", compression_positive=True" if self._compression_positive else ""
        for name, weights in (("voigt", (1.0, 2.0)), ("mandel", (math.sqrt(2.0),) * 2), ("tensorial", (1.0, 1.0))):
            if (self._stress_shear, self._strain_shear) == weights:
                return f"Notation.{name}({self._ordering!r}{sign})"
        return (
            f"Notation({self._ordering!r}, stress_shear={self._stress_shear!r}, "
            f"strain_shear={self._strain_shear!r}{sign})"
        )

    def __reduce__(self) -> tuple[object, ...]:
        return _rebuild, self._key()

    def _key(self) -> tuple[Ordering, float, float, bool]:
        return self._ordering, self._stress_shear, self._strain_shear, self._compression_positive


def _rebuild(ordering: Ordering, stress_shear: float, strain_shear: float, compression_positive: bool) -> Notation:
    return Notation(
        ordering,
        stress_shear=stress_shear,
        strain_shear=strain_shear,
        compression_positive=compression_positive,
    )
