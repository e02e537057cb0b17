"""Orderings, notations and translators as values: reading, equality, repr, pickling, threads; and the import."""

import copy
import math
import pickle
import subprocess
import sys
import threading
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from fourthrank import Notation, Ordering, OrderingError, Translator
from fourthrank.ordering import COLUMN_BY_COLUMN_ORDER, ROW_BY_ROW_ORDER, VOIGT_ORDER
from tests.strategies import ALL_ORDERINGS, complete_orderings, generators, notations, partial_orderings

ORDERINGS = st.one_of(complete_orderings, partial_orderings)


@given(ORDERINGS, st.booleans(), st.sampled_from([" ", ",", ", "]))
def test_every_way_to_write_an_ordering_gives_the_same(ordering: Ordering, turned: bool, separator: str) -> None:
    """Digits, letters of either case, index pairs and numpy integers, 12 or 21."""
    step = -1 if turned else 1
    words = [label[::step] for label in ordering.labels("xyz")]
    digits = [label[::step] for label in ordering.labels()]
    pairs = [pair[::step] for pair in ordering.pairs]
    ways: tuple[Any, ...] = (
        separator.join(words), separator.join(words).upper(), separator.join(digits), pairs, np.array(pairs), ordering,
    )  # fmt: skip
    for written in ways:
        assert Ordering(written) == ordering
    assert [ordering.position(*pair[::step]) for pair in ordering.pairs] == list(range(ordering.size))
    assert ordering.complete is (ordering.size == 6)


@pytest.mark.parametrize(
    ("pairs", "text"),
    [
        ("11 22 33 23 13 21 12", "pair 12 is doubled: it stands at places 6 and 7"),
        ("11 22 33 23 13", "has 5 of the six pairs, without 12"),
        ("11 22 13", "has 3 of the six pairs, without 33 23 12"),
        ("", "has 0 of the six pairs"),
        ("11 22 33 23 13 14", "'14' is no pair of axes"),
        ("11 22 33 23 13 1y", "'1y' is no pair of axes"),
        ("11 22 33 23 13 123", "'123' is no pair of axes"),
        (((0, 0), (1, 3)), r"\(1, 3\) is no index pair"),
        (((0, 0), (True, 1)), "is no index pair"),
        (((0, 0), (1.0, 1)), "is no index pair"),
        ((1, 2, 3), "1 is no index pair"),
        (6, r"got 6 \(int\); expected the six pairs"),
        (None, "got None"),
    ],
)
def test_what_is_no_ordering_is_refused_with_the_pair(pairs: Any, text: str) -> None:
    """The message names the pair that is missing, doubled or malformed."""
    with pytest.raises(OrderingError, match=text):
        Ordering(pairs)


def test_ordering_refuses_a_foreign_pair_set_and_axes() -> None:
    """Positions and permutations exist for listed pairs only."""
    plane: Any = Ordering("11 22 12")
    with pytest.raises(OrderingError, match="pair 33 is not part of the partial ordering '11 22 12'"):
        plane.position(2, 2)
    with pytest.raises(OrderingError, match="do not list the same pairs"):
        plane.permutation_to(VOIGT_ORDER)
    with pytest.raises(OrderingError, match="axes must be '123' or 'xyz', got axes='abc'"):
        plane.labels("abc")


def test_named_orders_are_what_their_rule_says() -> None:
    """Voigt: the shear pair opposite each axis; the triangle: read by a plain double loop."""
    opposite = [tuple(sorted({0, 1, 2} - {axis})) for axis in range(3)]
    assert list(VOIGT_ORDER.pairs) == [(0, 0), (1, 1), (2, 2), *opposite]
    assert list(ROW_BY_ROW_ORDER.pairs) == [(i, j) for i in range(3) for j in range(i, 3)]
    assert list(COLUMN_BY_COLUMN_ORDER.pairs) == [(i, j) for j in range(3) for i in range(j + 1)]


def values(notation: Notation, other: Notation) -> list[Any]:
    """Return one object of each class that stands for a convention."""
    return [notation.ordering, notation, Translator(notation, other)]


