"""Entry checks are on unless they are switched off, and look at every pair of components."""

from collections.abc import Callable
from functools import partial
from itertools import combinations
from typing import Any

import numpy as np
import pytest

from fourthrank import DataError, Notation, Ordering, SymmetryError, Translator

VOIGT = Notation.voigt(Ordering("11 22 33 23 13 12"))
PASSAGE = Translator(VOIGT, Notation.mandel(Ordering("11 22 33 12 13 23")))
SIDES: dict[str, Any] = {"rows": "stress", "columns": "strain"}

ENTRIES: list[tuple[str, Callable[..., Any], tuple[int, ...]]] = [
    ("pack_stress", VOIGT.pack_stress, (3, 3)),
    ("pack_strain", VOIGT.pack_strain, (3, 3)),
    ("unpack_stress", VOIGT.unpack_stress, (6,)),
    ("unpack_strain", VOIGT.unpack_strain, (6,)),
    ("pack_stiffness", VOIGT.pack_stiffness, (3, 3, 3, 3)),
    ("pack_compliance", VOIGT.pack_compliance, (3, 3, 3, 3)),
    ("pack_map", partial(VOIGT.pack_map, **SIDES), (3, 3, 3, 3)),
    ("unpack_stiffness", VOIGT.unpack_stiffness, (6, 6)),
    ("unpack_compliance", VOIGT.unpack_compliance, (6, 6)),
    ("unpack_map", partial(VOIGT.unpack_map, **SIDES), (6, 6)),
    ("pack_triangle", partial(VOIGT.pack_triangle, by="rows"), (6, 6)),
    ("unpack_triangle", partial(VOIGT.unpack_triangle, by="rows"), (21,)),
    ("translate stress", PASSAGE.stress, (6,)),
    ("translate strain", PASSAGE.strain, (6,)),
    ("translate stiffness", PASSAGE.stiffness, (6, 6)),
    ("translate compliance", PASSAGE.compliance, (6, 6)),
    ("translate map", partial(PASSAGE.map, **SIDES), (6, 6)),
]


@pytest.mark.parametrize(("entry", "core"), [entry[1:] for entry in ENTRIES], ids=[entry[0] for entry in ENTRIES])
@pytest.mark.parametrize("bad", [np.nan, np.inf])
def test_what_is_not_finite_is_refused_by_default(entry: Callable[..., Any], core: tuple[int, ...], bad: float) -> None:
    """Without `check` the check is made, and the bad batch member is named; with check=False the array passes."""
    array = np.zeros((3, *core))
    array[(1, *(0,) * len(core))] = bad
    with pytest.raises(DataError, match=r"component \[?11.* of batch member \(1,\) is (nan|inf)"):
        entry(array)
    assert entry(array, check=False).shape[0] == 3


@pytest.mark.parametrize(("i", "j"), list(combinations(range(3), 2)))
def test_each_pair_of_sides_is_compared(i: int, j: int) -> None:
    """An asymmetry of one pair alone is found and named."""
    tensor = np.eye(3)
    tensor[i, j] = 1e-6
    for pack in (VOIGT.pack_stress, VOIGT.pack_strain):
        with pytest.raises(SymmetryError, match=f"{i + 1}{j + 1} and {j + 1}{i + 1}"):
            pack(tensor)


@pytest.mark.parametrize(("i", "j"), list(combinations(range(6), 2)))
def test_each_pair_of_entries_of_a_matrix_is_compared(i: int, j: int) -> None:
    """The triangle of a matrix that is unsymmetric in one pair alone is refused."""
    matrix = np.eye(6)
    matrix[j, i] = 1e-6
    labels = VOIGT.ordering.labels()
    with pytest.raises(SymmetryError, match=rf"\[{labels[i]}, {labels[j]}\]"):
        VOIGT.pack_triangle(matrix, by="columns")
