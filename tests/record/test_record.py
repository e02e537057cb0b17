"""Records: what is written is read bit for bit, everything else is refused with one kind of error."""

import json
import random
import time
from decimal import Decimal
from pathlib import Path
from typing import Any, Literal

import jsonschema
import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from numpy.typing import NDArray

from fourthrank import Compliance, Notation, Ordering, Stiffness, Strain, Stress, errors, record
from fourthrank._record_constants import CONSTANTS as CONSTANT_KINDS
from fourthrank._value import working
from fourthrank.moduli import Cubic, Isotropic, Orthotropic
from tests import strategies as shared

ROOT = Path(__file__).resolve().parents[2]
SCHEMA = json.loads((ROOT / "docs" / "record.schema.json").read_text(encoding="utf-8"))
VALIDATOR: Any = jsonschema.Draft202012Validator(SCHEMA)
VOIGT = Notation.voigt(Ordering("11 22 33 23 13 12"))
MANDEL = Notation.mandel(Ordering("11 22 33 23 13 12"))
SECOND: tuple[type[Stress] | type[Strain], ...] = (Stress, Strain)
FOURTH: tuple[type[Stiffness] | type[Compliance], ...] = (Stiffness, Compliance)
# The wear of doubles: tiny, huge, subnormal, zero of either sign, one bit beside a power of two.
EDGES = [0.0, -0.0, 5e-324, 2.2250738585072014e-308, 1e-300, 1.0, 1.0000000000000002, 0.1, 1e22, 8.9e307, -3.5]

Constants = Cubic | Isotropic | Orthotropic
Any4 = Stress | Strain | Stiffness | Compliance


def quantity(rng: np.random.Generator, kind: type[Any4], batch: tuple[int, ...], is_complex: bool) -> Any4:
    """Return an object of a kind with random components of very different size, some of them special."""
    dtype = np.complex128 if is_complex else np.float64
    array = shared.random_array(rng, (*batch, 6) if kind in SECOND else (*batch, 6, 6), dtype)
    array = np.asarray(array * 10.0 ** rng.integers(-20, 20, array.shape))
    if rng.random() < 0.5:
        chosen = rng.random(array.shape) < 0.3
        array[chosen] = rng.choice(EDGES, int(chosen.sum()))
    if issubclass(kind, Stress | Strain):
        return kind.from_vector(array, MANDEL)
    return kind.from_matrix(np.triu(array) + np.triu(array, 1).swapaxes(-1, -2), MANDEL)


def same_bits(first: Any4, second: object) -> bool:
    """Tell whether two objects hold the same bytes, signs of zeros included."""
    assert isinstance(second, type(first))
    one, other = working(first), working(second)
    return one.shape == other.shape and one.dtype == other.dtype and one.tobytes() == other.tobytes()


@given(shared.generators, st.sampled_from((*SECOND, *FOURTH)), shared.batch_shapes, st.booleans(), shared.notations())
def test_what_is_written_is_read_bit_for_bit_in_any_notation(
    rng: np.random.Generator, kind: type[Any4], batch: tuple[int, ...], is_complex: bool, notation: Notation
) -> None:
    """A factor of sqrt 2 between record and held form loses no bit; the text fits the schema; all is read back."""
    x = quantity(rng, kind, batch, is_complex)
    text = record.to_json(x, notation=notation, unit="GPa", axes="1 along [100]", source="invented")
    assert same_bits(x, record.from_json(text))
    VALIDATOR.validate(json.loads(text))
    found = record.read(text)
    assert found.notation == notation
    assert (found.unit, found.axes, found.source, found.standard_uncertainty) == (
        "GPa",
        "1 along [100]",
        "invented",
        None,
    )


@given(shared.generators, st.sampled_from(SECOND), shared.partial_orderings)
def test_plane_vectors_are_recorded_in_partial_orderings(
    rng: np.random.Generator, kind: type[Stress] | type[Strain], ordering: Ordering
) -> None:
    """Components that the ordering lacks are zero when they are read."""
    notation = Notation.mandel(ordering)
    x = kind.from_vector(rng.standard_normal((3, ordering.size)), notation)
    assert same_bits(x, record.from_json(record.to_json(x, notation=notation)))


