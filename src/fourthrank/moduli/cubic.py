"""The three constants of a cubic solid in its cube axes."""

from typing import Final, Self, final

import numpy as np
from numpy.typing import ArrayLike, NDArray

from .._arrays import Inexact
from .._frozen import Frozen
from .._value import make, working
from ..tensors import Compliance, Stiffness
from ._fields import check_class, cubic_pattern, require, take_constants

__all__ = ["Cubic"]

_NAMES: Final = ("C11", "C12", "C44")
_WAY_ON: Final = "find its axes (symmetry.find_axes), or take the closest cubic tensor (symmetry.cubic().project)"


@final
class Cubic(Frozen):
    """A cubic solid, a batch of any shape, with the axes along the edges of the cube.

    Parameters
    ----------
    C11, C12, C44 : array_like, shape (...)
        ``C_1111``, ``C_1122`` and ``C_2323``, in any consistent unit; they broadcast, and may be complex.

    Raises
    ------
    ModuliError
        If no stable solid has these constants: C44, C11 - C12 and C11 + 2 C12 must be positive.
    ShapeError, DataError
        If the constants do not broadcast, or one is not finite.

    References
    ----------
    Born, M. and Huang, K. (1954), Dynamical Theory of Crystal Lattices (criteria of stability).
    Nye, J. F. (1985), Physical Properties of Crystals, chapter VIII.

    Examples
    --------
    >>> from fourthrank.moduli import Cubic, engineering_constants
    >>> copper = Cubic(C11=168.4, C12=121.4, C44=75.4)
    >>> float(engineering_constants(copper.stiffness()).E1.round(2))
    66.69
    """

    __slots__ = _NAMES

    C11: NDArray[np.float64]
    C12: NDArray[np.float64]
    C44: NDArray[np.float64]

    def __init__(self, C11: ArrayLike, C12: ArrayLike, C44: ArrayLike) -> None:
        fields = take_constants({"C11": C11, "C12": C12, "C44": C44})
        for name, value in fields.items():
            object.__setattr__(self, name, value)
        for symbol, value in (
            ("C44", self.C44),
            ("C11 - C12", self.C11 - self.C12),
            ("C11 + 2 C12", self.C11 + 2.0 * self.C12),
        ):
            require(np.real(value) > 0.0, symbol, np.asarray(value), "positive", "no stable cubic solid has these")

    @property
    def shape(self) -> tuple[int, ...]:
        """The shape of the batch; () for a single material."""
        return self.C11.shape

    def stiffness(self) -> Stiffness:
        """Return the stiffness.

        Returns
        -------
        Stiffness
            A batch of the shape of the constants.
        """
        return make(Stiffness, cubic_pattern(self.C11, self.C12, 2.0 * self.C44))

    def compliance(self) -> Compliance:
        """Return the compliance: ``S_1111 = (C11 + C12) / D``, ``S_1122 = -C12 / D``, ``S_2323 = 1 / (4 C44)``.

        ``D = (C11 - C12)(C11 + 2 C12)``; the relative error grows as either factor becomes small beside C11.

        Returns
        -------
        Compliance
            A batch of the shape of the constants, in the inverse unit.
        """
        difference, total = self.C11 - self.C12, self.C11 + 2.0 * self.C12
        normal = (self.C11 + self.C12) / difference / total
        return make(Compliance, cubic_pattern(normal, -self.C12 / difference / total, 0.5 / self.C44))

    @classmethod
    def from_stiffness(cls, C: Stiffness, *, rtol: float | None = None) -> Self:
        """Return the constants of a stiffness that is cubic in the present axes.

        Parameters
        ----------
        C : Stiffness
            A batch of any shape.
        rtol : float, optional
            How far the tensor may be from the cubic one, relative to its norm; the default is 1e-9.

        Returns
        -------
        Cubic
            The means of the components that are equal in a cubic solid.

        Raises
        ------
        ModuliError
            If a tensor is not cubic in these axes, with the amount, or no stable solid has its constants.
        """
        array = working(C)
        normal, coupling, shear = _means(array)
        check_class(C, cubic_pattern(normal, coupling, shear), rtol, "cubic in these axes", _WAY_ON)
        return cls(normal, coupling, 0.5 * shear)

    @classmethod
    def from_compliance(cls, S: Compliance, *, rtol: float | None = None) -> Self:
        """Return the constants of a compliance that is cubic in the present axes; see `from_stiffness`.

        Parameters
        ----------
        S : Compliance
            A batch of any shape.
        rtol : float, optional
            How far its stiffness may be from the cubic one, relative to its norm; the default is 1e-9.

        Returns
        -------
        Cubic
            The constants.

        Raises
        ------
        ModuliError
            If the stiffness is not cubic in these axes, or no stable solid has its constants.
        AdmissibilityError
            If a tensor is singular.
        """
        return cls.from_stiffness(S.inverse(), rtol=rtol)

    def __eq__(self, other: object) -> bool:
        if not isinstance(other, Cubic):
            return NotImplemented
        return all(np.array_equal(getattr(self, name), getattr(other, name)) for name in _NAMES)

    __hash__ = None  # type: ignore[assignment]  # equality is by value, and the values are arrays

    def __repr__(self) -> str:
        if self.shape != ():
            return f"<Cubic: batch shape {self.shape}>"
        return f"Cubic({', '.join(f'{name}={getattr(self, name).item()!r}' for name in _NAMES)})"

    def __reduce__(self) -> tuple[object, ...]:
        return Cubic, (self.C11, self.C12, self.C44)


def _means(array: Inexact) -> tuple[Inexact, Inexact, Inexact]:
    diagonal = np.diagonal(array, axis1=-2, axis2=-1)
    coupling = (array[..., 0, 1] + array[..., 0, 2] + array[..., 1, 2]) / 3.0
    return diagonal[..., :3].sum(axis=-1) / 3.0, np.asarray(coupling), diagonal[..., 3:].sum(axis=-1) / 3.0
