"""The nine constants of an orthotropic solid in its own axes."""

from typing import Final, Self, final, overload

import numpy as np
from numpy.typing import ArrayLike, NDArray

from .._arrays import Inexact, member_text, read_only, read_tolerance
from .._frozen import Frozen
from .._mandel import WORKING
from .._value import make, working
from ..errors import ModuliError
from ..tensors import Compliance, Stiffness
from ._fields import require, take_constants

__all__ = ["Orthotropic"]

_NAMES: Final = ("E1", "E2", "E3", "G12", "G13", "G23", "nu12", "nu13", "nu23")
_PAIRS: Final = ((1, 2), (1, 3), (2, 3))
# Where the compliance 1/E is singular beyond repair: 1 - nu12 nu21 - ... is a difference of numbers near 1.
_SMALLEST_DETERMINANT: Final = 1e-15


@final
class Orthotropic(Frozen):
    """The engineering constants of an orthotropic solid, along its three axes of symmetry.

    With ``nu_ij`` minus the strain along j over the strain along i under uniaxial stress along i, the compliance is
    ``S_iiii = 1 / E_i``, ``S_iijj = -nu_ij / E_i = -nu_ji / E_j`` and ``S_ijij = 1 / (4 G_ij)``.

    Parameters
    ----------
    E1, E2, E3 : array_like, shape (...)
        Young's moduli, in any consistent unit; positive.
    G12, G13, G23 : array_like, shape (...)
        Shear moduli, in the same unit; positive.
    nu12, nu21, nu13, nu31, nu23, nu32 : array_like, shape (...)
        Poisson's ratios; exactly one of each pair. Reciprocity gives the other.

    Raises
    ------
    ModuliError
        If a modulus is not positive, a Poisson's ratio lies beyond ``|nu_ij| <= sqrt(E_i / E_j)``, the three together
        beyond ``1 - nu12 nu21 - nu23 nu32 - nu13 nu31 - 2 nu21 nu32 nu13 >= 0``, or a pair is given twice or not at
        all. Of complex constants the real parts must obey this.
    ShapeError, DataError
        If the batches do not broadcast, or something is not finite.

    References
    ----------
    Lempriere, B. M. (1968), AIAA J. 6, 2226-2227 (the bounds).

    Examples
    --------
    A unidirectional carbon-fibre ply, E1 and E2 as in Hyer (1998), chapter 2; value from memory.

    >>> from fourthrank.moduli import Orthotropic
    >>> ply = Orthotropic(
    ...     E1=155.0, E2=12.1, E3=12.1, G12=4.4, G13=4.4, G23=3.2, nu12=0.248, nu13=0.248, nu23=0.458
    ... )
    >>> float(ply.nu21.round(5))
    0.01936
    """

    __slots__ = _NAMES

    E1: NDArray[np.float64]
    E2: NDArray[np.float64]
    E3: NDArray[np.float64]
    G12: NDArray[np.float64]
    G13: NDArray[np.float64]
    G23: NDArray[np.float64]
    nu12: NDArray[np.float64]
    nu13: NDArray[np.float64]
    nu23: NDArray[np.float64]

    # fmt: off
    @overload
    def __init__(self, *, E1: ArrayLike, E2: ArrayLike, E3: ArrayLike, G12: ArrayLike, G13: ArrayLike, G23: ArrayLike,
                 nu12: ArrayLike, nu13: ArrayLike, nu23: ArrayLike) -> None: ...
    @overload
    def __init__(self, *, E1: ArrayLike, E2: ArrayLike, E3: ArrayLike, G12: ArrayLike, G13: ArrayLike, G23: ArrayLike,
                 nu12: ArrayLike, nu13: ArrayLike, nu32: ArrayLike) -> None: ...
    @overload
    def __init__(self, *, E1: ArrayLike, E2: ArrayLike, E3: ArrayLike, G12: ArrayLike, G13: ArrayLike, G23: ArrayLike,
                 nu12: ArrayLike, nu31: ArrayLike, nu23: ArrayLike) -> None: ...
    @overload
    def __init__(self, *, E1: ArrayLike, E2: ArrayLike, E3: ArrayLike, G12: ArrayLike, G13: ArrayLike, G23: ArrayLike,
                 nu12: ArrayLike, nu31: ArrayLike, nu32: ArrayLike) -> None: ...
    @overload
    def __init__(self, *, E1: ArrayLike, E2: ArrayLike, E3: ArrayLike, G12: ArrayLike, G13: ArrayLike, G23: ArrayLike,
                 nu21: ArrayLike, nu13: ArrayLike, nu23: ArrayLike) -> None: ...
    @overload
    def __init__(self, *, E1: ArrayLike, E2: ArrayLike, E3: ArrayLike, G12: ArrayLike, G13: ArrayLike, G23: ArrayLike,
                 nu21: ArrayLike, nu13: ArrayLike, nu32: ArrayLike) -> None: ...
    @overload
    def __init__(self, *, E1: ArrayLike, E2: ArrayLike, E3: ArrayLike, G12: ArrayLike, G13: ArrayLike, G23: ArrayLike,
                 nu21: ArrayLike, nu31: ArrayLike, nu23: ArrayLike) -> None: ...
    @overload
    def __init__(self, *, E1: ArrayLike, E2: ArrayLike, E3: ArrayLike, G12: ArrayLike, G13: ArrayLike, G23: ArrayLike,
                 nu21: ArrayLike, nu31: ArrayLike, nu32: ArrayLike) -> None: ...
    # fmt: on
    def __init__(
        self,
        *,
        E1: ArrayLike,
        E2: ArrayLike,
        E3: ArrayLike,
        G12: ArrayLike,
        G13: ArrayLike,
        G23: ArrayLike,
        nu12: ArrayLike | None = None,
        nu21: ArrayLike | None = None,
        nu13: ArrayLike | None = None,
        nu31: ArrayLike | None = None,
        nu23: ArrayLike | None = None,
        nu32: ArrayLike | None = None,
    ) -> None:
        ratios = {"nu12": nu12, "nu21": nu21, "nu13": nu13, "nu31": nu31, "nu23": nu23, "nu32": nu32}
        given = {name: value for name, value in ratios.items() if value is not None}
        for i, j in _PAIRS:
            found = [name for name in (f"nu{i}{j}", f"nu{j}{i}") if name in given]
            if len(found) != 1:
                raise ModuliError(
                    f"of nu{i}{j} and nu{j}{i} exactly one must be given, got {' and '.join(found) or 'none'}: "
                    "reciprocity nu_ij / E_i = nu_ji / E_j fixes the other"
                )
        moduli = {"E1": E1, "E2": E2, "E3": E3, "G12": G12, "G13": G13, "G23": G23}
        fields = take_constants(moduli | given)
        for name in moduli:
            require(np.real(fields[name]) > 0.0, name, fields[name], "positive", "check its sign and its column")
        for i, j in _PAIRS:
            for first, second in ((i, j), (j, i)):
                name = f"nu{first}{second}"
                if name in fields:
                    ratio = np.real(fields[f"E{first}"]) / np.real(fields[f"E{second}"])
                    require(
                        np.real(fields[name]) ** 2 <= ratio * (1.0 + 1e-12),
                        name,
                        fields[name],
                        f"within |{name}| <= sqrt(E{first} / E{second})",
                        f"a usual cause is nu{second}{first} given for {name}",
                    )
            if f"nu{j}{i}" in fields:
                fields[f"nu{i}{j}"] = fields[f"nu{j}{i}"] * (fields[f"E{i}"] / fields[f"E{j}"])
        for name in _NAMES:
            object.__setattr__(self, name, read_only(np.asarray(fields[name])))
        determinant = np.real(self._determinant())
        require(
            determinant >= -_SMALLEST_DETERMINANT,
            "1 - nu12 nu21 - nu23 nu32 - nu13 nu31 - 2 nu21 nu32 nu13",
            determinant,
            "at least 0",
            "the three Poisson's ratios cannot occur together in a stable solid",
        )

    @property
    def shape(self) -> tuple[int, ...]:
        """The shape of the batch; () for a single material."""
        return self.E1.shape

    @property
    def nu21(self) -> NDArray[np.float64]:
        """Poisson's ratio of strain along 1 under stress along 2: ``nu12 * E2 / E1``."""
        return self.nu12 * (self.E2 / self.E1)

    @property
    def nu31(self) -> NDArray[np.float64]:
        """Poisson's ratio of strain along 1 under stress along 3: ``nu13 * E3 / E1``."""
        return self.nu13 * (self.E3 / self.E1)

    @property
    def nu32(self) -> NDArray[np.float64]:
        """Poisson's ratio of strain along 2 under stress along 3: ``nu23 * E3 / E2``."""
        return self.nu23 * (self.E3 / self.E2)

    def compliance(self) -> Compliance:
        """Return the compliance, also at the limit of incompressibility.

        Returns
        -------
        Compliance
            A batch of the shape of the constants, in the inverse unit.
        """
        normal = [1.0 / self.E1, 1.0 / self.E2, 1.0 / self.E3]
        coupling = [-self.nu12 / self.E1, -self.nu13 / self.E1, -self.nu23 / self.E2]
        shear = [0.5 / self.G23, 0.5 / self.G13, 0.5 / self.G12]
        return make(Compliance, _assemble(normal, coupling, shear))

    def stiffness(self) -> Stiffness:
        """Return the stiffness.

        ``C_1111 = E1 (1 - nu23 nu32) / D``, ``C_1122 = E1 (nu21 + nu31 nu23) / D`` and so on round the axes, with
        ``D = 1 - nu12 nu21 - nu23 nu32 - nu13 nu31 - 2 nu21 nu32 nu13``, and ``C_ijij = G_ij``. The relative error
        grows as 1 / D near the limit of incompressibility.

        Returns
        -------
        Stiffness
            A batch of the shape of the constants.

        Raises
        ------
        ModuliError
            If D is zero to working precision: such a solid has a compliance and no stiffness.

        References
        ----------
        Jones, R. M. (1975), Mechanics of Composite Materials, section 2.4.
        """
        D = self._determinant()
        require(
            np.abs(D) > _SMALLEST_DETERMINANT,
            "1 - nu12 nu21 - nu23 nu32 - nu13 nu31 - 2 nu21 nu32 nu13",
            D,
            "greater than 0",
            "at the limit the solid has a compliance() and no stiffness",
        )
        nu21, nu31, nu32 = self.nu21, self.nu31, self.nu32
        normal = [
            self.E1 * ((1.0 - self.nu23 * nu32) / D),
            self.E2 * ((1.0 - self.nu13 * nu31) / D),
            self.E3 * ((1.0 - self.nu12 * nu21) / D),
        ]
        coupling = [
            self.E1 * ((nu21 + nu31 * self.nu23) / D),
            self.E1 * ((nu31 + nu21 * nu32) / D),
            self.E2 * ((nu32 + self.nu12 * nu31) / D),
        ]
        shear = [2.0 * self.G23, 2.0 * self.G13, 2.0 * self.G12]
        return make(Stiffness, _assemble(normal, coupling, shear))

    @classmethod
    def from_compliance(cls, S: Compliance, *, rtol: float | None = None) -> Self:
        """Return the constants of a compliance that is orthotropic in the present axes.

        Parameters
        ----------
        S : Compliance
            A batch of any shape.
        rtol : float, optional
            How large the part that no orthotropic tensor has may be, relative to the norm; the default is 1e-9.

        Returns
        -------
        Orthotropic
            The constants; the part within the tolerance is left out.

        Raises
        ------
        ModuliError
            If a tensor is not orthotropic in these axes, with the amount; or its constants are out of bounds.
        """
        array = _orthotropic_part(S, rtol)
        E1, E2, E3 = (1.0 / array[..., k, k] for k in range(3))
        G23, G13, G12 = (0.5 / array[..., k, k] for k in range(3, 6))
        nu12, nu13, nu23 = -array[..., 0, 1] * E1, -array[..., 0, 2] * E1, -array[..., 1, 2] * E2
        return cls(E1=E1, E2=E2, E3=E3, G12=G12, G13=G13, G23=G23, nu12=nu12, nu13=nu13, nu23=nu23)

    @classmethod
    def from_stiffness(cls, C: Stiffness, *, rtol: float | None = None) -> Self:
        """Return the constants of a stiffness that is orthotropic in the present axes.

        Parameters
        ----------
        C : Stiffness
            A batch of any shape.
        rtol : float, optional
            How large the part that no orthotropic tensor has may be, relative to the norm; the default is 1e-9.

        Returns
        -------
        Orthotropic
            The constants; the part within the tolerance is left out.

        Raises
        ------
        ModuliError
            If a tensor is not orthotropic in these axes, with the amount; or its constants are out of bounds.
        AdmissibilityError
            If a tensor is singular.
        """
        return cls.from_compliance(make(Stiffness, _orthotropic_part(C, rtol)).inverse())

    def __eq__(self, other: object) -> bool:
        if not isinstance(other, Orthotropic):
            return NotImplemented
        return all(np.array_equal(getattr(self, name), getattr(other, name)) for name in _NAMES)

    __hash__ = None  # type: ignore[assignment]  # equality is by value, and the values are arrays

    def __repr__(self) -> str:
        if self.shape != ():
            return f"<Orthotropic: batch shape {self.shape}>"
        return f"Orthotropic({', '.join(f'{name}={getattr(self, name).item()!r}' for name in _NAMES)})"

    def __reduce__(self) -> tuple[object, ...]:
        return _rebuild, tuple(getattr(self, name) for name in _NAMES)

    def _determinant(self) -> Inexact:
        nu21, nu31, nu32 = self.nu21, self.nu31, self.nu32
        return np.asarray(1.0 - self.nu12 * nu21 - self.nu23 * nu32 - self.nu13 * nu31 - 2.0 * nu21 * nu32 * self.nu13)