@pytest.mark.parametrize("ordering", ["11 22 12", "11 22 33 12"])
def test_a_partial_ordering_that_would_lose_a_component_is_refused(ordering: str) -> None:
    """Neither a shear component nor, with three pairs, the third normal component is dropped silently."""
    notation = Notation.voigt(Ordering(ordering))
    x = Stress.from_vector([1.0, 2.0, 3.0, 0.0, 0.0, 4.0], VOIGT)
    if ordering == "11 22 12":
        with pytest.raises(errors.RecordError, match="no place for components of this stress"):
            record.to_json(x, notation=notation)
    else:
        assert record.from_json(record.to_json(x, notation=notation)) == x
    y = Stress.from_vector([1.0, 2.0, 0.0, 5.0, 0.0, 4.0], VOIGT)
    with pytest.raises(errors.RecordError, match="no place"):
        record.to_json(y, notation=notation)


@given(st.floats(allow_nan=False, allow_infinity=False, width=64))
def test_every_double_survives_every_factor(value: float) -> None:
    """Any finite double, in any place of any family, comes back with its sign and its last bit."""
    x = Strain.from_vector([value] * 6, MANDEL)
    for notation in (VOIGT, Notation.tensorial(Ordering("12 13 23 33 22 11"), compression_positive=True)):
        assert same_bits(x, record.from_json(record.to_json(x, notation=notation)))


def test_the_components_are_those_of_the_notation() -> None:
    """A program that reads the file as plain JSON finds the published numbers of silicon, in GPa, in its own order.

    Hopcroft, M. A., Nix, W. D. and Kenny, T. W. (2010), J. Microelectromech. Syst. 19, 229-238: c11 165.7, c12 63.9,
    c44 79.6.
    """
    order = Ordering("11 22 33 12 23 13")
    matrix = np.diag([165.7 - 63.9] * 3 + [79.6] * 3)
    matrix[:3, :3] += 63.9
    C = Stiffness.from_matrix(matrix, Notation.voigt(order))
    document = json.loads(record.to_json(C, notation=Notation.voigt(order), unit="GPa"))
    np.testing.assert_array_max_ulp(np.array(document["components"]), matrix, maxulp=1)
    assert document["notation"] == {
        "order": ["11", "22", "33", "12", "23", "13"], "stress_shear": "1", "strain_shear": "2", "positive": "tension",
    }  # fmt: skip
    held = json.loads(record.to_json(C))
    assert (held["notation"]["stress_shear"], held["notation"]["strain_shear"]) == ("sqrt(2)", "sqrt(2)")
    np.testing.assert_array_max_ulp(np.diag(held["components"])[3:], np.array([159.2] * 3), maxulp=1)


@pytest.mark.parametrize("weight", [2.0**0.5, 0.5**0.5, 8.0**0.5, 0.3, 1e-7, 12345.678901234567])
def test_weights_are_written_exactly(weight: float) -> None:
    """A weight that stands for a root is written as that root, another by its shortest decimal."""
    notation = Notation(Ordering("11 22 33 23 13 12"), stress_shear=weight, strain_shear=2.0, compression_positive=True)
    x = Stress.from_vector([1.0, 2.0, 3.0, 4.0, 5.0, 6.0], VOIGT)
    text = record.to_json(x, notation=notation)
    VALIDATOR.validate(json.loads(text))
    assert record.read(text).notation == notation
    assert record.from_json(text) == x


CONSTANTS: list[Constants] = [
    Isotropic.from_two(E=210.0, nu=0.3),
    Isotropic.from_two(K=160.0, G=80.0),
    Isotropic.from_two(nu=0.5, G=[1.0, 2.0]),  # incompressible: three of the six are infinite
    Isotropic.from_two(lam=[[0.7], [1.3]], M=[[5.1, 7.7]]),
    Isotropic.from_two(E=100.0 + 3.0j, nu=0.3),
    Isotropic.from_two(K=np.zeros((0, 2)) + 1.0, G=1.0),
    Cubic(C11=[168.4, 165.7], C12=[121.4, 63.9], C44=75.4),
    Orthotropic(E1=155.0, E2=12.1, E3=12.1, G12=4.4, G13=4.4, G23=3.2, nu12=0.248, nu13=0.248, nu23=[0.458, 0.3]),
]