@given(notations(), notations())
def test_repr_pickle_and_copy_give_an_equal_object(notation: Notation, other: Notation) -> None:
    """Equality and hash survive repr and every pickle protocol from 2; a copy is the object itself."""
    names = {"Ordering": Ordering, "Notation": Notation, "Translator": Translator}
    for value in values(notation, other):
        again = [eval(repr(value), names)]
        again += [pickle.loads(pickle.dumps(value, protocol)) for protocol in range(2, pickle.HIGHEST_PROTOCOL + 1)]
        for twin in again:
            assert twin == value
            assert hash(twin) == hash(value)
            assert len({twin, value}) == 1
        assert copy.copy(value) is copy.deepcopy(value) is value
        assert value != "something else"


def test_each_part_of_a_convention_counts_in_equality() -> None:
    """Order, either weight and the sign make a difference, and a translator has a direction."""
    order = VOIGT_ORDER
    base = Notation(order, stress_shear=1, strain_shear=2)
    others = [
        Notation(Ordering("11 22 33 12 13 23"), stress_shear=1, strain_shear=2),
        Notation(order, stress_shear=2, strain_shear=2),
        Notation(order, stress_shear=1, strain_shear=1),
        Notation(order, stress_shear=1, strain_shear=2, compression_positive=True),
    ]
    assert base == Notation.voigt(order)
    assert len({base, *others}) == 5
    assert all(base != other for other in others)
    assert all(Translator(base, other) != Translator(other, base) for other in others)
    assert (Translator(base, others[0]).source, Translator(base, others[0]).target) == (base, others[0])
    assert all(Translator(base, base) != Translator(base, other) for other in others)
    assert len(set(ALL_ORDERINGS)) == 720


def test_conventions_are_immutable() -> None:
    """No attribute can be set or deleted."""
    notation = Notation.mandel(VOIGT_ORDER)
    for value in values(notation, notation):
        for name in ("size", "_hash", "anything"):
            with pytest.raises(AttributeError, match="is immutable"):
                setattr(value, name, 1)
            with pytest.raises(AttributeError, match="is immutable"):
                delattr(value, name)


def test_work_conjugacy_is_exact() -> None:
    """sqrt 2 times sqrt 2 counts as 2, though the product of the two floats is not 2."""
    assert math.sqrt(2.0) * math.sqrt(2.0) != 2.0
    assert Notation.mandel(VOIGT_ORDER).work_conjugate
    assert Notation(VOIGT_ORDER, stress_shear=math.sqrt(0.5), strain_shear=2 * math.sqrt(2)).work_conjugate
    assert not Notation.tensorial(VOIGT_ORDER).work_conjugate


@given(generators)
def test_threads_that_share_new_objects_agree(rng: np.random.Generator) -> None:
    """Index tables are made on first use; eight threads that make them at once get the same numbers."""
    array = rng.standard_normal((50, 6, 6))
    source, target = Notation.voigt(Ordering("12 23 13 33 22 11")), Notation.mandel(VOIGT_ORDER)
    expected = Translator(source, target).stiffness(array)
    tensors = source.unpack_stiffness(array)
    fresh = Notation.voigt(Ordering("12 23 13 33 22 11"))
    shared = Translator(fresh, Notation.mandel(VOIGT_ORDER))
    barrier, agreed = threading.Barrier(8), list[bool]()

    def work() -> None:
        barrier.wait()
        for _ in range(3):
            same = (shared.stiffness(array) == expected).all() and (fresh.unpack_stiffness(array) == tensors).all()
            agreed.append(bool(same))

    threads = [threading.Thread(target=work) for _ in range(8)]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    assert agreed == [True] * 24


def test_import_loads_numpy_and_the_standard_library_only() -> None:
    """In a fresh interpreter, with warnings as errors."""
    program = (
        "import sys, numpy; before = set(sys.modules); import fourthrank; "
        # Modules without a file are parts of numpy's compiled ones.
        "new = [name for name in set(sys.modules) - before if getattr(sys.modules[name], '__file__', None)]; "
        "print(*sorted({name.split('.')[0] for name in new}))"
    )
    done = subprocess.run([sys.executable, "-W", "error", "-c", program], capture_output=True, text=True, check=True)
    foreign = set(done.stdout.split()) - set(sys.stdlib_module_names) - {"numpy", "fourthrank"}
    assert done.stderr == ""
    assert "fourthrank" in done.stdout
    assert foreign == set()
