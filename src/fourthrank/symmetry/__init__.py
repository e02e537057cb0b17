"""Symmetry classes: groups, projections, distances, axes and classification."""

from .axes import AxesFit, find_axes
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
from .classification import Classification, classify
from .contractions import Contractions, contractions
from .decomposition import Decomposition, HarmonicParts, decompose, harmonic_parts
from .groups import Symmetry, from_generators
from .projection import Metric

__all__ = [
    "AxesFit",
    "Axis",
    "Classification",
    "Contractions",
    "Decomposition",
    "HarmonicParts",
    "Metric",
    "Symmetry",
    "classify",
    "contractions",
    "cubic",
    "decompose",
    "find_axes",
    "from_generators",
    "harmonic_parts",
    "isotropic",
    "monoclinic",
    "orthotropic",
    "tetragonal",
    "transversely_isotropic",
    "triclinic",
    "trigonal",
]
