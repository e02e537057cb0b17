"""A self-describing JSON record of one quantity: what it is, how it is written, and its components bit for bit.

A record states its kind, order, shear weights, sign, unit, axes, source and uncertainty, so that its numbers mean one
thing only. They are decimals that are long enough to give back every bit in any notation: 18 digits at most, even where
a factor of sqrt 2 lies between the record and the form in which the object is held.
"""

import re
from collections.abc import Mapping
from dataclasses import dataclass
from decimal import Decimal
from json import dumps
from typing import Any, Final, TypeAlias, TypeVar, cast, overload

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ._arrays import Inexact, check_finite, read_only, take_in
from ._fourth_rank import FourthRank
from ._mandel import WORKING
from ._packing import Side
from ._record_constants import CONSTANTS
from ._record_numbers import PLAIN, factors, places, read_array, write_array
from ._record_parts import (
    check_keys,
    read_choice,
    read_notation,
    read_object,
    read_shape,
    read_words,
    write_notation,
    write_shape,
)
from ._second_rank import SecondRank
from ._strict_json import Json, excerpt, fingerprint, parse
from ._value import check_notation, make, working
from .errors import FourthRankError, RecordError
from .notation import Notation
from .tensors import Compliance, Stiffness, Strain, Stress

__all__ = ["Record", "from_json", "read", "to_json"]

KindT = TypeVar("KindT")
Uncertainty: TypeAlias = NDArray[np.float64] | Mapping[str, NDArray[np.float64]]

_FORMAT: Final = "fourthrank record"
_VERSION: Final = 1
_KEYS: Final = (
    "format", "version", "kind", "notation", "unit", "axes", "source", "numbers", "shape", "components",
    "standard_uncertainty", "checksum",
)  # fmt: skip
_NUMBERS: Final = {"real": False, "complex": True}
_CHECKSUM: Final = re.compile(r"[0-9a-f]{64}")


# The word for each kind of tensor in a record, and what its vector or the rows and columns of its matrix are.
_TENSORS: Final[dict[str, tuple[type[SecondRank] | type[FourthRank], tuple[Side, ...]]]] = {
    "stress": (Stress, ("stress",)),
    "strain": (Strain, ("strain",)),
    "stiffness": (Stiffness, ("stress", "strain")),
    "compliance": (Compliance, ("strain", "stress")),
}


@dataclass(frozen=True, slots=True, eq=False)
class Record:
    """One quantity with all that its record says of it.

    Attributes
    ----------
    quantity : Stress, Strain, Stiffness, Compliance or a set of constants from `fourthrank.moduli`
        The quantity, bit for bit as it was recorded.
    notation : Notation or None
        How the record writes the components; None for a set of constants.
    unit, axes, source : str or None
        The unit, the axes and the source in words; None where the record does not state them.
    standard_uncertainty : ndarray of float64, mapping of such, or None
        One for each component as the record writes it, or for each constant; None where the record states none.
    """

    quantity: object
    notation: Notation | None
    unit: str | None
    axes: str | None
    source: str | None
    standard_uncertainty: Uncertainty | None


