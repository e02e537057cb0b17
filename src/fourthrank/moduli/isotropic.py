"""The two constants of an isotropic solid, from any two of the six that people exchange."""

from collections.abc import Callable, Mapping
from typing import Final, Literal, Self, final, overload

import numpy as np
from numpy.typing import ArrayLike, NDArray

from .._arrays import Inexact, read_only
from .._frozen import Frozen
from .._value import make, working
from ..errors import ModuliError
from ..tensors import Compliance, Stiffness
from ._fields import check_class, cubic_pattern, require, take_constants

__all__ = ["Isotropic"]

_NAMES: Final = ("E", "nu", "G", "K", "lam", "M")
_WAY_ON: Final = "take the closest isotropic tensor (symmetry.isotropic().project)"

# For each pair: G, nu, 1 + nu and 1 - 2 nu, each arranged so that nothing cancels that need not. The last two stand
# by themselves since they keep their digits where nu is near -1 or 1/2.
_Base = tuple[Inexact, Inexact, Inexact, Inexact]


def _of_ratio(G: Inexact, nu: Inexact) -> _Base:
    return G, nu, 1.0 + nu, 1.0 - 2.0 * nu


def _from_E_lam(E: Inexact, lam: Inexact) -> _Base:
    root = np.sqrt(E * E + 9.0 * lam * lam + 2.0 * E * lam)
    difference = E - 3.0 * lam
    # Two forms of one root: the sum cancels where the difference is negative, the quotient where it is positive.
    with np.errstate(divide="ignore", invalid="ignore"):
        G = np.where(np.real(difference) > 0.0, (root + difference) / 4.0, 2.0 * E * lam / (root - difference))
    return G, 2.0 * lam / (E + lam + root), E / (2.0 * G), 4.0 * G / (E + lam + root)


def _from_E_M(E: Inexact, M: Inexact, sign: int) -> _Base:
    root = np.sqrt((E - M) * (E - 9.0 * M))
    # The branch of the larger nu has the smaller G; 8 G = 3 M + E -+ root and the product of both is E M.
    larger = (3.0 * M + E + root) / 8.0
    G = larger if sign < 0 else E * M / (4.0 * larger)
    nu = (M - 2.0 * G) / (2.0 * (M - G))
    return G, nu, E / (2.0 * G), G / (M - G)


_BASES: Final[Mapping[tuple[str, str], Callable[[Inexact, Inexact], _Base]]] = {
    ("E", "nu"): lambda E, nu: _of_ratio(0.5 * (E / (1.0 + nu)), nu),
    ("E", "G"): lambda E, G: (G, (E - 2.0 * G) / (2.0 * G), E / (2.0 * G), (3.0 * G - E) / G),
    ("E", "K"): lambda E, K: (
        3.0 * K * (E / (9.0 * K - E)), (3.0 * K - E) / (6.0 * K), (9.0 * K - E) / (6.0 * K), E / (3.0 * K),
    ),
    ("E", "lam"): _from_E_lam,
    ("nu", "G"): lambda nu, G: _of_ratio(G, nu),
    ("nu", "K"): lambda nu, K: _of_ratio(1.5 * K * ((1.0 - 2.0 * nu) / (1.0 + nu)), nu),
    ("nu", "lam"): lambda nu, lam: _of_ratio(0.5 * lam * ((1.0 - 2.0 * nu) / nu), nu),
    ("nu", "M"): lambda nu, M: _of_ratio(0.5 * M * ((1.0 - 2.0 * nu) / (1.0 - nu)), nu),
    ("G", "K"): lambda G, K: (
        G, (3.0 * K - 2.0 * G) / (2.0 * (3.0 * K + G)), 4.5 * (K / (3.0 * K + G)), 3.0 * (G / (3.0 * K + G)),
    ),
    ("G", "lam"): lambda G, lam: (
        G, 0.5 * (lam / (lam + G)), 0.5 * ((3.0 * lam + 2.0 * G) / (lam + G)), G / (lam + G),
    ),
    ("G", "M"): lambda G, M: (
        G, 0.5 * ((M - 2.0 * G) / (M - G)), 0.5 * ((3.0 * M - 4.0 * G) / (M - G)), G / (M - G),
    ),
    ("K", "lam"): lambda K, lam: (
        1.5 * (K - lam), lam / (3.0 * K - lam), 3.0 * (K / (3.0 * K - lam)), 3.0 * ((K - lam) / (3.0 * K - lam)),
    ),
    ("K", "M"): lambda K, M: (
        0.75 * (M - K), (3.0 * K - M) / (3.0 * K + M), 6.0 * (K / (3.0 * K + M)), 3.0 * ((M - K) / (3.0 * K + M)),
    ),
    ("lam", "M"): lambda lam, M: (
        0.5 * (M - lam), lam / (M + lam), (M + 2.0 * lam) / (M + lam), (M - lam) / (M + lam),
    ),
}  # fmt: skip


