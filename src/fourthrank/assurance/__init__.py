"""Assurance: whether data can be what it claims to be, and by which margin."""

from .admissibility import Admissibility, Inequality, admissibility

__all__ = ["Admissibility", "Inequality", "admissibility"]
