"""Elastic constants: the sets that people exchange, to and from stiffness and compliance."""

from .engineering import EngineeringConstants, engineering_constants
from .isotropic import Isotropic
from .orthotropic import Orthotropic

__all__ = ["EngineeringConstants", "Isotropic", "Orthotropic", "engineering_constants"]
