"""Reading JSON from strangers: limits first, numbers as exact decimals, no doubled keys, one kind of error.

Nothing is evaluated and nothing is guessed. What the grammar allows but a record has no use for (NaN, hundreds of
digits, hundreds of levels) is refused before anything large is built.
"""

import hashlib
import json
import re
from collections.abc import Sequence
from decimal import Context, Decimal
from typing import Final, NoReturn, TypeAlias

from .errors import RecordError

Json: TypeAlias = "bool | str | Decimal | list[Json] | dict[str, Json] | None"

LARGEST_TEXT: Final = 2**26
"""The largest text that is read or written, in characters."""
DEEPEST: Final = 24
"""How many levels of brackets there may be."""

_STRING: Final = re.compile(r'"[^"\\]*(?:\\.[^"\\]*)*"', re.DOTALL)
_BRACKET: Final = re.compile(r"[\[\]{}]")
# Twice the digits that any double needs in any notation; exponents beyond those of doubles fail later, by value.
_NUMBER: Final = re.compile(r"-?[0-9]{1,40}(?:\.[0-9]{1,40})?(?:[eE][+-]?[0-9]{1,4})?")
_ALL_DIGITS: Final = Context(prec=100)


def parse(text: str) -> Json:
    """Return what a JSON text says, with numbers as decimals, or raise `RecordError`."""
    if len(text) > LARGEST_TEXT:
        raise RecordError(f"the text has {len(text)} characters, a record has {LARGEST_TEXT} at most")
    _check_depth(text)
    try:
        found: Json = _DECODER.decode(text)
    except json.JSONDecodeError as error:
        raise RecordError(f"no JSON: {error.msg} at line {error.lineno}, column {error.colno}") from None
    return found


def fingerprint(value: Json) -> str:
    """Return the SHA-256 of a value in canonical form: equal for equal content, however it is laid out."""
    return hashlib.sha256(_canonical(value).encode("ascii")).hexdigest()


def excerpt(value: object) -> str:
    """Return a piece of a value that is short enough for a message."""
    text = str(value) if isinstance(value, Decimal) else repr(value)
    return text if len(text) <= 40 else text[:37] + "..."


def _check_depth(text: str) -> None:
    """Count brackets outside strings: a parser that calls itself must not meet what is nested too deeply."""
    depth = 0
    for bracket in _BRACKET.findall(_STRING.sub("", text)):
        depth += 1 if bracket in "[{" else -1
        if depth > DEEPEST:
            raise RecordError(f"more than {DEEPEST} levels of brackets, a record needs fewer")


def _canonical(value: Json) -> str:
    """Write keys in order, no blanks, ASCII only, and numbers by their digits and exponent alone."""
    if isinstance(value, Decimal):
        sign, digits, exponent = value.normalize(_ALL_DIGITS).as_tuple()
        return f"{'-' * sign}{''.join(map(str, digits))}e{exponent}"
    if isinstance(value, list):
        return f"[{','.join(map(_canonical, value))}]"
    if isinstance(value, dict):
        return f"{{{','.join(f'{json.dumps(key)}:{_canonical(value[key])}' for key in sorted(value))}}}"
    return json.dumps(value)


def _read_object(pairs: Sequence[tuple[str, Json]]) -> dict[str, Json]:
    found: dict[str, Json] = {}
    for key, value in pairs:
        if key in found:
            raise RecordError(f"key {excerpt(key)} is doubled")
        found[key] = value
    return found


def _read_number(literal: str) -> Decimal:
    if _NUMBER.fullmatch(literal) is None:
        raise RecordError(
            f"number {literal[:37]}... has too many digits: 40 before and after the point and 4 in the exponent at most"
        )
    return Decimal(literal)


def _refuse_constant(name: str) -> NoReturn:
    raise RecordError(f"{name} is no number; every component must be finite")


_DECODER: Final = json.JSONDecoder(
    object_pairs_hook=_read_object, parse_int=_read_number, parse_float=_read_number, parse_constant=_refuse_constant
)
