"""How sets of elastic constants are recorded: one row for each class."""

from collections.abc import Callable, Collection, Mapping
from dataclasses import dataclass
from itertools import combinations
from typing import Any, Final

import numpy as np
from numpy.typing import NDArray

from ._arrays import Inexact
from .errors import FourthRankError, ModuliError, RecordError
from .moduli import Cubic, Isotropic, Orthotropic


@dataclass(frozen=True, slots=True)
class Constants:
    """A class of constants: which of its fields a record may hold, and what makes an object of them again."""

    kind: type
    choices: tuple[tuple[str, ...], ...]
    build: Callable[..., object]

    def fields_of(self, x: object) -> dict[str, Inexact]:
        """Return the first choice of fields, real or all complex, from which an object equal to `x` can be built."""
        for names in self.choices:
            fields: dict[str, Inexact] = {name: np.asarray(getattr(x, name)) for name in names}
            dtype = np.result_type(*fields.values())
            fields = {name: field.astype(dtype) for name, field in fields.items()}
            if self._give(x, fields):
                return fields
        raise RecordError(f"no constants of this {self.kind.__name__} give all its fields back bit for bit")

    def _give(self, x: object, fields: Mapping[str, Inexact]) -> bool:
        try:
            return self.build(**fields) == x
        except FourthRankError:  # a choice that is of no use for this object, for example one that is infinite
            return False

    def choose(self, names: Collection[str]) -> tuple[str, ...]:
        """Return the choice with these names, or the first where there is none."""
        return next((choice for choice in self.choices if set(choice) == set(names)), self.choices[0])


def _isotropic(**fields: NDArray[np.float64]) -> Isotropic:
    """Return the solid of two constants; Poisson's ratio tells the two solids apart that share E and M."""
    two: dict[str, Any] = fields
    if len(two) == 2:
        return Isotropic.from_two(**two)
    for branch in ("larger nu", "smaller nu"):
        found = Isotropic.from_two(E=two["E"], M=two["M"], branch=branch)
        if np.array_equal(found.nu, two["nu"]):
            return found
    raise ModuliError("neither of the two solids with this E and M has this nu")


CONSTANTS: Final[Mapping[str, Constants]] = {
    "cubic constants": Constants(Cubic, (("C11", "C12", "C44"),), Cubic),
    "isotropic constants": Constants(
        Isotropic,
        (
            *(pair for pair in combinations(("E", "nu", "G", "K", "lam", "M"), 2) if pair != ("E", "M")),
            ("E", "M", "nu"),
        ),
        _isotropic,
    ),
    "orthotropic constants": Constants(
        Orthotropic, (("E1", "E2", "E3", "G12", "G13", "G23", "nu12", "nu13", "nu23"),), Orthotropic
    ),
}
"""The classes that can be recorded, by the word for them."""