def to_json(
    x: object,
    *,
    notation: Notation | None = None,
    unit: str | None = None,
    axes: str | None = None,
    source: str | None = None,
    standard_uncertainty: ArrayLike | Mapping[str, ArrayLike] | None = None,
) -> str:
    """Write one quantity as a self-describing JSON text.

    Parameters
    ----------
    x : Stress, Strain, Stiffness, Compliance or a set of constants from `fourthrank.moduli`
        The quantity, a batch of any shape, real or complex.
    notation : Notation, optional
        How to write the components of a tensor. Without one they are written as the object holds them, in Mandel form
        in the order 11 22 33 23 13 12. The record states its notation either way, and is read bit for bit either way.
    unit : str, optional
        The unit of the components, for example ``"GPa"``; ``"1"`` for strain. Without one the record says that none is
        stated. Poisson's ratios in a set of constants are pure numbers whatever the unit.
    axes : str, optional
        What the axes 1, 2, 3 are, in words.
    source : str, optional
        Where the numbers come from, in words.
    standard_uncertainty : array_like or mapping, optional
        The standard uncertainty of each component as `notation` writes it, broadcast to their shape (batch + (6,) or
        batch + (6, 6)); for a set of constants a mapping with the name of each, broadcast to the batch.

    Returns
    -------
    str
        The text; `from_json` returns an object equal to `x` in every bit.

    Raises
    ------
    RecordError
        If `x` is nothing that can be recorded, a partial ordering would lose components, an argument is out of bounds,
        or the text would be too large to be read.

    Examples
    --------
    >>> from fourthrank import Notation, Ordering, Stress, record
    >>> voigt = Notation.voigt(Ordering("11 22 33 23 13 12"))
    >>> sigma = Stress.from_vector([100.0, 0.0, 0.0, 0.0, 0.0, 20.0], voigt)
    >>> text = record.to_json(sigma, notation=voigt, unit="MPa", axes="1 along the bar", source="invented")
    >>> record.from_json(text) == sigma
    True
    """
    words = {"unit": unit, "axes": axes, "source": source}
    parts = {"format": dumps(_FORMAT), "version": str(_VERSION)}
    parts |= {key: dumps(read_words(text, key)) for key, text in words.items()}
    try:
        if isinstance(x, SecondRank | FourthRank):
            parts |= _write_tensor(x, WORKING if notation is None else notation, standard_uncertainty)
        else:
            parts |= _write_constants(x, notation, standard_uncertainty)
    except RecordError:
        raise
    except FourthRankError as error:
        raise RecordError(f"this cannot be recorded: {error}") from error
    lines = [f'"{key}": {parts[key]}' for key in _KEYS if key in parts]
    # The text is parsed for its checksum, so that none is written that is too large to be read.
    lines.append(f'"checksum": "{fingerprint(parse("{" + ",".join(lines) + "}"))}"')
    return "{\n  " + ",\n  ".join(lines) + "\n}\n"


@overload
def from_json(text: str, kind: None = None) -> object: ...
@overload
def from_json(text: str, kind: type[KindT]) -> KindT: ...
def from_json(text: str, kind: type[KindT] | None = None) -> object:
    """Read the quantity from a record; `read` tells the rest of what the record says.

    Parameters
    ----------
    text : str
        The text of a record.
    kind : type, optional
        What it must be, for example `Stiffness`; type checkers then know the result.

    Returns
    -------
    Stress, Strain, Stiffness, Compliance or a set of constants from `fourthrank.moduli`
        The quantity, equal in every bit to the one that was written.

    Raises
    ------
    RecordError
        If anything about the text is not as it must be (see `read`), or the quantity is of another kind.

    Examples
    --------
    >>> from fourthrank import Strain, record
    >>> eps = Strain.from_tensor([[1e-3, 0.0, 0.0], [0.0, -3e-4, 0.0], [0.0, 0.0, -3e-4]])
    >>> record.from_json(record.to_json(eps, unit="1"), Strain) == eps
    True
    """
    quantity = read(text).quantity
    if kind is not None and not isinstance(quantity, kind):
        raise RecordError(f"the record holds a {type(quantity).__name__}, a {kind.__name__} was asked for")
    return quantity


