"""Elastic constants: the sets that people exchange, to and from stiffness and compliance."""

from .cubic import Cubic
from .engineering import EngineeringConstants, engineering_constants
from .isotropic import Isotropic
from .orthotropic import Orthotropic
from .plane import plane_strain_stiffness, plane_stress_stiffness

__all__ = [
    "Cubic",
    "EngineeringConstants",
    "Isotropic",
    "Orthotropic",
    "engineering_constants",
    "plane_strain_stiffness",
    "plane_stress_stiffness",
]
