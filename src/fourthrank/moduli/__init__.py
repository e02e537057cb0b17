"""Elastic constants: the sets that people exchange, to and from stiffness and compliance."""

from .engineering import EngineeringConstants, engineering_constants
from .orthotropic import Orthotropic

__all__ = ["EngineeringConstants", "Orthotropic", "engineering_constants"]
