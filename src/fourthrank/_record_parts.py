"""The parts of a record that are not its numbers: notation, shape, words, and the members that it must have."""

import math
import re
from collections.abc import Collection, Mapping
from decimal import Decimal
from json import dumps
from typing import Final

from ._strict_json import Json, excerpt
from .errors import FourthRankError, RecordError
from .notation import Notation
from .ordering import Ordering

_NOTATION_KEYS: Final = ("order", "stress_shear", "strain_shear", "positive")
_SIGNS: Final = {"tension": False, "compression": True}
_LONGEST_WORDS: Final = 10_000
_MOST_AXES: Final = 16
_LARGEST_BATCH: Final = 2**30

# Weights that stand for roots are written as what they stand for, others as the shortest decimal.
_ROOTS: Final = {"sqrt(2)": 2.0**0.5, "sqrt(1/2)": 0.5**0.5, "sqrt(8)": 2.0 * 2.0**0.5}
_ROOT_NAMES: Final = {weight: name for name, weight in _ROOTS.items()}
_LABEL: Final = re.compile("[123]{2}")
_WEIGHT: Final = re.compile(r"[0-9]{1,20}(\.[0-9]{1,20})?(e[+-]?[0-9]{1,3})?")


def write_shape(batch: tuple[int, ...], is_complex: bool) -> dict[str, str]:
    _check_batch(batch)
    return {"numbers": dumps("complex" if is_complex else "real"), "shape": dumps(list(batch))}


def read_shape(value: Json) -> tuple[int, ...]:
    if not isinstance(value, list):
        raise RecordError(f"shape must be a list of lengths, got {excerpt(value)}")
    batch: list[int] = []
    for length in value:
        if not isinstance(length, Decimal) or not 0 <= length <= _LARGEST_BATCH or length != int(length):
            raise RecordError(f"shape must be a list of whole numbers from 0 to {_LARGEST_BATCH}, got {excerpt(value)}")
        batch.append(int(length))
    _check_batch(tuple(batch))
    return tuple(batch)


def _check_batch(batch: tuple[int, ...]) -> None:
    """Refuse shapes that numpy could not take; an empty batch may have large lengths besides the zero."""
    if len(batch) > _MOST_AXES:
        raise RecordError(f"a batch may have {_MOST_AXES} axes, got {len(batch)}")
    if math.prod(max(length, 1) for length in batch) > _LARGEST_BATCH:
        raise RecordError(f"a batch may have {_LARGEST_BATCH} members, got the shape {batch}")


def write_notation(notation: Notation) -> str:
    order = dumps(list(notation.ordering.labels()))
    weights = (notation.stress_shear, notation.strain_shear)
    stress, strain = (dumps(_ROOT_NAMES.get(weight, repr(weight).removesuffix(".0"))) for weight in weights)
    positive = dumps("compression" if notation.compression_positive else "tension")
    return f'{{"order": {order}, "stress_shear": {stress}, "strain_shear": {strain}, "positive": {positive}}}'


def read_notation(value: Json) -> Notation:
    stated = read_object(value, "notation")
    check_keys(stated, _NOTATION_KEYS, "notation")
    order = stated["order"]
    labels = [label for label in order if isinstance(label, str)] if isinstance(order, list) else []
    if not isinstance(order, list) or len(labels) != len(order) or not all(map(_LABEL.fullmatch, labels)):
        raise RecordError(f"order must be a list of pairs such as '11' and '23', got {excerpt(order)}")
    weights = [_read_weight(stated[key], key) for key in ("stress_shear", "strain_shear")]
    compression = _SIGNS[read_choice(stated["positive"], "positive", _SIGNS)]
    try:
        ordering = Ordering(" ".join(labels))
        return Notation(ordering, stress_shear=weights[0], strain_shear=weights[1], compression_positive=compression)
    except FourthRankError as error:
        raise RecordError(f"no notation: {error}") from error


def _read_weight(value: Json, name: str) -> float:
    if isinstance(value, str) and (value in _ROOTS or _WEIGHT.fullmatch(value)):
        return _ROOTS[value] if value in _ROOTS else float(value)
    raise RecordError(f"{name} must be text: a decimal such as '2' or one of {', '.join(_ROOTS)}, got {excerpt(value)}")


def check_keys(found: Mapping[str, Json], expected: Collection[str], name: str) -> None:
    missing = [key for key in expected if key not in found]
    unknown = [excerpt(key) for key in found if key not in expected]
    if missing or unknown:
        faults = [f"lacks {', '.join(missing)}"] * bool(missing) + [
            f"has unknown keys {', '.join(unknown[:5])}"
        ] * bool(unknown)
        raise RecordError(f"{name} {' and '.join(faults)}")


def read_object(value: Json, name: str) -> dict[str, Json]:
    if not isinstance(value, dict):
        raise RecordError(f"{name} must be an object with named members, got {excerpt(value)}")
    return value


def read_choice(value: Json, name: str, options: Collection[str]) -> str:
    if not isinstance(value, str) or value not in options:
        raise RecordError(f"{name} must be one of {', '.join(options)}, got {excerpt(value)}")
    return value


def read_words(value: Json, name: str) -> str | None:
    """Return text in words, which is None where nothing is stated."""
    if value is None:
        return None
    if not isinstance(value, str) or not value.strip() or len(value) > _LONGEST_WORDS:
        raise RecordError(f"{name} must be text of 1 to {_LONGEST_WORDS} characters or null, got {excerpt(value)}")
    return value
