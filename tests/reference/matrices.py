"""The 6x6 matrix of a reference case, written out by hand as its source does: independent of the library."""

import math
from typing import Final, Literal

import numpy as np
from numpy.typing import NDArray

from . import Case

__all__ = ["SYSTEMS", "voigt_matrix"]

# Voigt form in the order 11 22 33 23 13 12 throughout. Each pattern gives the constants that follow from the printed
# ones as (target, {constant: factor}); a shear index counts double in a compliance, see `_doubling`.
# Source of the patterns: Nye 1985, Physical Properties of Crystals, table 9; from memory, and each
# checked by invariance under the rotations of its group in test_matrices.py.
_Relations = dict[str, dict[str, float]]

_CUBIC: Final[_Relations] = {
    "22": {"11": 1}, "33": {"11": 1}, "13": {"12": 1}, "23": {"12": 1}, "55": {"44": 1}, "66": {"44": 1},
}  # fmt: skip
_AXIAL: Final[_Relations] = {"22": {"11": 1}, "23": {"13": 1}, "55": {"44": 1}}
_HEXAGONAL: Final[_Relations] = {**_AXIAL, "66": {"11": 0.5, "12": -0.5}}
_TRIGONAL_6: Final[_Relations] = {**_HEXAGONAL, "24": {"14": -1}, "56": {"14": 1}}
_TRIGONAL_7: Final[_Relations] = {**_TRIGONAL_6, "25": {"15": -1}, "46": {"15": -1}}

_ORTHORHOMBIC_PRINTED: Final = frozenset(["11", "22", "33", "44", "55", "66", "12", "13", "23"])
_AXIAL_PRINTED: Final = frozenset(["11", "12", "13", "33", "44"])
_UPPER_TRIANGLE: Final = frozenset(f"{i}{j}" for i in range(1, 7) for j in range(i, 7))

# For each system: the constants that must be printed, and the relations that give the others. What neither names is 0.
SYSTEMS: Final[dict[str, tuple[frozenset[str], _Relations]]] = {
    "cubic": (frozenset({"11", "12", "44"}), _CUBIC),
    "hexagonal": (_AXIAL_PRINTED, _HEXAGONAL),
    "trigonal, six constants": (_AXIAL_PRINTED | {"14"}, _TRIGONAL_6),
    "trigonal, seven constants": (_AXIAL_PRINTED | {"14", "15"}, _TRIGONAL_7),
    "tetragonal, six constants": (_AXIAL_PRINTED | {"66"}, _AXIAL),
    "orthorhombic": (_ORTHORHOMBIC_PRINTED, {}),
    "monoclinic, diad along 2": (_ORTHORHOMBIC_PRINTED | {"15", "25", "35", "46"}, {}),
    "triclinic": (_UPPER_TRIANGLE, {}),
    # The two assumptions by which the source of BONE-TIBIA completes its matrix.
    "tibia": (frozenset(["11", "22", "33", "44", "55", "66", "23"]), {"13": {"23": 1}, "12": {"11": 1, "66": -2}}),
}


def voigt_matrix(case: Case, letter: Literal["c", "s"] = "c") -> NDArray[np.float64]:
    """Return the stiffness (letter c) or compliance (letter s) that the inputs of a case stand for, in its units.

    An input that its relation gives as well, such as a printed s66, is checked against it to what the digits allow.
    """
    if case.system not in SYSTEMS:
        raise ValueError(f"{case.id} has no complete matrix: its system is {case.system!r}")
    printed, relations = SYSTEMS[case.system]
    given = {
        name[1:]: float(text) for name, text in case.inputs.items() if name[0] == letter and name[1:] in _UPPER_TRIANGLE
    }
    if missing := sorted(printed - set(given)):
        raise ValueError(f"{case.id} prints no {letter}{missing[0]}")
    derived = {
        target: sum(factor * given[name] / (_doubling(name) if letter == "s" else 1) for name, factor in terms.items())
        * (_doubling(target) if letter == "s" else 1)
        for target, terms in relations.items()
    }
    for name in set(derived) & set(given):
        if not math.isclose(derived[name], given[name], rel_tol=5e-3):
            raise ValueError(f"{case.id} prints {letter}{name} = {given[name]}; its system demands {derived[name]:g}")
    if strangers := sorted(set(given) - printed - set(derived)):
        raise ValueError(f"{case.id} prints {letter}{strangers[0]}, which is no constant of the system {case.system!r}")
    matrix = np.zeros((6, 6))
    for name, value in (derived | given).items():
        i, j = int(name[0]) - 1, int(name[1]) - 1
        matrix[i, j] = matrix[j, i] = value
    return matrix


def _doubling(name: str) -> int:
    """Return 2 for each shear index: the factors 1, 2 and 4 of a Voigt compliance."""
    return math.prod(2 for index in name if index in "456")
