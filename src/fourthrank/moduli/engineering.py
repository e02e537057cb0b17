"""The engineering constants of any stiffness or compliance along the present axes."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from .._arrays import Inexact, read_only
from .._table import Table
from .._value import number_text, working
from ..errors import ShapeError
from ..tensors import Compliance, Stiffness

__all__ = ["EngineeringConstants", "engineering_constants"]


@dataclass(frozen=True, slots=True, eq=False)
class EngineeringConstants:
    """Young's moduli, Poisson's ratios and shear moduli along three axes, each an array of the batch's shape.

    ``nu_ij`` is minus the strain along j over the strain along i under uniaxial stress along i. Where the tensor is not
    orthotropic in these axes there are couplings besides, which these twelve numbers do not hold.
    """

    E1: NDArray[np.float64]
    E2: NDArray[np.float64]
    E3: NDArray[np.float64]
    nu12: NDArray[np.float64]
    nu21: NDArray[np.float64]
    nu13: NDArray[np.float64]
    nu31: NDArray[np.float64]
    nu23: NDArray[np.float64]
    nu32: NDArray[np.float64]
    G12: NDArray[np.float64]
    G13: NDArray[np.float64]
    G23: NDArray[np.float64]

    @property
    def shape(self) -> tuple[int, ...]:
        """The shape of the batch; () for a single material."""
        return self.E1.shape

    def table(self, *, unit: str, digits: int = 5) -> Table:
        """Return a labelled table of the constants of a single material.

        Parameters
        ----------
        unit : str
            The unit of the moduli, in words.
        digits : int
            How many significant digits to show.

        Returns
        -------
        Table
            Prints as text, and shows as HTML in notebooks.

        Raises
        ------
        ShapeError
            If the batch is not a single material.
        """
        if self.shape != ():
            raise ShapeError(
                f"a table shows a single material, the batch has shape {self.shape}: index the tensor first"
            )

        def show(*names: str) -> list[str]:
            return [f"{name} = {number_text(getattr(self, name).item(), digits)}" for name in names]

        rows = [
            (f"Young's moduli ({unit})", show("E1", "E2", "E3")),
            (f"shear moduli ({unit})", show("G12", "G13", "G23")),
            ("Poisson's ratios", show("nu12", "nu13", "nu23")),
            ("", show("nu21", "nu31", "nu32")),
        ]
        return Table(
            ("Engineering constants", "nu_ij is minus the strain along j over that along i, under stress along i"),
            (),
            rows,
        )


def engineering_constants(C: Stiffness | Compliance) -> EngineeringConstants:
    """Return the engineering constants of a tensor along the present axes.

    ``E_i = 1 / S_iiii``, ``nu_ij = -S_iijj / S_iiii`` and ``G_ij = 1 / (4 S_ijij)``: what tests of uniaxial stress and
    of pure shear stress along these axes measure, for any anisotropy.

    Parameters
    ----------
    C : Stiffness or Compliance
        A batch of any shape.

    Returns
    -------
    EngineeringConstants
        Each constant an array of the batch's shape.

    Raises
    ------
    AdmissibilityError
        If a stiffness is singular.

    References
    ----------
    Lekhnitskii, S. G. (1963), Theory of Elasticity of an Anisotropic Elastic Body, section 6.

    Examples
    --------
    >>> from fourthrank.moduli import Orthotropic, engineering_constants
    >>> wood = Orthotropic(E1=14.7, E2=1.0, E3=0.74, G12=0.94, G13=1.15, G23=0.10, nu12=0.29, nu13=0.45, nu23=0.39)
    >>> float(engineering_constants(wood.stiffness()).nu21.round(6))
    0.019728
    """
    S = working(C if isinstance(C, Compliance) else C.inverse())
    constants: dict[str, Inexact] = {f"E{i + 1}": 1.0 / S[..., i, i] for i in range(3)}
    for place, (i, j) in ((5, (0, 1)), (4, (0, 2)), (3, (1, 2))):
        constants[f"G{i + 1}{j + 1}"] = 0.5 / S[..., place, place]
        constants[f"nu{i + 1}{j + 1}"] = -S[..., i, j] / S[..., i, i]
        constants[f"nu{j + 1}{i + 1}"] = -S[..., i, j] / S[..., j, j]
    return EngineeringConstants(**{name: read_only(np.asarray(value)) for name, value in constants.items()})
