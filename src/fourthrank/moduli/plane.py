"""The stiffness of plane problems: plane stress and plane strain, in any of the three planes."""

from typing import Final

import numpy as np
from numpy.typing import NDArray

from .._arrays import Inexact, member_text
from .._mandel import WORKING
from .._value import check_notation, working
from ..errors import AdmissibilityError, OrderingError
from ..notation import Notation
from ..tensors import Compliance, Stiffness
from ..translation import passage

__all__ = ["plane_strain_stiffness", "plane_stress_stiffness"]

_SINGULAR: Final = 1.0 / np.finfo(np.float64).eps


def plane_stress_stiffness(C: Stiffness | Compliance, notation: Notation) -> NDArray[np.float64]:
    """Return the stiffness of a thin sheet, the reduced stiffness Q: stress out of the plane is zero.

    With a the pairs in the plane and b the others, ``Q = C_aa - C_ab C_bb^-1 C_ba``, which is ``S_aa^-1``. The sheet
    need not lie in a plane of symmetry of the material.

    Parameters
    ----------
    C : Stiffness or Compliance
        A batch of any shape.
    notation : Notation
        Over the three pairs of one plane, in any order; it names the plane, for example ``Ordering("11 22 12")``.

    Returns
    -------
    ndarray of float64 (complex128 where C is complex), shape (..., 3, 3)
        In the unit of the stiffness.

    Raises
    ------
    OrderingError
        If the notation has other than three pairs.
    AdmissibilityError
        If a block that must be inverted is singular.

    References
    ----------
    Jones, R. M. (1975), Mechanics of Composite Materials, section 2.5.

    Examples
    --------
    >>> from fourthrank import Notation, Ordering
    >>> from fourthrank.moduli import Isotropic, plane_stress_stiffness
    >>> Q = plane_stress_stiffness(Isotropic.from_two(E=3.0, nu=0.5).compliance(),
    ...                            Notation.voigt(Ordering("11 22 12")))
    >>> Q.round(12)
    array([[4., 2., 0.],
           [2., 4., 0.],
           [0., 0., 1.]])
    """
    kept, rest = _split(notation, (3,), "plane stress")
    array = working(C)
    block = _inverse(_block(array, kept, kept)) if isinstance(C, Compliance) else _condensed(array, kept, rest)
    return _weighted(block, notation)


def plane_strain_stiffness(C: Stiffness | Compliance, notation: Notation) -> NDArray[np.float64]:
    """Return the stiffness of a long body that keeps its length: strain out of the plane is zero.

    It is the block of C that the notation's pairs select. With the fourth pair, as in ``11 22 33 12``, its row gives
    the normal stress out of the plane. From a compliance it is ``(S_aa - S_ab S_bb^-1 S_ba)^-1``.

    Parameters
    ----------
    C : Stiffness or Compliance
        A batch of any shape.
    notation : Notation
        Over the three pairs of one plane, in any order, or those and the normal pair out of the plane.

    Returns
    -------
    ndarray of float64 (complex128 where C is complex), shape (..., 3, 3) or (..., 4, 4)
        In the unit of the stiffness.

    Raises
    ------
    OrderingError
        If the notation has all six pairs.
    AdmissibilityError
        If a block that must be inverted is singular, as for an incompressible solid.

    References
    ----------
    Lekhnitskii, S. G. (1963), Theory of Elasticity of an Anisotropic Elastic Body (reduced coefficients).

    Examples
    --------
    >>> from fourthrank import Notation, Ordering
    >>> from fourthrank.moduli import Isotropic, plane_strain_stiffness
    >>> plane_strain_stiffness(Isotropic.from_two(K=5.0, G=3.0).stiffness(), Notation.voigt(Ordering("11 22 12")))
    array([[9., 3., 0.],
           [3., 9., 0.],
           [0., 0., 3.]])
    """
    kept, rest = _split(notation, (3, 4), "plane strain")
    array = working(C)
    block = _inverse(_condensed(array, kept, rest)) if isinstance(C, Compliance) else _block(array, kept, kept)
    return _weighted(block, notation)


def _split(notation: Notation, sizes: tuple[int, ...], state: str) -> tuple[list[int], list[int]]:
    """Return the places in the working form of the notation's pairs, and of all others."""
    check_notation(notation)
    if notation.ordering.size not in sizes:
        raise OrderingError(
            f"{state} needs a notation over {' or '.join(map(str, sizes))} pairs, got {notation.ordering.size}: name "
            "the plane by its pairs, for example Ordering('11 22 12')"
        )
    kept = [WORKING.ordering.position(i, j) for i, j in notation.ordering.pairs]
    return kept, [k for k in range(6) if k not in kept]


def _block(array: Inexact, rows: list[int], columns: list[int]) -> Inexact:
    return array[..., np.array(rows)[:, None], np.array(columns)]


def _condensed(array: Inexact, kept: list[int], rest: list[int]) -> Inexact:
    """Return the block of `kept` when the forces that belong to `rest` vanish."""
    coupling = _block(array, kept, rest)
    return np.asarray(
        _block(array, kept, kept) - coupling @ _inverse(_block(array, rest, rest)) @ coupling.swapaxes(-1, -2)
    )


def _inverse(block: Inexact) -> Inexact:
    singular = np.asarray(np.linalg.cond(block) >= _SINGULAR) if block.size else np.zeros(block.shape[:-2], np.bool_)
    if singular.any():
        member = tuple(int(i) for i in np.unravel_index(int(singular.argmax()), singular.shape))
        raise AdmissibilityError(
            f"the block{member_text(member)} that plane stress or plane strain inverts is singular: "
            "an incompressible solid has no plane-strain stiffness; otherwise check the data"
        )
    inverse = np.linalg.inv(block)
    return np.asarray(0.5 * (inverse + inverse.swapaxes(-1, -2)))


def _weighted(block: Inexact, notation: Notation) -> Inexact:
    """Return a block of the working form with the weights of the notation."""
    return passage(Notation.mandel(notation.ordering), notation).matrix(block, "stress", "strain")
