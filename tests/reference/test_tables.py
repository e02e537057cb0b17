"""The reference tables are sound: every figure has a source, and a tolerance that its digits justify."""

import dataclasses
import re

import pytest

from tests.reference import Case, case, cases, half_unit_of, kinds

each_case = pytest.mark.parametrize("item", cases(), ids=lambda item: item.id)


def test_all_tables_are_read_and_no_id_stands_twice() -> None:
    """102 cases with results in twelve kinds, and fifteen materials without."""
    assert len(cases()) == len({item.id for item in cases()}) == 117
    assert len(kinds()) == 13
    assert [len(item.figures) for item in cases("materials")] == [0] * 15
    assert sum(len(cases(kind)) for kind in kinds()) == len(cases())
    assert len([item for item in cases() if item.seen and item.kind != "materials"]) == 34


@each_case
def test_case_names_its_source_and_says_what_was_seen(item: Case) -> None:
    """A citation with words and figures or a name, a provenance, units, axes and the order of the components."""
    assert re.search(r"[A-Za-z]{3}", item.source)
    assert item.provenance in {"seen", "memory"}
    assert item.results in {"printed", "derived from the printed inputs", "a published formula, evaluated here"}
    assert item.subject
    assert item.units
    assert item.axes
    assert re.fullmatch(r"[1-3LRT]{2}( [1-3LRT]{2}){2,5}", item.order)


@each_case
def test_every_figure_is_a_number_and_its_half_unit_follows_from_its_digits(item: Case) -> None:
    """A half unit may differ from the printed digits only where the table says why."""
    assert item.inputs
    assert item.figures or item.not_reproduced or item.kind == "materials"
    for name in item.inputs:
        assert item.value(name) == item.values()[name]
    for name, figure in item.figures.items():
        assert item.expected(name) == float(figure.printed)
        assert 0 < figure.half_unit <= figure.with_inputs * (1 + 1e-2), name  # with_inputs is given to three digits
        assert (figure.half_unit != half_unit_of(figure.printed)) == bool(figure.because), name
        wanted = figure.with_inputs if figure.needs_inputs else figure.half_unit
        assert item.tolerance(name) == pytest.approx(wanted)


@each_case
def test_figure_that_is_not_reproduced_lies_outside_its_half_unit(item: Case) -> None:
    """A departure is one that rounding cannot explain, and is never expected as well."""
    assert not set(item.not_reproduced) & set(item.figures)
    for departure in item.not_reproduced.values():
        assert abs(float(departure.printed) - float(departure.computed)) > half_unit_of(departure.printed)


@pytest.mark.parametrize(
    ("printed", "half"), [("130", 0.5), ("-2.14", 0.005), ("1.0", 0.05), ("3.0e-2", 0.0005), ("3e2", 50.0), ("0", 0.5)]
)
def test_half_unit_is_half_of_the_last_printed_place(printed: str, half: float) -> None:
    """Zeros after the point are digits; so are those before it unless an exponent takes them away."""
    assert half_unit_of(printed) == half


def test_loader_gives_values_tolerances_and_departures() -> None:
    """One case by hand: silicon by Hopcroft, Nix & Kenny 2010."""
    silicon = case("CUB-SI-HOPCROFT")
    assert silicon.value("c11") == 165.7
    assert silicon.expected("E110") == 169
    assert silicon.tolerance("E110") == pytest.approx(0.5)
    assert silicon.not_reproduced["nu_110_1m10"].printed == "0.064"
    assert "Hopcroft" in silicon.source
    aluminium = case("CUB-HERTZBERG-AL")  # its stiffness follows from more digits than are printed
    assert aluminium.tolerance("c11") == pytest.approx(0.276)
    with pytest.raises(dataclasses.FrozenInstanceError):
        silicon.units = "psi"  # type: ignore[misc]


def test_unknown_case_and_kind_are_errors_that_list_the_known_ones() -> None:
    """A misspelt id must not pass for an empty table."""
    with pytest.raises(KeyError, match="CUB-SI-HOPCROFT"):
        case("CUB-SI")
    with pytest.raises(KeyError, match="isotropic"):
        cases("glass")