def read(text: str) -> Record:
    """Read a record: the quantity, and what is said of it.

    Everything is checked and nothing is evaluated. A record is refused that lacks a key or has one too many or twice;
    that is of a newer version; whose components are malformed, not finite, or not as many as its shape says; whose
    tensor lacks a symmetry; whose checksum is not that of its content; that has more than 2**26 characters, 24 levels
    of brackets, 16 axes, 10,000 characters of words, or 40 digits before or after the point of a number.

    Parameters
    ----------
    text : str
        The text of a record.

    Returns
    -------
    Record
        The quantity with notation, unit, axes, source and uncertainty. Data from a file need checking by a qualified
        engineer before they reach a structure: a checksum tells that they are unchanged, not that they are right.

    Raises
    ------
    RecordError
        If anything about the text is not as it must be; no other error comes out.

    Examples
    --------
    >>> from fourthrank import Stress, record
    >>> sigma = Stress.from_tensor([[5.0, 0.0, 0.0], [0.0, 5.0, 0.0], [0.0, 0.0, 5.0]])
    >>> record.read(record.to_json(sigma, unit="MPa", axes="any")).unit
    'MPa'
    """
    if not isinstance(text, str):  # pyright: ignore[reportUnnecessaryIsInstance]  # callers without a checker
        raise RecordError(f"a record is text, got {type(text).__name__}")
    document = read_object(parse(text), "the record")
    if document.get("format") != _FORMAT:
        raise RecordError(f"no record: 'format' must be {_FORMAT!r}, got {excerpt(document.get('format'))}")
    _check_version(document.get("version"))
    check_keys(document, _KEYS, "the record")
    _check_checksum(document)
    unit, axes, source = (read_words(document[key], key) for key in ("unit", "axes", "source"))
    batch = read_shape(document["shape"])
    is_complex = _NUMBERS[read_choice(document["numbers"], "numbers", _NUMBERS)]
    kind = read_choice(document["kind"], "kind", {**_TENSORS, **CONSTANTS})
    read_content = _read_tensor if kind in _TENSORS else _read_constants
    try:
        with np.errstate(all="ignore"):  # absurd numbers are found out by the checks of what comes out
            quantity, notation, uncertainty = read_content(kind, document, batch, is_complex)
    except RecordError:
        raise
    except FourthRankError as error:
        raise RecordError(f"the components are refused: {error}") from error
    return Record(quantity, notation, unit, axes, source, uncertainty)


def _write_tensor(x: SecondRank | FourthRank, notation: Notation, uncertainty: Any) -> dict[str, str]:
    """Return the parts of a record that depend on the quantity."""
    check_notation(notation)
    kind = next(word for word, row in _TENSORS.items() if row[0] is type(x))
    sides, where = _TENSORS[kind][1], places(notation)
    _require_complete(kind, notation)
    held = working(x)
    check_finite(held, kind, len(sides), WORKING.label_places)
    if np.delete(held, where, axis=-1).any():
        raise RecordError(
            f"the partial ordering '{notation.ordering}' has no place for components of this {kind} that are not zero: "
            "use a complete ordering"
        )
    values = held[..., where] if len(sides) == 1 else held[..., where[:, None], where]
    parts = {"kind": dumps(kind), "notation": write_notation(notation)}
    parts["components"] = write_array(values, factors(sides, notation))
    parts["standard_uncertainty"] = (
        "null" if uncertainty is None else write_array(_take_uncertainty(uncertainty, values.shape), PLAIN)
    )
    return parts | write_shape(x.shape, x.is_complex)


def _read_tensor(
    kind: str, document: dict[str, Json], batch: tuple[int, ...], is_complex: bool
) -> tuple[object, Notation, Uncertainty | None]:
    maker, sides = _TENSORS[kind]
    notation = read_notation(document["notation"])
    _require_complete(kind, notation)
    shape = batch + (notation.ordering.size,) * len(sides)
    values = read_array(document["components"], shape, is_complex, factors(sides, notation), "components")
    stated = document["standard_uncertainty"]
    uncertainty = None if stated is None else _read_uncertainty(stated, shape, "components")
    where = places(notation)
    held = np.zeros(batch + (6,) * len(sides), values.dtype)
    if issubclass(maker, SecondRank):
        held[..., where] = values
        return make(maker, held), notation, uncertainty
    held[..., where[:, None], where] = values
    # The same check as for any matrix from outside: what lacks the major symmetry by more than rounding is refused.
    quantity = maker.from_matrix(held, WORKING)
    check_finite(working(quantity), kind, 2, WORKING.label_places)
    return quantity, notation, uncertainty


def _write_constants(x: object, notation: Notation | None, uncertainty: Any) -> dict[str, str]:
    kind = next((word for word, row in CONSTANTS.items() if row.kind is type(x)), None)
    if kind is None:
        known = [row[0].__name__ for row in _TENSORS.values()] + [row.kind.__name__ for row in CONSTANTS.values()]
        raise RecordError(f"a {type(x).__name__} cannot be recorded; expected one of {', '.join(known)}")
    if notation is not None:
        raise RecordError(f"a set of constants has no notation, got notation={notation!r}")
    fields = CONSTANTS[kind].fields_of(x)
    shape, is_complex = next((field.shape, field.dtype.kind == "c") for field in fields.values())
    parts = {"kind": dumps(kind), "notation": "null", "standard_uncertainty": "null"}
    parts["components"] = _write_fields(fields)
    if uncertainty is not None:
        if not isinstance(uncertainty, Mapping) or set(cast(Mapping[str, ArrayLike], uncertainty)) != set(fields):
            raise RecordError(f"standard_uncertainty must be a mapping with the names {', '.join(fields)}")
        stated = cast(Mapping[str, ArrayLike], uncertainty)
        taken = {name: _take_uncertainty(stated[name], shape) for name in fields}
        parts["standard_uncertainty"] = _write_fields(taken)
    return parts | write_shape(shape, is_complex)