@pytest.mark.parametrize("x", CONSTANTS, ids=lambda x: f"{type(x).__name__}{x.shape}")
def test_sets_of_constants_are_read_with_all_fields_equal(x: Constants) -> None:
    """Whichever two constants a solid was made of, all six come back, the derived ones to the last bit."""
    text = record.to_json(x, unit="GPa")
    VALIDATOR.validate(json.loads(text))
    assert record.from_json(text) == x
    assert record.read(text).notation is None


def test_the_schema_lists_the_kinds_that_are_read() -> None:
    """A class that is added to the table must be added to the schema as well."""
    assert set(SCHEMA["properties"]["kind"]["enum"]) == {"stress", "strain", "stiffness", "compliance", *CONSTANT_KINDS}


def _with(text: str, **changes: object) -> str:
    """Return a record with some members replaced and no checksum; `...` removes a member."""
    document: dict[str, object] = json.loads(text) | {"checksum": None} | changes
    return json.dumps({key: value for key, value in document.items() if value is not ...})


SIGMA = Stress.from_vector([1.0, 2.0, 3.0, 4.0, 5.0, 6.0], VOIGT)
TEXT = record.to_json(SIGMA, notation=VOIGT, unit="MPa")
C_TEXT = record.to_json(Stiffness.from_matrix(np.eye(6), VOIGT), notation=VOIGT)
E_TEXT = record.to_json(Isotropic.from_two(E=1.0, nu=0.3))
EM_TEXT = _with(E_TEXT, components={"E": 100.0, "M": 950.0, "nu": 0.2})
NOTATION: dict[str, object] = json.loads(TEXT)["notation"]


def _deep(levels: int) -> str:
    return "[" * levels + "]" * levels


