"""Published cases: stiffness and compliance printed together, cuts of crystals, and their forms in other conventions.

Sources stand in the tables of `tests/reference`, with a note whether they were seen in print; each case names its own.
"""

import numpy as np
import pytest

from fourthrank import Compliance, Notation, Ordering, Stiffness, Translator, rotation
from tests.reference import Case, case
from tests.reference.matrices import voigt_matrix

VOIGT = Notation.voigt(Ordering("11 22 33 23 13 12"))
MANDEL_SHUFFLED = Notation.mandel(Ordering("12 33 13 11 22 23"))

# Identifier, printed letter of the inputs, and the factor that brings the inverse to the printed unit.
PAIRS_IN_PRINT = [
    ("HEX-ICE-16C", "c", 100.0),  # Gammon et al. 1983, J. Glaciology 29, 433-460; compliances from memory
    ("QUARTZ-BECHMANN-S", "c", 1000.0),  # Bechmann 1958, Phys. Rev. 110, 1060-1061; value from memory
    ("LINBO3-WARNER", "c", 10.0),  # Warner, Onoe and Coquin 1967, J. Acoust. Soc. Am. 42, 1223; value from memory
    ("PZT4-FULL", "s", 1000.0),  # Berlincourt, Curran and Jaffe 1964, Physical Acoustics 1A; value from memory
    ("PZT5H-FULL", "s", 1000.0),  # the same; partly seen
    # Hertzberg, Deformation and Fracture Mechanics, after Hearmon 1946, Rev. Mod. Phys. 18, 409; values from memory.
    ("CUB-HERTZBERG-AL", "s", 10.0),
    ("CUB-HERTZBERG-CU", "s", 10.0),
    ("CUB-HERTZBERG-W", "s", 10.0),
]


def constants(item: Case, letter: str) -> list[str]:
    """Return the names of the printed constants of this letter, such as s11."""
    return [name for name in item.figures if name[0] == letter and len(name) == 3 and name[1:].isdigit()]


@pytest.mark.parametrize(("identifier", "letter", "factor"), PAIRS_IN_PRINT, ids=[pair[0] for pair in PAIRS_IN_PRINT])
def test_inverse_is_the_printed_one(identifier: str, letter: str, factor: float) -> None:
    """C and S printed together are inverses, also where the matrix comes in another notation and order."""
    item = case(identifier)
    matrix = voigt_matrix(item, "c" if letter == "c" else "s")
    if letter == "c":
        moved = Translator(VOIGT, MANDEL_SHUFFLED).stiffness(matrix)
        found = Stiffness.from_matrix(moved, MANDEL_SHUFFLED).inverse().matrix(VOIGT)
    else:
        moved = Translator(VOIGT, MANDEL_SHUFFLED).compliance(matrix)
        found = Compliance.from_matrix(moved, MANDEL_SHUFFLED).inverse().matrix(VOIGT)
    names = constants(item, "s" if letter == "c" else "c")
    assert len(names) >= 3
    for name in names:
        value = factor * float(found[int(name[1]) - 1, int(name[2]) - 1])
        assert abs(value - item.expected(name)) <= item.tolerance(name), name


def test_silicon_turned_by_45_degrees() -> None:
    """Axes [110], [-110], [001]."""
    # Source: G. C. Johnson, posting to the MEMS-Talk list, 13 April 1995; seen.
    item = case("CUB-SI-ROT45")
    axes = rotation.axes_from_vectors(x1=[1, 1, 0], x3=[0, 0, 1], exact="x3")
    found = Stiffness.from_matrix(voigt_matrix(item), VOIGT).in_axes(axes).matrix(VOIGT)
    for name in item.figures:
        assert abs(float(found[int(name[1]) - 1, int(name[2]) - 1]) - item.expected(name)) <= item.tolerance(name), name


def test_plane_stress_matrix_of_a_ply_in_another_order() -> None:
    """The reduced stiffness of a printed ply goes from 11 22 12 to 12 11 22 and to Mandel weights as a 3x3 matrix."""
    # Source: Tsai and Hahn 1980, Introduction to Composite Materials; the matrix was seen, see the table.
    item = case("LAM-T300-Q")
    E1, E2, nu12, G12 = (item.value(name) for name in ("E1", "E2", "nu12", "G12"))
    compliance = np.array([[1 / E1, -nu12 / E1, 0.0], [-nu12 / E1, 1 / E2, 0.0], [0.0, 0.0, 1 / G12]])
    source, target = Notation.voigt(Ordering("11 22 12")), Notation.mandel(Ordering("12 11 22"))
    moved = np.linalg.inv(Translator(source, target).compliance(compliance))
    found = Translator(target, source).stiffness(moved)
    places = {"Q11": (0, 0), "Q22": (1, 1), "Q12": (0, 1), "Q66": (2, 2)}
    for name, place in places.items():
        assert abs(float(found[place]) - item.expected(name)) <= item.tolerance(name), name
    assert abs(float(moved[0, 0]) - 2 * item.expected("Q66")) <= 2 * item.tolerance("Q66")


def test_at_cut_of_quartz() -> None:
    """x2' = cos x2 + sin x3 at 35.25 degrees; the other sense of the rotation gives another c66."""
    # Source: Tiersten 1969, Linear Piezoelectric Plate Vibrations; value from memory.
    item = case("QUARTZ-AT-C")
    C = Stiffness.from_matrix(voigt_matrix(item), VOIGT)
    turn = rotation.about_axis([1, 0, 0], 35.25, degrees=True)
    found = C.in_axes(turn.T).matrix(VOIGT)
    names = constants(item, "c")
    assert "c66" in names
    for name in names:
        assert abs(float(found[int(name[1]) - 1, int(name[2]) - 1]) - item.expected(name)) <= item.tolerance(name), name
    assert abs(float(C.in_axes(turn).matrix(VOIGT)[5, 5]) - item.expected("c66")) > 10.0


def test_voigt_factors_of_compliance() -> None:
    """S_44 = 4 S_2323 and S_14 = 2 S_1123, while C_44 = C_2323."""
    # Source: Nye 1957, Physical Properties of Crystals, chapter VIII; value from memory.
    matrix = voigt_matrix(case("QUARTZ-BECHMANN-S"))
    C = Stiffness.from_matrix(matrix, VOIGT)
    full, S = C.tensor(), C.inverse()
    np.testing.assert_allclose(full[1, 2, 1, 2], matrix[3, 3], rtol=1e-14)
    np.testing.assert_allclose(S.matrix(VOIGT)[3, 3], 4 * S.tensor()[1, 2, 1, 2], rtol=1e-14)
    np.testing.assert_allclose(S.matrix(VOIGT)[0, 3], 2 * S.tensor()[0, 0, 1, 2], rtol=1e-14)
