"""fourthrank: linear-elastic data of anisotropic solids, from any convention to any other, proved on the way."""

from . import assurance, moduli, record, response, rotation, symmetry
from .errors import (
    AdmissibilityError,
    DataError,
    FourthRankError,
    ImplicitNotationError,
    ModuliError,
    NotationError,
    OrderingError,
    RecordError,
    RotationError,
    ShapeError,
    SymmetryError,
)
from .notation import Notation
from .ordering import Ordering
from .tensors import Compliance, Stiffness, Strain, Stress
from .translation import Translator

__version__ = "0.1.0"

__all__ = [
    "AdmissibilityError",
    "Compliance",
    "DataError",
    "FourthRankError",
    "ImplicitNotationError",
    "ModuliError",
    "Notation",
    "NotationError",
    "Ordering",
    "OrderingError",
    "RecordError",
    "RotationError",
    "ShapeError",
    "Stiffness",
    "Strain",
    "Stress",
    "SymmetryError",
    "Translator",
    "__version__",
    "assurance",
    "moduli",
    "record",
    "response",
    "rotation",
    "symmetry",
]