@final
class Isotropic(Frozen):
    """The elastic constants of an isotropic solid; made by `from_two`.

    Six constants, any two of which give the others: Young's modulus E, Poisson's ratio nu, the shear modulus G, the
    bulk modulus K, Lame's first constant lam and the P-wave modulus M. The stiffness is
    ``C_ijkl = lam d_ij d_kl + G (d_ik d_jl + d_il d_jk)``. At the limit of incompressibility K, lam and M are infinite.

    Examples
    --------
    >>> from fourthrank.moduli import Isotropic
    >>> steel = Isotropic.from_two(E=210.0, nu=0.3)
    >>> round(float(steel.G), 2), round(float(steel.K), 2)
    (80.77, 175.0)
    """

    __slots__ = _NAMES

    E: NDArray[np.float64]
    nu: NDArray[np.float64]
    G: NDArray[np.float64]
    K: NDArray[np.float64]
    lam: NDArray[np.float64]
    M: NDArray[np.float64]

    # fmt: off
    @overload
    @classmethod
    def from_two(cls, *, E: ArrayLike, nu: ArrayLike) -> Self: ...
    @overload
    @classmethod
    def from_two(cls, *, E: ArrayLike, G: ArrayLike) -> Self: ...
    @overload
    @classmethod
    def from_two(cls, *, E: ArrayLike, K: ArrayLike) -> Self: ...
    @overload
    @classmethod
    def from_two(cls, *, E: ArrayLike, lam: ArrayLike) -> Self: ...
    @overload
    @classmethod
    def from_two(cls, *, E: ArrayLike, M: ArrayLike, branch: Literal["larger nu", "smaller nu"]) -> Self: ...
    @overload
    @classmethod
    def from_two(cls, *, nu: ArrayLike, G: ArrayLike) -> Self: ...
    @overload
    @classmethod
    def from_two(cls, *, nu: ArrayLike, K: ArrayLike) -> Self: ...
    @overload
    @classmethod
    def from_two(cls, *, nu: ArrayLike, lam: ArrayLike) -> Self: ...
    @overload
    @classmethod
    def from_two(cls, *, nu: ArrayLike, M: ArrayLike) -> Self: ...
    @overload
    @classmethod
    def from_two(cls, *, G: ArrayLike, K: ArrayLike) -> Self: ...
    @overload
    @classmethod
    def from_two(cls, *, G: ArrayLike, lam: ArrayLike) -> Self: ...
    @overload
    @classmethod
    def from_two(cls, *, G: ArrayLike, M: ArrayLike) -> Self: ...
    @overload
    @classmethod
    def from_two(cls, *, K: ArrayLike, lam: ArrayLike) -> Self: ...
    @overload
    @classmethod
    def from_two(cls, *, K: ArrayLike, M: ArrayLike) -> Self: ...
    @overload
    @classmethod
    def from_two(cls, *, lam: ArrayLike, M: ArrayLike) -> Self: ...
    # fmt: on
    @classmethod
    def from_two(
        cls,
        *,
        E: ArrayLike | None = None,
        nu: ArrayLike | None = None,
        G: ArrayLike | None = None,
        K: ArrayLike | None = None,
        lam: ArrayLike | None = None,
        M: ArrayLike | None = None,
        branch: Literal["larger nu", "smaller nu"] | None = None,
    ) -> Self:
        """Return the constants from two of them.

        Parameters
        ----------
        E, nu, G, K, lam, M : array_like, shape (...)
            Exactly two, in any consistent unit; batches broadcast.
        branch : {"larger nu", "smaller nu"}
            For E and M only, and needed there: two solids share them,
            ``nu = (E - M +- sqrt((E - M) (E - 9 M))) / (4 M)``.

        Returns
        -------
        Isotropic
            The two given constants are kept as they are. The others have a relative error of a few units in the last
            place times the condition number of the map, which is large where differences of the given constants
            matter: G and E near 3 G, for example, leave few digits of K.

        Raises
        ------
        ModuliError
            If not exactly two are given, or no stable solid has them: E, G, K and M must be positive and
            ``-1 < nu <= 1/2``. Of complex constants the real parts of the moduli must be positive.
        ShapeError, DataError
            If the batches do not broadcast, or something is not finite.

        References
        ----------
        Mavko, G., Mukerji, T. and Dvorkin, J. (2009), The Rock Physics Handbook, 2nd ed., section 2.2.

        Examples
        --------
        >>> from fourthrank.moduli import Isotropic
        >>> float(Isotropic.from_two(K=160.0, G=80.0).E.round(3))
        205.714
        """
        symbols = {"E": E, "nu": nu, "G": G, "K": K, "lam": lam, "M": M}
        given = {name: value for name, value in symbols.items() if value is not None}
        if len(given) != 2:
            raise ModuliError(
                f"exactly two of {', '.join(_NAMES)} are needed, got {', '.join(given) or 'none'}: two fix the others"
            )
        fields = take_constants(given)
        for name, value in fields.items():
            if name in "EGKM":
                require(np.real(value) > 0.0, name, value, "positive", "check its sign and its unit")
        first, second = fields
        with np.errstate(divide="ignore", invalid="ignore"):
            if (first, second) == ("E", "M"):
                base = _from_E_M(fields["E"], fields["M"], _read_branch(branch, fields["E"], fields["M"]))
            elif branch is not None:
                raise ModuliError(f"branch is for the pair E, M, which has two solutions; {first}, {second} has one")
            else:
                base = _BASES[first, second](fields[first], fields[second])
        _check_base(base, fields)
        return cls._of_base(base, fields)

    @classmethod
    def from_stiffness(cls, C: Stiffness, *, rtol: float | None = None) -> Self:
        """Return the constants of an isotropic stiffness.

        Parameters
        ----------
        C : Stiffness
            A batch of any shape.
        rtol : float, optional
            How far the tensor may be from an isotropic one, relative to its norm; the default is 1e-9.

        Returns
        -------
        Isotropic
            G from the shear components, lam from the coupling of normal components.

        Raises
        ------
        ModuliError
            If a tensor is not isotropic, with the amount, or no stable solid has its constants.
        """
        array = working(C)
        G = (array[..., 3, 3] + array[..., 4, 4] + array[..., 5, 5]) / 6.0
        lam = (array[..., 0, 1] + array[..., 0, 2] + array[..., 1, 2]) / 3.0
        found = cls.from_two(G=G, lam=lam)
        check_class(C, working(found.stiffness()), rtol, "isotropic", _WAY_ON)
        return found

    @classmethod
    def from_compliance(cls, S: Compliance, *, rtol: float | None = None) -> Self:
        """Return the constants of an isotropic compliance, also at the limit of incompressibility.

        Parameters
        ----------
        S : Compliance
            A batch of any shape.
        rtol : float, optional
            How far the tensor may be from an isotropic one, relative to its norm; the default is 1e-9.

        Returns
        -------
        Isotropic
            E from the normal components, nu from their coupling.

        Raises
        ------
        ModuliError
            If a tensor is not isotropic, with the amount, or no stable solid has its constants.
        """
        array = working(S)
        E = 3.0 / (array[..., 0, 0] + array[..., 1, 1] + array[..., 2, 2])
        nu = -E * (array[..., 0, 1] + array[..., 0, 2] + array[..., 1, 2]) / 3.0
        found = cls.from_two(E=E, nu=nu)
        check_class(S, working(found.compliance()), rtol, "isotropic", _WAY_ON)
        return found

    @property
    def shape(self) -> tuple[int, ...]:
        """The shape of the batch; () for a single material."""
        return self.E.shape

    def stiffness(self) -> Stiffness:
        """Return the stiffness ``C_ijkl = lam d_ij d_kl + G (d_ik d_jl + d_il d_jk)``.

        Returns
        -------
        Stiffness
            A batch of the shape of the constants.

        Raises
        ------
        ModuliError
            If a solid is incompressible: it has a compliance() and no stiffness.
        """
        require(
            np.isfinite(self.K), "K", self.K, "finite", "an incompressible solid has a compliance() and no stiffness"
        )
        return make(Stiffness, cubic_pattern(self.M, self.lam, 2.0 * self.G))

    def compliance(self) -> Compliance:
        """Return the compliance: ``S_1111 = 1 / E``, ``S_1122 = -nu / E``, ``S_1212 = 1 / (4 G)``.

        Returns
        -------
        Compliance
            A batch of the shape of the constants, in the inverse unit.
        """
        return make(Compliance, cubic_pattern(1.0 / self.E, -self.nu / self.E, 0.5 / self.G))

    def __eq__(self, other: object) -> bool:
        if not isinstance(other, Isotropic):
            return NotImplemented
        return all(np.array_equal(getattr(self, name), getattr(other, name)) for name in _NAMES)

    __hash__ = None  # type: ignore[assignment]  # equality is by value, and the values are arrays

    def __repr__(self) -> str:
        if self.shape != ():
            return f"<Isotropic: batch shape {self.shape}>"
        return f"<Isotropic: {', '.join(f'{name} {getattr(self, name).item():.6g}' for name in _NAMES)}>"

    def __reduce__(self) -> tuple[object, ...]:
        return _rebuild, tuple(getattr(self, name) for name in _NAMES)

    @classmethod
    def _of_base(cls, base: _Base, fields: dict[str, Inexact]) -> Self:
        G, nu, plus, minus = base
        with np.errstate(divide="ignore", invalid="ignore"):
            every = {
                "E": 2.0 * G * plus,
                "nu": nu,
                "G": G,
                "K": (2.0 / 3.0) * G * plus / minus,
                "lam": 2.0 * G * nu / minus,
                "M": G * (1.0 + minus) / minus,
            }
        self = object.__new__(cls)
        for name, value in (every | fields).items():
            object.__setattr__(self, name, read_only(np.asarray(value)))
        return self