REFUSED = {
    "not text": (b"{}", "a record is text, got bytes"),
    "not JSON": (TEXT[:-5], "no JSON: .* at line"),
    "trailing": (TEXT + "x", "no JSON: Extra data"),
    "BOM": ("\ufeff" + TEXT, "no JSON"),
    "empty": ("", "no JSON"),
    "no object": ("[1]", "the record must be an object"),
    "another format": ('{"format": 1}', "'format' must be 'fourthrank record', got 1"),
    "newer": (_with(TEXT, version=2, more=1), "is of version 2, this release of fourthrank reads version 1"),
    "older": (_with(TEXT, version=0), "version must be 1, got 0"),
    "version is text": (_with(TEXT, version="1"), "version must be 1, got '1'"),
    "version is true": (_with(TEXT, version=True), "version must be 1, got True"),
    "missing": (_with(TEXT, unit=...), "the record lacks unit"),
    "unknown": (_with(TEXT, colour="red"), "the record has unknown keys 'colour'"),
    "both": (_with(TEXT, colour="red", unit=...), "the record lacks unit and has unknown keys 'colour'"),
    "doubled": (TEXT.replace('"unit"', '"unit": null, "unit"'), "key 'unit' is doubled"),
    "checksum": (_with(TEXT, checksum="0" * 64), "does not fit its checksum"),
    "checksum form": (_with(TEXT, checksum="0"), "checksum must be 64 hexadecimal digits"),
    "checksum number": (_with(TEXT, checksum=1), "checksum must be 64 hexadecimal digits"),
    "kind": (_with(TEXT, kind="force"), "kind must be one of stress, .*, got 'force'"),
    "kind number": (_with(TEXT, kind=1), "kind must be one of"),
    "kind list": (_with(TEXT, kind=["stress"]), "kind must be one of"),
    "numbers": (_with(TEXT, numbers="quaternion"), "numbers must be one of real, complex"),
    "blank unit": (_with(TEXT, unit=" "), "unit must be text of 1 to 10000"),
    "long unit": (_with(TEXT, unit="x" * 10_001), "unit must be text"),
    "unit number": (_with(TEXT, unit=1), "unit must be text"),
    "shape": (_with(TEXT, shape=3), "shape must be a list of lengths"),
    "shape text": (_with(TEXT, shape=["a"]), "shape must be a list of whole numbers"),
    "shape negative": (_with(TEXT, shape=[-1]), "shape must be a list of whole numbers"),
    "shape fraction": (_with(TEXT, shape=[1.5]), "shape must be a list of whole numbers"),
    "shape large": (_with(TEXT, shape=[2**31]), "shape must be a list of whole numbers"),
    "shape overflow": (_with(TEXT, shape=[0, 2**20, 2**20], components=[]), "a batch may have 1073741824 members"),
    "shape long": (_with(TEXT, shape=[1] * 17), "a batch may have 16 axes, got 17"),
    "shape does not fit": (_with(TEXT, shape=[6]), "expected a list of 6 .* got 1"),
    "component text": (_with(TEXT, components=["1", 2, 3, 4, 5, 6]), "components: expected a number, got '1'"),
    "component true": (_with(TEXT, components=[True, 2, 3, 4, 5, 6]), "expected a number, got True"),
    "component null": (_with(TEXT, components=[None, 2, 3, 4, 5, 6]), "expected a number, got None"),
    "five components": (_with(TEXT, components=[1, 2, 3, 4, 5]), "expected a list of 6 .*, got a list of 5"),
    "no list": (_with(TEXT, components=7), "expected a list of 6 .*, got 7"),
    "real for complex": (_with(TEXT, numbers="complex"), "expected a list of 2"),
    "NaN": (TEXT.replace("[1.0", "[NaN"), "NaN is no number"),
    "Infinity": (TEXT.replace("[1.0", "[-Infinity"), "-Infinity is no number"),
    "too large": (_with(TEXT).replace("[1.0", "[1e400"), "1E\\+400 is beyond the range of double precision"),
    "too small": (_with(TEXT).replace("[1.0", "[1e-400"), "beyond the range"),
    "many digits": (TEXT.replace("[1.0", "[1." + "0" * 41), "too many digits"),
    "endless digits": (TEXT.replace("[1.0", "[1" + "0" * 10_000), "too many digits"),
    "endless exponent": (TEXT.replace("[1.0", "[1e99999999999"), "too many digits"),
    "deep": (_deep(25), "more than 24 levels"),
    "very deep": (_deep(200_000), "more than 24 levels"),
    "deep objects": ('{"a":' * 100_000, "more than 24 levels"),
    "notation null": (_with(TEXT, notation=None), "notation must be an object"),
    "notation lacks": (_with(TEXT, notation={"order": []}), "notation lacks stress_shear, strain_shear, positive"),
    "order": (_with(TEXT, notation=NOTATION | {"order": "11 22 33"}), "order must be a list of pairs"),
    "order number": (_with(TEXT, notation=NOTATION | {"order": [11, 22, 33]}), "order must be a list of pairs"),
    "order label": (_with(TEXT, notation=NOTATION | {"order": ["xx", "22", "33"]}), "order must be a list of pairs"),
    "order doubled": (_with(TEXT, notation=NOTATION | {"order": ["11"] * 6}), "no notation: pair 11 is doubled"),
    "weight number": (_with(TEXT, notation=NOTATION | {"stress_shear": 1}), "stress_shear must be text"),
    "weight code": (_with(TEXT, notation=NOTATION | {"strain_shear": "__import__('os')"}), "strain_shear must be text"),
    "weight zero": (_with(TEXT, notation=NOTATION | {"strain_shear": "0"}), "strain_shear must be a positive"),
    "weight large": (_with(TEXT, notation=NOTATION | {"strain_shear": "1e999"}), "no notation"),
    "sign": (_with(TEXT, notation=NOTATION | {"positive": "up"}), "positive must be one of tension, compression"),
    "partial stiffness": (
        _with(C_TEXT, notation=NOTATION | {"order": ["11", "22", "12"]}), "a stiffness needs all six pairs",
    ),
    "asymmetric": (
        _with(C_TEXT, components=np.triu(np.ones((6, 6))).tolist()), "the components are refused: stiffness must have",
    ),
    "average overflows": (
        _with(C_TEXT, components=(np.full((6, 6), 1.7e308) * (1 - 1e-12 * np.triu(np.ones((6, 6))))).tolist()),
        "beyond the range|must be finite",
    ),
    "uncertainty": (_with(TEXT, standard_uncertainty=[1, 1, 1, 1, 1, -1]), "uncertainty of components: every one"),
    "uncertainty shape": (_with(TEXT, standard_uncertainty=0.1), "uncertainty of components: expected a list"),
    "constants with notation": (_with(E_TEXT, notation=NOTATION), "a set of constants has no notation"),
    "constants list": (_with(E_TEXT, components=[1.0, 0.3]), "components must be an object"),
    "constants unknown": (_with(E_TEXT, components={"E": 1.0, "mu": 0.3}), "lacks nu and has unknown keys 'mu'"),
    "constants inadmissible": (_with(E_TEXT, components={"E": 1.0, "nu": 0.7}), "the components are refused"),
    "constants contradict": (EM_TEXT, "neither of the two solids with this E and M has this nu"),
    "constants uncertainty": (_with(E_TEXT, standard_uncertainty={"E": 0.1}), "standard_uncertainty lacks nu"),
    "constants uncertainty list": (_with(E_TEXT, standard_uncertainty=[0.1]), "standard_uncertainty must be an object"),
}  # fmt: skip


