"""Symmetry classes: groups, projections, distances, axes and classification."""

from .classes import (
    Axis,
    cubic,
    isotropic,
    monoclinic,
    orthotropic,
    tetragonal,
    transversely_isotropic,
    triclinic,
    trigonal,
)
from .groups import Symmetry, from_generators
from .projection import Metric

__all__ = [
    "Axis",
    "Metric",
    "Symmetry",
    "cubic",
    "from_generators",
    "isotropic",
    "monoclinic",
    "orthotropic",
    "tetragonal",
    "transversely_isotropic",
    "triclinic",
    "trigonal",
]
