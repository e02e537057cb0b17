"""The matrices of the reference cases are complete, have the symmetry of their system, and give published results."""

import dataclasses
import itertools
from typing import Literal

import numpy as np
import pytest
from numpy.typing import NDArray

from tests.reference import Case, case, cases
from tests.reference.matrices import SYSTEMS, voigt_matrix

PAIRS = ((0, 0), (1, 1), (2, 2), (1, 2), (0, 2), (0, 1))
WITH_MATRIX = [item for item in cases() if item.system]


def _letter(item: Case) -> Literal["c", "s"]:
    return "c" if "c11" in item.inputs else "s"


def _matrix(item: Case) -> NDArray[np.float64]:
    return voigt_matrix(item, _letter(item))


def _turned(matrix: NDArray[np.float64], letter: str, turn: NDArray[np.float64]) -> NDArray[np.float64]:
    """Turn a Voigt matrix by the definition: out to 3x3x3x3, four times the rotation, and back."""
    factor = np.array([1.0, 1, 1, 2, 2, 2])
    weights = np.outer(factor, factor) if letter == "s" else np.ones((6, 6))
    tensor = np.zeros((3, 3, 3, 3))
    for (m, (i, j)), (n, (k, l)) in itertools.product(enumerate(PAIRS), repeat=2):  # noqa: E741
        for a, b in {(i, j), (j, i)}:
            for c, d in {(k, l), (l, k)}:
                tensor[a, b, c, d] = matrix[m, n] / weights[m, n]
    tensor = np.einsum("ia,jb,kc,ld,abcd->ijkl", turn, turn, turn, turn, tensor)
    turned: NDArray[np.float64] = np.array([[tensor[*row, *column] for column in PAIRS] for row in PAIRS]) * weights
    return turned


def _about(axis: int, degrees: float) -> NDArray[np.float64]:
    c, s = np.cos(np.radians(degrees)), np.sin(np.radians(degrees))
    i, j = (axis + 1) % 3, (axis + 2) % 3
    turn = np.eye(3)
    turn[i, i] = turn[j, j] = c
    turn[i, j], turn[j, i] = -s, s
    return turn


GENERATORS = {
    "cubic": [_about(2, 90), _about(0, 90)],
    "hexagonal": [_about(2, 60), _about(2, 17), _about(0, 180)],
    "trigonal, six constants": [_about(2, 120), _about(0, 180)],
    "trigonal, seven constants": [_about(2, 120)],
    "tetragonal, six constants": [_about(2, 90), _about(0, 180)],
    "orthorhombic": [_about(2, 180), _about(0, 180)],
    "monoclinic, diad along 2": [_about(1, 180)],
    "triclinic": [np.eye(3)],
    "tibia": [_about(2, 180), _about(0, 180)],
}


@pytest.mark.parametrize("item", WITH_MATRIX, ids=lambda item: item.id)
def test_matrix_is_symmetric_positive_definite_and_invariant_under_its_group(item: Case) -> None:
    """A wrong sign or factor in a pattern breaks the invariance; a misread constant often breaks the definiteness."""
    matrix = _matrix(item)
    assert np.array_equal(matrix, matrix.T)
    assert np.linalg.eigvalsh(matrix).min() > 0
    # A compliance may print s66 as well, rounded: then the invariance holds to its digits.
    tolerance = 5e-3 if "s66" in item.inputs else 1e-12
    for turn in GENERATORS[item.system]:
        assert _turned(matrix, _letter(item), turn) == pytest.approx(matrix, abs=tolerance * np.abs(matrix).max())


def test_every_system_of_the_tables_has_a_pattern_and_every_pattern_a_case() -> None:
    """No case is left out of the test above because its system is misspelt."""
    assert {item.system for item in WITH_MATRIX} == set(SYSTEMS) == set(GENERATORS)


def test_compliance_of_calcite_has_the_factors_of_its_class() -> None:
    """The inverse of a trigonal stiffness has s24 = -s14, s56 = 2 s14 and s66 = 2 (s11 - s12)."""
    stiffness = voigt_matrix(case("TRI-CALCITE-CHEN"))
    inverse = np.linalg.inv(stiffness)
    printed = {
        f"s{i}{j}": repr(float(inverse[int(i) - 1, int(j) - 1])) for i, j in ("11", "12", "13", "14", "33", "44")
    }
    compliance = dataclasses.replace(case("TRI-CALCITE-CHEN"), inputs=printed)
    assert voigt_matrix(compliance, "s") == pytest.approx(inverse, abs=1e-15)


@pytest.mark.parametrize(
    "identifier", ["CUB-HERTZBERG-AL", "CUB-HERTZBERG-CU", "CUB-HERTZBERG-W", "PZT4-FULL", "PZT5H-FULL"]
)
def test_stiffness_printed_with_a_compliance_is_its_inverse(identifier: str) -> None:
    """C and S printed together, within the rounding of the printed compliances."""
    item = case(identifier)
    # s is given in 1e-11 1/Pa with c in 1e10 Pa, or in 1e-12 1/Pa with c in GPa.
    scale = 10.0 if identifier.startswith("CUB") else 1000.0
    stiffness = np.linalg.inv(voigt_matrix(item, "s")) * scale
    names = [name for name in item.figures if name[0] == "c"]
    assert len(names) >= 3
    for name in names:
        computed = stiffness[int(name[1]) - 1, int(name[2]) - 1]
        assert computed == pytest.approx(item.expected(name), abs=item.tolerance(name)), name


def test_inputs_that_make_no_matrix_are_errors() -> None:
    """No system, a constant missing, one too many, one against its relation."""
    with pytest.raises(ValueError, match="no complete matrix"):
        voigt_matrix(case("ISO-EN1993"))
    silicon = case("CUB-SI-HOPCROFT")
    with pytest.raises(ValueError, match="prints no s11"):
        voigt_matrix(silicon, "s")
    with pytest.raises(ValueError, match="no constant of the system"):
        voigt_matrix(dataclasses.replace(silicon, inputs={**silicon.inputs, "c14": "3"}))
    with pytest.raises(ValueError, match=r"its system demands 79\.6"):
        voigt_matrix(dataclasses.replace(silicon, inputs={**silicon.inputs, "c66": "79"}))