def _read_constants(
    kind: str, document: dict[str, Json], batch: tuple[int, ...], is_complex: bool
) -> tuple[object, None, Uncertainty | None]:
    row = CONSTANTS[kind]
    if document["notation"] is not None:
        raise RecordError("a set of constants has no notation; 'notation' must be null")
    components = read_object(document["components"], "components")
    names = row.choose(components)
    check_keys(components, names, "components")
    fields = {name: read_array(components[name], batch, is_complex, PLAIN, name) for name in names}
    uncertainty: dict[str, NDArray[np.float64]] | None = None
    if document["standard_uncertainty"] is not None:
        stated = read_object(document["standard_uncertainty"], "standard_uncertainty")
        check_keys(stated, names, "standard_uncertainty")
        uncertainty = {name: _read_uncertainty(stated[name], batch, name) for name in names}
    return row.build(**fields), None, uncertainty


def _write_fields(fields: Mapping[str, Inexact]) -> str:
    return "{" + ", ".join(f"{dumps(name)}: {write_array(array, PLAIN)}" for name, array in fields.items()) + "}"


def _take_uncertainty(value: ArrayLike, shape: tuple[int, ...]) -> NDArray[np.float64]:
    """Return the caller's uncertainties, one for each component."""
    array = take_in(value, "standard_uncertainty", ())
    if array.dtype.kind == "c":
        raise RecordError("standard_uncertainty must be real: one number for each component, complex ones included")
    if array.ndim > len(shape) or any(n not in (1, m) for n, m in zip(array.shape[::-1], shape[::-1], strict=False)):
        raise RecordError(f"standard_uncertainty of shape {array.shape} does not broadcast to {shape}")
    return _check_uncertainty(np.broadcast_to(array.astype(np.float64), shape), "components")


def _read_uncertainty(value: Json, shape: tuple[int, ...], name: str) -> NDArray[np.float64]:
    return read_only(
        _check_uncertainty(read_array(value, shape, False, PLAIN, f"standard uncertainty of {name}"), name)
    )


def _check_uncertainty(array: Inexact, name: str) -> NDArray[np.float64]:
    if not (array >= 0.0).all() or not np.isfinite(array).all():
        raise RecordError(f"standard uncertainty of {name}: every one must be a finite number that is not negative")
    return array


def _require_complete(kind: str, notation: Notation) -> None:
    if len(_TENSORS[kind][1]) == 2 and not notation.ordering.complete:
        raise RecordError(f"a {kind} needs all six pairs, the ordering '{notation.ordering}' is partial")


def _check_version(version: Json) -> None:
    if isinstance(version, Decimal) and version > _VERSION:
        raise RecordError(
            f"the record is of version {excerpt(version)}, this release of fourthrank reads version {_VERSION}: use a "
            "newer release"
        )
    if version != _VERSION or isinstance(version, bool):
        raise RecordError(f"version must be {_VERSION}, got {excerpt(version)}")


def _check_checksum(document: dict[str, Json]) -> None:
    stated = document["checksum"]
    if stated is None:
        return
    if not isinstance(stated, str) or not _CHECKSUM.fullmatch(stated):
        raise RecordError(f"checksum must be 64 hexadecimal digits or null, got {excerpt(stated)}")
    found = fingerprint({key: value for key, value in document.items() if key != "checksum"})
    if stated != found:
        raise RecordError(
            f"the content does not fit its checksum ({found[:8]}... and {stated[:8]}...): it was changed after it was "
            "written; if that was meant, set the checksum to null"
        )