def _rebuild(*values: NDArray[np.float64]) -> Orthotropic:
    E1, E2, E3, G12, G13, G23, nu12, nu13, nu23 = values
    return Orthotropic(E1=E1, E2=E2, E3=E3, G12=G12, G13=G13, G23=G23, nu12=nu12, nu13=nu13, nu23=nu23)


def _assemble(normal: list[Inexact], coupling: list[Inexact], shear: list[Inexact]) -> Inexact:
    """Return working-form matrices from 11 22 33, from 12 13 23, and from the Mandel diagonal 23 13 12."""
    array = np.zeros((*normal[0].shape, 6, 6), np.result_type(*normal, *coupling, *shear))
    for k in range(3):
        array[..., k, k] = normal[k]
        array[..., 3 + k, 3 + k] = shear[k]
    for (i, j), value in zip(_PAIRS, coupling, strict=True):
        array[..., i - 1, j - 1] = array[..., j - 1, i - 1] = value
    return array


def _orthotropic_part(tensor: Stiffness | Compliance, rtol: float | None) -> Inexact:
    """Return the working form without what no orthotropic tensor has, which must be small."""
    array = working(tensor)
    kept = np.where(_PATTERN, array, 0.0)
    size = np.asarray(tensor.norm())
    rest = np.sqrt((np.abs(array - kept) ** 2).sum(axis=(-2, -1)))
    tolerance = read_tolerance(rtol, "rtol", array.dtype)
    excess = rest > tolerance * size
    if excess.any():
        member = tuple(int(i) for i in np.unravel_index(int(excess.argmax()), excess.shape))
        rest_of = np.where(_PATTERN, 0.0, np.abs(array[member]))
        i, j = (int(k) for k in np.unravel_index(int(rest_of.argmax()), rest_of.shape))
        labels = WORKING.ordering.labels()
        raise ModuliError(
            f"{type(tensor).__name__.lower()}{member_text(member)} is not orthotropic in these axes: what no "
            f"orthotropic tensor has makes {rest[member] / size[member]:.3g} of its norm, most of it in component "
            f"{labels[i]},{labels[j]}; the tolerance is rtol={tolerance:.2g}; turn it into its axes of symmetry "
            "(symmetry.find_axes), or take the closest orthotropic tensor (symmetry.orthotropic().project)"
        )
    return kept


_PATTERN: Final = np.eye(6, dtype=np.bool_)
_PATTERN[:3, :3] = True
_PATTERN.flags.writeable = False
