"""Published reference cases: `case("CUB-SI-HOPCROFT")`, `cases(kind="cubic")`.

The tables lie in `data/`, one file per kind. In them

- figures are text, as printed, so that their precision is kept;
- `provenance` is `seen` where inputs and results were both read at the address, and `memory` where at least one of them
  was recalled (`provenance_detail` says what was read nevertheless); a recalled case that agrees shows that the figures
  fit together, not that the source prints them;
- half a unit in the last printed place is the tolerance. `half_unit` gives it where the digits alone do not, and
  `because` says why;
- `with_inputs` adds, to first order, half a unit in the last place of every printed input. It is the tolerance where
  `needs_inputs` says that the source must have computed with more digits than it prints;
- `not_reproduced` holds printed figures that do not follow from the printed inputs, beside what follows from them. They
  serve to test that a check of consistency finds them;
- `system` names the pattern by which `matrices.voigt_matrix` completes a 6x6 matrix from the inputs.
"""

import tomllib
from collections.abc import Mapping
from dataclasses import dataclass
from decimal import Decimal
from functools import cache
from pathlib import Path
from typing import Any, Final

__all__ = ["DATA", "Case", "Departure", "Figure", "case", "cases", "half_unit_of", "kinds"]

DATA: Final = Path(__file__).parent / "data"

# Half a decimal unit is no binary number: the tolerance must not fail a figure that lies exactly on its edge.
_BINARY_SLACK: Final = 1 + 1e-9


@dataclass(frozen=True, slots=True)
class Figure:
    """A published result: as printed, with what its digits say about its accuracy."""

    printed: str
    half_unit: float
    with_inputs: float
    needs_inputs: bool
    because: str

    @property
    def value(self) -> float:
        """The number as printed."""
        return float(self.printed)

    @property
    def tolerance(self) -> float:
        """How far a result may lie from the printed number."""
        return (self.with_inputs if self.needs_inputs else self.half_unit) * _BINARY_SLACK


@dataclass(frozen=True, slots=True)
class Departure:
    """A printed figure that does not follow from the printed inputs, and what follows from them."""

    printed: str
    computed: str


@dataclass(frozen=True, slots=True)
class Case:
    """One published case; units, axes and order of the components are those of its source."""

    id: str
    kind: str
    subject: str
    source: str
    address: str
    provenance: str
    provenance_detail: str
    results: str
    units: str
    axes: str
    order: str
    system: str
    remark: str
    inputs: Mapping[str, str]
    figures: Mapping[str, Figure]
    not_reproduced: Mapping[str, Departure]

    @property
    def seen(self) -> bool:
        """Whether inputs and results were both read in print."""
        return self.provenance == "seen"

    def value(self, name: str) -> float:
        """Return an input as a number."""
        return float(self.inputs[name])

    def values(self) -> dict[str, float]:
        """Return all inputs as numbers."""
        return {name: float(text) for name, text in self.inputs.items()}

    def expected(self, name: str) -> float:
        """Return a published result as a number."""
        return self.figures[name].value

    def tolerance(self, name: str) -> float:
        """Return how far a result may lie from the published one."""
        return self.figures[name].tolerance


def case(identifier: str) -> Case:
    """Return the case with this id."""
    found = _all_cases().get(identifier)
    if found is None:
        raise KeyError(f"no reference case {identifier!r}; the tables hold {', '.join(sorted(_all_cases()))}")
    return found


def cases(kind: str | None = None) -> tuple[Case, ...]:
    """Return the cases of a kind, or all of them, in the order of the tables."""
    if kind is not None and kind not in kinds():
        raise KeyError(f"no kind of reference case {kind!r}; the kinds are {', '.join(kinds())}")
    return tuple(item for item in _all_cases().values() if kind in (None, item.kind))


def kinds() -> tuple[str, ...]:
    """Return the kinds: the names of the tables."""
    return tuple(sorted(path.stem for path in DATA.glob("*.toml")))


@cache
def _all_cases() -> Mapping[str, Case]:
    found: dict[str, Case] = {}
    for kind in kinds():
        for entry in tomllib.loads((DATA / f"{kind}.toml").read_text(encoding="utf-8"))["case"]:
            item = _read(kind, entry)
            if item.id in found:
                raise ValueError(f"the id {item.id} stands in {found[item.id].kind} and in {kind}")
            found[item.id] = item
    return found


def _read(kind: str, entry: dict[str, Any]) -> Case:
    """Make a case of a table's entry; a field that is misspelt or missing is an error."""
    figures = {name: _figure(**fields) for name, fields in entry.pop("expected", {}).items()}
    departures = {name: Departure(**fields) for name, fields in entry.pop("not_reproduced", {}).items()}
    optional: dict[str, Any] = dict.fromkeys(("address", "provenance_detail", "system", "remark"), "")
    optional["results"] = "printed"
    return Case(**(optional | entry), kind=kind, figures=figures, not_reproduced=departures)


def _figure(
    printed: str, with_inputs: str, half_unit: str = "", because: str = "", *, needs_inputs: bool = False
) -> Figure:
    half = float(half_unit) if half_unit else half_unit_of(printed)
    return Figure(printed, half, float(with_inputs), needs_inputs, because)


def half_unit_of(printed: str) -> float:
    """Return half a unit in the last place of a printed number."""
    exponent = Decimal(printed).as_tuple().exponent
    assert isinstance(exponent, int), f"{printed!r} is no finite number"
    return float(Decimal(5).scaleb(exponent - 1))