@pytest.mark.parametrize("name", REFUSED)
def test_whatever_is_not_as_it_must_be_is_refused_with_the_reason(name: str) -> None:
    """Each fault has its own message, and comes out as RecordError, within 100 ms."""
    text, message = REFUSED[name]
    start = time.process_time()
    with pytest.raises(errors.RecordError, match=message):
        record.read(text)  # type: ignore[arg-type]  # one of them is bytes
    assert time.process_time() - start < 0.1


def test_a_text_of_any_size_beyond_the_limit_is_refused_at_once() -> None:
    """The length is looked at before anything else is."""
    with pytest.raises(errors.RecordError, match="a record has 67108864 at most"):
        record.read(" " * (2**26 + 1))


def test_a_record_that_could_not_be_read_is_not_written(monkeypatch: pytest.MonkeyPatch) -> None:
    """The limit of the text holds for writing as well."""
    monkeypatch.setattr("fourthrank._strict_json.LARGEST_TEXT", 100)
    with pytest.raises(errors.RecordError, match="characters, a record has 100 at most"):
        record.to_json(SIGMA)


def test_components_that_differ_by_rounding_are_averaged_and_by_more_are_refused() -> None:
    """Without a checksum a matrix is taken like any matrix from outside."""
    matrix = np.eye(6)
    matrix[0, 1], matrix[1, 0] = 0.3, 0.3 + 2e-12
    C = record.from_json(_with(C_TEXT, components=matrix.tolist()), Stiffness)
    assert C.matrix(VOIGT)[0, 1] == C.matrix(VOIGT)[1, 0] > 0.3 + 0.9e-12


def test_the_checksum_is_that_of_the_content_and_not_of_the_layout() -> None:
    """Blanks, the order of keys and another way to write the same number change nothing; a changed digit does."""
    document = json.loads(TEXT, parse_float=Decimal)
    again = json.dumps(dict(reversed(document.items())), indent=7, default=float)
    assert record.from_json(again) == SIGMA
    assert record.from_json(TEXT.replace("[1.0,", "[0.10000E+1,")) == SIGMA
    with pytest.raises(errors.RecordError, match="does not fit its checksum"):
        record.from_json(TEXT.replace("[1.0,", "[1.0000000000000002,"))


@pytest.mark.parametrize("branch", ["larger nu", "smaller nu"])
def test_the_two_solids_that_share_E_and_M_are_told_apart(branch: Literal["larger nu", "smaller nu"]) -> None:
    """A record that holds E and M holds nu as well, which says which of the two solids it is."""
    x = Isotropic.from_two(E=100.0, M=950.0, branch=branch)
    components = {"E": 100.0, "M": 950.0, "nu": float(x.nu)}
    assert record.from_json(_with(E_TEXT, components=components)) == x
    assert record.from_json(record.to_json(x)) == x


