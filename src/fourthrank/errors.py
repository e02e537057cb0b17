"""The exceptions of fourthrank: one base class, and one class for each kind of fault.

Every message says what was given, which element is at fault and by how much, what was expected, and the way on.
"""

__all__ = [
    "AdmissibilityError",
    "DataError",
    "FourthRankError",
    "ImplicitNotationError",
    "ModuliError",
    "NotationError",
    "OrderingError",
    "RecordError",
    "RotationError",
    "ShapeError",
    "SymmetryError",
]


class FourthRankError(ValueError):
    """Base of all errors that fourthrank raises on purpose."""


class OrderingError(FourthRankError):
    """A list of index pairs is no ordering, or an ordering cannot serve here."""


class NotationError(FourthRankError):
    """A notation is ill defined, or cannot serve here."""


class ImplicitNotationError(NotationError, TypeError):
    """A value object was used as a bare array, without a notation to read it in."""


class ShapeError(FourthRankError):
    """An array has the wrong shape, or batches do not broadcast."""


class DataError(FourthRankError):
    """An array holds NaN, infinities, masked elements, or something that is no number."""


class SymmetryError(FourthRankError):
    """A tensor lacks a symmetry that it must have."""


class RotationError(FourthRankError):
    """A matrix is no rotation, or vectors do not define one."""


class AdmissibilityError(FourthRankError):
    """A stiffness or compliance is singular or violates a bound that every elastic solid obeys."""


class ModuliError(FourthRankError):
    """A set of elastic constants is incomplete, contradictory or out of bounds."""


class RecordError(FourthRankError):
    """A record is malformed, incomplete, too large or of an unknown version."""
