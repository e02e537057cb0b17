"""Admissibility: whether a tensor can be that of an elastic solid at all, and by which margin."""

from dataclasses import dataclass
from typing import Final

import numpy as np
from numpy.typing import NDArray

from .. import _mandel
from .._arrays import Inexact, member_text, read_only
from .._table import Table
from .._value import make, number_text, working
from ..errors import DataError
from ..tensors import Compliance, Stiffness, Strain

__all__ = ["Admissibility", "Inequality", "admissibility"]

_AXES: Final = ((1, 2), (1, 3), (2, 3))
_MEANING: Final = {
    "stiffness": "the smallest Kelvin modulus",
    "compliance": "the reciprocal of the largest Kelvin modulus",
}


@dataclass(frozen=True, slots=True, eq=False)
class Inequality:
    """One bound on the engineering constants, its two sides as its text reads; each array has the batch's shape."""

    text: str
    left: NDArray[np.float64]
    right: NDArray[np.float64]
    margin: NDArray[np.float64]
    """What is left to the bound, negative where it is violated; NaN where the constants do not exist."""

    @property
    def holds(self) -> NDArray[np.bool_]:
        """Whether the bound is kept."""
        return np.asarray(self.margin > 0.0)


@dataclass(frozen=True, slots=True, eq=False)
class Admissibility:
    """What `admissibility` found, for each tensor of a batch.

    The text (``str``) and the HTML show the worst batch member: the one of the smallest eigenvalue relative to the
    largest.
    """

    kind: str
    """'stiffness' or 'compliance'."""
    smallest: NDArray[np.float64]
    """The smallest eigenvalue in Mandel form: of a stiffness the smallest Kelvin modulus, of a compliance the
    reciprocal of the largest one, as long as all are positive."""
    largest: NDArray[np.float64]
    """The largest eigenvalue in Mandel form."""
    mode: Strain
    """The mode of the smallest eigenvalue, of unit norm: a strain (of a compliance, a stress of the same shape) whose
    energy is negative where the eigenvalue is."""
    inequalities: tuple[Inequality, ...]
    """The bounds on the engineering constants along the present axes, kept or not."""

    @property
    def positive_definite(self) -> NDArray[np.bool_]:
        """Whether every strain has a positive energy: the one condition that is necessary and sufficient."""
        return np.asarray(self.smallest > 0.0)

    @property
    def admissible(self) -> bool:
        """Whether the whole batch is positive definite."""
        return bool(self.positive_definite.all())

    @property
    def violated(self) -> tuple[Inequality, ...]:
        """The bounds that some batch member violates."""
        return tuple(inequality for inequality in self.inequalities if not inequality.holds.all())

    def __str__(self) -> str:
        return str(self._table()) if self.smallest.size else f"Admissibility of a {self.kind}: an empty batch"

    def _repr_html_(self) -> str:
        """Return the report as HTML."""
        return self._table()._repr_html_() if self.smallest.size else str(self)  # pyright: ignore[reportPrivateUsage]  # the notebook's name

    def _table(self) -> Table:
        member = self._worst()
        count = int(np.count_nonzero(~self.positive_definite))
        verdict = "positive definite" if self.positive_definite[member] else "NOT POSITIVE DEFINITE"
        of_batch = f"; {count} of the batch of {self.smallest.size} are not" if self.smallest.ndim else ""
        components = working(self.mode)[member]
        labels = _mandel.WORKING.ordering.labels()
        mode = ", ".join(
            f"{label} {number_text(float(component), 3)}"
            for label, component in zip(labels, components / _mandel_weights(), strict=True)
            if abs(component) > 5e-4
        )
        head = (
            f"Admissibility of a {self.kind}{member_text(member)}: {verdict}{of_batch}",
            (
                f"smallest eigenvalue {self.smallest[member]:.6g} ({_MEANING[self.kind]}), "
                f"largest {self.largest[member]:.6g}"
            ),
            f"mode of the smallest, components of unit norm: {mode}",
        )
        rows = [
            (
                inequality.text,
                (
                    number_text(float(inequality.left[member]), 5),
                    number_text(float(inequality.right[member]), 5),
                    number_text(float(inequality.margin[member]), 3),
                    "yes" if inequality.holds[member] else "VIOLATED",
                ),
            )
            for inequality in self.inequalities
        ]
        return Table(head, ("left", "right", "margin", "holds"), rows)

    def _worst(self) -> tuple[int, ...]:
        size = np.maximum(np.abs(self.largest), np.abs(self.smallest))
        relative = self.smallest / np.where(size == 0.0, 1.0, size)
        return tuple(int(i) for i in np.unravel_index(int(relative.argmin()), relative.shape))


