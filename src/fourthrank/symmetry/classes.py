"""The symmetry classes of linear elasticity, each from its generators."""

from functools import cache
from typing import Final, Literal, TypeAlias

import numpy as np
from numpy.typing import NDArray

from ..errors import SymmetryError
from .groups import Symmetry, build

__all__ = [
    "Axis",
    "cubic",
    "isotropic",
    "monoclinic",
    "orthotropic",
    "tetragonal",
    "transversely_isotropic",
    "triclinic",
    "trigonal",
]

Axis: TypeAlias = Literal[1, 2, 3]

# A generator: the number of the axis and how many turns about it make a full one; 0 stands for every angle.
Generator: TypeAlias = tuple[int, int]
_COSINES_AND_SINES: Final = {2: (-1.0, 0.0), 3: (-0.5, np.sqrt(0.75)), 4: (0.0, 1.0)}


def isotropic() -> Symmetry:
    """Return isotropy: every rotation is a symmetry (2 constants).

    Returns
    -------
    Symmetry
        A continuous group.
    """
    return _named("isotropic", (1, 0), (2, 0))


def cubic() -> Symmetry:
    """Return cubic symmetry with the cube's edges along the axes (3 constants).

    Returns
    -------
    Symmetry
        The 24 rotations of a cube. The Laue classes m-3 and m-3m have the same elastic constants.
    """
    return _named("cubic", (1, 4), (2, 4))


def transversely_isotropic(*, axis: Axis) -> Symmetry:
    """Return transverse isotropy: every rotation about one axis is a symmetry (5 constants).

    Hexagonal crystals have the same elastic constants.

    Parameters
    ----------
    axis : {1, 2, 3}
        The axis of rotation. Crystal physics takes 3; composites often take the fibre along 1.

    Returns
    -------
    Symmetry
        A continuous group.
    """
    _check_axis(axis, "axis")
    return _named("transversely isotropic", (axis, 0), (axis % 3 + 1, 2))


def tetragonal(*, axis: Axis, constants: Literal[6, 7] = 6) -> Symmetry:
    """Return tetragonal symmetry about one axis.

    Parameters
    ----------
    axis : {1, 2, 3}
        The four-fold axis.
    constants : {6, 7}
        6 for the Laue class 4/mmm, with two-fold axes along the other two axes; 7 for 4/m, without them.

    Returns
    -------
    Symmetry
        A group of 8 or 4 rotations.
    """
    _check_axis(axis, "axis")
    _check_constants(constants)
    if constants == 7:
        return _named("tetragonal (4/m)", (axis, 4))
    return _named("tetragonal", (axis, 4), (axis % 3 + 1, 2))


def trigonal(*, axis: Axis, two_fold: Axis | None = None, constants: Literal[6, 7] = 6) -> Symmetry:
    """Return trigonal symmetry about one axis.

    Parameters
    ----------
    axis : {1, 2, 3}
        The three-fold axis.
    two_fold : {1, 2, 3}, optional
        Which of the other axes is two-fold, or normal to a mirror plane; needed for 6 constants. For axis 3, the
        usual setting has the two-fold axis along 1 (C14, C24 = -C14, C56 = C14); along 2 it gives C15 instead.
    constants : {6, 7}
        6 for the Laue class -3m; 7 for -3, which has no two-fold axis.

    Returns
    -------
    Symmetry
        A group of 6 or 3 rotations.

    Raises
    ------
    SymmetryError
        If the two-fold axis is missing, superfluous, or the three-fold axis itself.
    """
    _check_axis(axis, "axis")
    _check_constants(constants)
    if constants == 7:
        if two_fold is not None:
            raise SymmetryError(
                f"trigonal symmetry with 7 constants (Laue class -3) has no two-fold axis, got two_fold={two_fold!r}; "
                "leave it out, or ask for constants=6"
            )
        return _named("trigonal (-3)", (axis, 3))
    if two_fold is None:
        raise SymmetryError(
            "trigonal symmetry with 6 constants needs two_fold=1, 2 or 3, the two-fold axis (normal to a mirror "
            "plane): it decides between C14 and C15, and conventions differ"
        )
    _check_axis(two_fold, "two_fold")
    if two_fold == axis:
        raise SymmetryError(f"the two-fold axis must differ from the three-fold one, both are {axis}")
    return _named("trigonal", (axis, 3), (two_fold, 2))


def orthotropic() -> Symmetry:
    """Return orthotropy: two-fold rotations about all three axes (9 constants).

    Returns
    -------
    Symmetry
        A group of 4 rotations.
    """
    return _named("orthotropic", (1, 2), (2, 2))


def monoclinic(*, axis: Axis) -> Symmetry:
    """Return monoclinic symmetry: one two-fold axis, the normal of a mirror plane (13 constants).

    Parameters
    ----------
    axis : {1, 2, 3}
        The two-fold axis. Crystal physics often takes 2, composites and geophysics 3.

    Returns
    -------
    Symmetry
        A group of 2 rotations.
    """
    _check_axis(axis, "axis")
    return _named("monoclinic", (axis, 2))


def triclinic() -> Symmetry:
    """Return no symmetry at all (21 constants).

    Returns
    -------
    Symmetry
        The group of the identity alone.
    """
    return _named("triclinic")


@cache
def _named(name: str, *generators: Generator) -> Symmetry:
    rotations = [_about(axis, fold) for axis, fold in generators if fold]
    free = [np.eye(3)[axis - 1] for axis, fold in generators if not fold]
    return build(name, np.array(rotations).reshape(-1, 3, 3), np.array(free).reshape(-1, 3))


def _about(axis: int, fold: int) -> NDArray[np.float64]:
    """Return the rotation by a whole part of a turn about a coordinate axis, exact but for the sine of 120 degrees."""
    cosine, sine = _COSINES_AND_SINES[fold]
    i, j = axis % 3, (axis + 1) % 3
    matrix = np.eye(3)
    matrix[[i, j], [i, j]] = cosine
    matrix[i, j], matrix[j, i] = -sine, sine
    return matrix + 0.0


def _check_axis(axis: int, name: str) -> None:
    if axis not in (1, 2, 3):
        raise SymmetryError(f"{name} must be 1, 2 or 3, got {axis!r}")


def _check_constants(constants: int) -> None:
    if constants not in (6, 7):
        raise SymmetryError(f"constants must be 6 or 7, got {constants!r}")