def test_uncertainties_are_broadcast_and_kept() -> None:
    """One uncertainty stands for all, and comes back for each component or each constant, read-only."""
    found = record.read(record.to_json(SIGMA, notation=VOIGT, standard_uncertainty=0.5)).standard_uncertainty
    assert isinstance(found, np.ndarray)
    assert found.tolist() == [0.5] * 6
    assert not found.flags.writeable
    x = Isotropic.from_two(E=[1.0, 2.0], nu=0.3)
    kept = record.read(record.to_json(x, standard_uncertainty={"E": [0.1, 0.2], "nu": 0.01})).standard_uncertainty
    assert isinstance(kept, dict)
    assert {name: array.tolist() for name, array in kept.items()} == {"E": [0.1, 0.2], "nu": [0.01, 0.01]}


def test_what_cannot_be_recorded_is_refused_with_the_reason() -> None:
    """Wrong kinds, wrong arguments and unchecked NaN do not get into a file."""
    with pytest.raises(
        errors.RecordError, match=r"a ndarray cannot be recorded; expected one of Stress, .*Orthotropic"
    ):
        record.to_json(np.eye(6))
    with pytest.raises(errors.RecordError, match="this cannot be recorded: notation must be a Notation"):
        record.to_json(SIGMA, notation="voigt")  # type: ignore[arg-type]
    with pytest.raises(errors.RecordError, match="a set of constants has no notation"):
        record.to_json(CONSTANTS[0], notation=VOIGT)
    with pytest.raises(errors.RecordError, match="unit must be text"):
        record.to_json(SIGMA, unit="")
    with pytest.raises(errors.RecordError, match="stress: component 23 is nan"):
        record.to_json(Stress.from_vector([0, 0, 0, np.nan, 0, 0], VOIGT, check=False))
    with pytest.raises(errors.RecordError, match="every one must be a finite number that is not negative"):
        record.to_json(SIGMA, standard_uncertainty=np.inf)
    with pytest.raises(errors.RecordError, match="standard_uncertainty must be real"):
        record.to_json(SIGMA, standard_uncertainty=1j)
    with pytest.raises(errors.RecordError, match=r"standard_uncertainty of shape \(5,\) does not broadcast to \(6,\)"):
        record.to_json(SIGMA, standard_uncertainty=np.ones(5))
    with pytest.raises(errors.RecordError, match="must be a mapping with the names E, nu"):
        record.to_json(CONSTANTS[0], standard_uncertainty=0.1)
    with pytest.raises(errors.RecordError, match="must be a mapping with the names E, nu"):
        record.to_json(CONSTANTS[0], standard_uncertainty={"E": 0.1})
    with pytest.raises(errors.RecordError, match="a batch may have 16 axes, got 17"):
        record.to_json(SIGMA.reshape(*[1] * 17))
    with pytest.raises(errors.RecordError, match="a stiffness needs all six pairs"):
        record.to_json(Stiffness.from_matrix(np.eye(6), VOIGT), notation=Notation.voigt(Ordering("11 22 12")))


def test_constants_that_no_choice_of_fields_gives_back_are_refused() -> None:
    """An object whose fields do not belong together is not recorded as another one."""
    broken = object.__new__(Isotropic)
    for name in ("E", "nu", "G", "K", "lam", "M"):
        object.__setattr__(broken, name, np.asarray(0.25))
    with pytest.raises(errors.RecordError, match="no constants of this Isotropic give all its fields back"):
        record.to_json(broken)


def test_another_kind_than_asked_for_is_refused() -> None:
    """The caller who names a kind gets that kind or an error."""
    assert record.from_json(TEXT, Stress) == SIGMA
    with pytest.raises(errors.RecordError, match="the record holds a Stress, a Strain was asked for"):
        record.from_json(TEXT, Strain)


# Values that take the place of others, as text; the last stand for hundreds of thousands of characters.
JUNK = (
    "null", "true", "-1", "0", "2", "1e400", "-1e400", "1e-400", "1e308", "9" * 39, "9" * 400, "1E99999999", "NaN",
    "Infinity", "-Infinity", '""', '"x"', '"sqrt(3)"', "[]", "{}", "[[]]", '{"a": 1}', "1.5", "-0",
    "0.1000000000000000055", "\\", "'", "\x00", '"\\ud800"', "[" * 30 + "]" * 30, "[" * 100_000, '{"a":' * 50_000,
    "1" * 100_000,
)  # fmt: skip