def admissibility(C: Stiffness | Compliance) -> Admissibility:
    """Check that a tensor can be that of an elastic solid: every strain must have a positive energy.

    The necessary and sufficient condition is that all Kelvin moduli, the eigenvalues ``C_ijkl e_kl = lambda e_ij`` of
    the tensor, are positive. Beside it stand the conditions in engineering constants along the present axes,
    ``E_i > 0``, ``G_ij > 0``, ``|nu_ij| < sqrt(E_i / E_j)`` and
    ``1 - nu12 nu21 - nu23 nu32 - nu13 nu31 - 2 nu21 nu32 nu13 > 0``: for an orthotropic solid in its own axes
    they are sufficient together, for any other necessary.

    Parameters
    ----------
    C : Stiffness or Compliance
        A batch of any shape, real, in any consistent unit.

    Returns
    -------
    Admissibility
        A report with one entry for each tensor; nothing is raised for a tensor that fails.

    Raises
    ------
    DataError
        If the tensor is complex: look at its ``.real`` part (stored energy) and ``.imag`` part (loss) apart.

    References
    ----------
    Mehrabadi, M. M. and Cowin, S. C. (1990), Q. J. Mech. Appl. Math. 43, 15-41 (Kelvin moduli).
    Lempriere, B. M. (1968), AIAA J. 6, 2226-2227 (Poisson's ratios).

    Examples
    --------
    >>> import numpy as np
    >>> from fourthrank import Notation, Ordering, Stiffness
    >>> from fourthrank.assurance import admissibility
    >>> voigt = Notation.voigt(Ordering("11 22 33 23 13 12"))
    >>> report = admissibility(Stiffness.from_matrix(np.diag([2.0, 2.0, 2.0, 1.0, 1.0, -0.1]), voigt))
    >>> report.admissible, float(report.smallest), [bound.text for bound in report.violated]
    (False, -0.2, ['G12 > 0'])
    """
    if C.is_complex:
        raise DataError(
            f"admissibility takes real moduli, got a complex {type(C).__name__}: look at its .real part (stored "
            "energy) and its .imag part (loss) apart"
        )
    array = working(C)
    values, vectors = np.linalg.eigh(array)
    compliance = array if isinstance(C, Compliance) else _mandel.invert(array)[0]
    return Admissibility(
        kind=type(C).__name__.lower(),
        smallest=read_only(values[..., 0].copy()),
        largest=read_only(values[..., -1].copy()),
        mode=make(Strain, vectors[..., :, 0].copy()),
        inequalities=_inequalities(compliance),
    )


def _inequalities(S: Inexact) -> tuple[Inequality, ...]:
    """Return the bounds on the engineering constants that a compliance in the working form implies."""
    zero = np.zeros(S.shape[:-2])
    # A modulus is positive with its reciprocal; a compliance that is zero or does not exist has none.
    with np.errstate(divide="ignore", invalid="ignore"):
        E = {i: 1.0 / S[..., i - 1, i - 1] for i in (1, 2, 3)}
        G = {pair: 0.5 / S[..., place, place] for pair, place in zip(_AXES, (5, 4, 3), strict=True)}
        nu = {(i, j): -S[..., i - 1, j - 1] * E[i] for i in E for j in E if i != j}
        bounds = [Inequality(f"E{i} > 0", E[i], zero, E[i]) for i in E]
        bounds += [Inequality(f"G{i}{j} > 0", G[i, j], zero, G[i, j]) for i, j in _AXES]
        bounds += [
            _below(f"|nu{i}{j}| < sqrt(E{i} / E{j})", np.abs(nu[i, j]), np.sqrt(E[i] / E[j])) for i, j in sorted(nu)
        ]
        coupled = sum(nu[i, j] * nu[j, i] for i, j in _AXES) + 2.0 * nu[2, 1] * nu[3, 2] * nu[1, 3]
    text = "nu12 nu21 + nu23 nu32 + nu13 nu31 + 2 nu21 nu32 nu13 < 1"
    return (*bounds, _below(text, np.asarray(coupled), zero + 1.0))


def _below(text: str, left: Inexact, right: Inexact) -> Inequality:
    with np.errstate(invalid="ignore"):
        return Inequality(text, left, right, np.asarray(right - left))


def _mandel_weights() -> NDArray[np.float64]:
    return np.array([1.0 if i == j else np.sqrt(2.0) for i, j in _mandel.WORKING.ordering.pairs])