def _rebuild(*values: NDArray[np.float64]) -> Isotropic:
    self = object.__new__(Isotropic)
    for name, value in zip(_NAMES, values, strict=True):
        object.__setattr__(self, name, read_only(np.asarray(value)))
    return self


def _read_branch(branch: str | None, E: Inexact, M: Inexact) -> int:
    if branch not in ("larger nu", "smaller nu"):
        raise ModuliError(
            "E and M are shared by two solids of different nu, since M(nu) at fixed E falls and rises again: say "
            f"which is meant, branch='larger nu' or branch='smaller nu'; got branch={branch!r}"
        )
    require(np.real(E) <= np.real(M), "E", E, "at most M", "no stable solid has a larger E")
    return 1 if branch == "larger nu" else -1


def _check_base(base: _Base, fields: Mapping[str, Inexact]) -> None:
    """Raise `ModuliError` where no stable solid has the given pair."""
    G, nu, plus, minus = base
    text = " and ".join(fields)
    determined = np.isfinite(G) & np.isfinite(nu)
    require(determined, "G", np.asarray(G), f"determined by {text}", "nu = 0 and lam = 0 leave it open")
    require(np.real(G) > 0.0, "G", np.asarray(G), "positive", f"it follows from {text}: check both")
    if np.isrealobj(nu):
        holds = (plus > 0.0) & (minus >= 0.0)
        require(holds, "nu", np.asarray(nu), "in -1 < nu <= 1/2", f"for positive energy; it follows from {text}")