KEYS = list(json.loads(TEXT))


def _mutate(rng: random.Random, text: str) -> str:
    """Return a record with one to three random faults."""
    for _ in range(rng.choice((1, 1, 1, 2, 3))):
        place = rng.randrange(len(text))
        fault = rng.randrange(8)
        if fault == 0:  # truncated at either end
            text = text[:place] if rng.random() < 0.8 else text[place:]
        elif fault == 1:  # one character is another
            text = (
                text[:place]
                + chr(rng.choice((32, 44, 34, 48, 57, 91, 123, 0x20AC, rng.randrange(1, 0x300))))
                + text[place + 1 :]
            )
        elif fault == 2:  # a piece is lost
            text = text[:place] + text[place + rng.randrange(1, 30) :]
        elif fault == 3:  # a piece is doubled
            text = text[:place] + text[place : place + rng.randrange(1, 60)] + text[place:]
        elif fault == 4:  # a number is another value
            text = _replace_token(rng, text, set("0123456789.-"), rng.choice(JUNK))
        elif fault == 5:  # a value of a key is another
            key = rng.choice(KEYS)
            start = text.find(f'"{key}": ')
            if start >= 0:
                start += len(key) + 4
                stop = min(
                    (at for at in (text.find(mark, start) for mark in (",\n", ", ", "\n")) if at >= 0),
                    default=len(text),
                )
                text = text[:start] + rng.choice(JUNK) + text[stop:]
        elif fault == 6:  # a key is doubled, with the same or another value
            key = rng.choice(KEYS)
            text = text.replace(f'"{key}"', f'"{key}": {rng.choice(JUNK)}, "{key}"', 1)
        else:  # a key has another name
            text = text.replace(f'"{rng.choice(KEYS)}"', f'"{rng.choice(KEYS)}"', 1)
        text = text or " "
    return text


def _replace_token(rng: random.Random, text: str, of: set[str], by: str) -> str:
    places = [n for n, character in enumerate(text) if character in of]
    if not places:
        return text
    start = stop = rng.choice(places)
    while start > 0 and text[start - 1] in of:
        start -= 1
    while stop < len(text) and text[stop] in of:
        stop += 1
    return text[:start] + by + text[stop:]


def test_ten_thousand_mutated_records_are_read_to_the_same_value_or_refused(mutated_counts: dict[str, float]) -> None:
    """No other exception, no other value, none over 100 ms."""
    rng = random.Random(20_261_201)
    numbers = np.random.default_rng(7)
    originals: list[tuple[str, Any4 | Constants]] = []
    for kind in (*SECOND, *FOURTH):
        for batch in ((), (2,), (0, 3)):
            for is_complex in (False, True):
                x = quantity(numbers, kind, batch, is_complex)
                notation = (VOIGT, MANDEL, Notation.tensorial(Ordering("11 12 13 22 23 33")))[len(originals) % 3]
                originals.append((record.to_json(x, notation=notation, unit="GPa", standard_uncertainty=0.5), x))
    originals += [(record.to_json(constants, unit="GPa", axes="any"), constants) for constants in CONSTANTS]
    slowest, same = 0.0, 0
    for _ in range(10_000):
        text, expected = rng.choice(originals)
        mutated = _mutate(rng, text)
        start = time.process_time()
        try:
            found = record.from_json(mutated)
        except errors.RecordError:
            pass
        else:
            assert type(found) is type(expected)
            assert found == expected, mutated
            same += 1
        slowest = max(slowest, time.process_time() - start)
    mutated_counts.update({"same": same, "refused": 10_000 - same, "slowest": slowest})
    assert 0 < same < 10_000  # both ways out are taken
    assert slowest < 0.1


def test_a_bare_array_of_the_fields_is_read_only_in_the_quantity() -> None:
    """What was read cannot be changed by anybody who shares it."""
    C = record.from_json(C_TEXT, Stiffness)
    held: NDArray[np.float64] = working(C)
    assert not held.flags.writeable
