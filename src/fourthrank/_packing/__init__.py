"""Packing and unpacking, by the rank of what is packed; `fourthrank.notation` joins the parts."""

from .matrices import MatrixPacking
from .triangles import By, TrianglePacking
from .vectors import VectorPacking
from .weights import Side

__all__ = ["By", "MatrixPacking", "Side", "TrianglePacking", "VectorPacking"]
