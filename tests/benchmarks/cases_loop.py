"""What a loop over integration points calls, at the sizes of such loops, with everything built beforehand."""

from collections.abc import Callable
from typing import Any, Final

import numpy as np
from numpy.typing import NDArray

import fourthrank as fr
from fourthrank import rotation

from .cases_tensors import stiffnesses
from .harness import Case, Work

VOIGT: Final = fr.Notation.voigt(fr.Ordering("11 22 33 23 13 12"))
MANDEL: Final = fr.Notation.mandel(fr.Ordering("11 22 33 23 13 12"))
SOLVER: Final = fr.Notation.voigt(fr.Ordering("11 22 33 12 13 23"))
ORDER: Final = VOIGT.ordering.permutation_to(SOLVER.ordering)
SIZES: Final = (1, 64, 512, 4_096)


def single(array: NDArray[np.float64]) -> NDArray[np.float64]:
    """Return a batch of one without its batch axis, as a loop over points has it."""
    return array[0] if len(array) == 1 else array


def _turn_stress(n: int, rng: np.random.Generator) -> Work:
    turn = rotation.Turn(rotation.random((), rng), VOIGT)
    vectors, matrix = single(rng.standard_normal((n, 6))), turn.stress_matrix.T.copy()
    return Work(
        lambda: turn.stress(vectors),
        unchecked=lambda: turn.stress(vectors, check=False),
        plain={"by hand": lambda: vectors @ matrix},
        moved=8 * 12 * n,
    )


def _turn_stiffness(n: int, rng: np.random.Generator) -> Work:
    turn = rotation.Turn(rotation.random((), rng), VOIGT)
    matrices = single(stiffnesses(n, rng).matrix(VOIGT))
    left, right = turn.stress_matrix.copy(), turn.stress_matrix.T.copy()
    return Work(
        lambda: turn.stiffness(matrices),
        unchecked=lambda: turn.stiffness(matrices, check=False),
        plain={"by hand": lambda: left @ matrices @ right},
        moved=8 * 72 * n,
    )


def _translate_stress(n: int, rng: np.random.Generator) -> Work:
    translator = fr.Translator(VOIGT, SOLVER)
    vectors = single(rng.standard_normal((n, 6)))
    return Work(
        lambda: translator.stress(vectors),
        unchecked=lambda: translator.stress(vectors, check=False),
        plain={"by hand": lambda: vectors[..., ORDER]},
        moved=8 * 12 * n,
    )


def _translate_stiffness(n: int, rng: np.random.Generator) -> Work:
    translator = fr.Translator(VOIGT, SOLVER)
    matrices = single(stiffnesses(n, rng).matrix(VOIGT))
    return Work(
        lambda: translator.stiffness(matrices),
        unchecked=lambda: translator.stiffness(matrices, check=False),
        plain={"by hand": lambda: matrices[..., ORDER[:, None], ORDER]},
        moved=8 * 72 * n,
    )


def _rotate_object(n: int, rng: np.random.Generator) -> Work:
    stiffness, turn = stiffnesses(n, rng), rotation.random((), rng)
    stiffness = stiffness[0] if n == 1 else stiffness
    full, indices = stiffness.tensor(), "pqrs->ijkl" if n == 1 else "npqrs->nijkl"

    def read(tensor: Any) -> NDArray[Any]:
        return MANDEL.pack_stiffness(np.asarray(tensor, np.float64), check=False)

    names: dict[str, Callable[[Any], NDArray[Any]]] = {
        "ours": lambda C: C.matrix(MANDEL),
        "unchecked": lambda C: C.matrix(MANDEL),
        "einsum": read,
    }
    return Work(
        lambda: stiffness.rotate(turn),
        unchecked=lambda: stiffness.rotate(turn, check=False),
        plain={"einsum": lambda: np.einsum(f"ip,jq,kr,ls,{indices}", turn, turn, turn, turn, full)},
        moved=8 * 72 * n,
        read=names,
    )


CASES: Final = [
    Case("loop: Turn.stress, one rotation", _turn_stress, sizes=SIZES),
    Case("loop: Turn.stiffness, one rotation", _turn_stiffness, sizes=SIZES),
    Case("loop: Translator.stress", _translate_stress, sizes=SIZES),
    Case("loop: Translator.stiffness", _translate_stiffness, sizes=SIZES),
    Case("loop: Stiffness.rotate, one rotation", _rotate_object, sizes=SIZES),
]
