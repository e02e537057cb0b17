"""Kernels on raw arrays in the working form: Mandel weights in the order 11 22 33 23 13 12.

The working form is an isometry of symmetric tensors: norms, eigenvalues and inverses of the matrices are those of the
tensors, and a rotation is an orthogonal 6x6 matrix. Nothing here checks its input; the rooms above do that once.
"""

from typing import Final

import numpy as np

from ._arrays import Inexact, blocks, check_equal_components
from ._inversion import invert
from ._packing.weights import label_indices
from ._turning import map_vectors, rotate_matrix, rotation_matrices, symmetric_part, turn_matrices, turn_vectors
from .notation import Notation
from .ordering import VOIGT_ORDER

__all__ = [
    "WORKING",
    "apply",
    "check_major",
    "dot",
    "invert",
    "is_symmetric",
    "rotate_matrix",
    "rotation_matrices",
    "symmetric_part",
    "symmetrize",
    "turn_matrices",
    "turn_vectors",
]

WORKING: Final = Notation.mandel(VOIGT_ORDER)
"""The notation of the working form."""


def symmetrize(matrix: Inexact) -> Inexact:
    """Return the symmetric part of a contiguous array that nobody else needs; large batches change in place."""
    if matrix.size < _FEW:
        return symmetric_part(matrix)
    flat = matrix.reshape(-1, 6, 6)
    for part in blocks(len(flat), 36):
        np.copyto(flat[part], symmetric_part(flat[part]))
    return matrix


_FEW: Final = 36 * 100
_ROWS, _COLUMNS = np.triu_indices(6, 1)
_UPPER, _LOWER = 6 * _ROWS + _COLUMNS, 6 * _COLUMNS + _ROWS


def is_symmetric(matrix: Inexact) -> bool:
    """Tell whether 6x6 matrices equal their transposes bit for bit."""
    rows = matrix.reshape(-1, 36)
    return all(
        bool((rows[part].take(_UPPER, axis=1) == rows[part].take(_LOWER, axis=1)).all())
        for part in blocks(len(rows), 36)
    )


def check_major(
    held: Inexact,
    rtol: float,
    name: str,
    given: Inexact,
    notation: Notation | None,
    way_on: str = "symmetrize=True averages the two",
) -> bool:
    """Raise `SymmetryError` unless t_ijkl = t_klij, and return whether that holds exactly.

    `given` is the caller's own array, which the message quotes: matrices in `notation`, or full tensors (None).
    """
    pairs = WORKING.ordering.pairs

    def describe(k: int) -> str:
        row, column = pairs[int(_ROWS[k])], pairs[int(_COLUMNS[k])]
        first, second = label_indices((*row, *column)), label_indices((*column, *row))
        return f"{name} must have the major symmetry: tensor components {first} and {second}"

    def entries(member: tuple[int, ...], k: int) -> str:
        row, column = pairs[int(_ROWS[k])], pairs[int(_COLUMNS[k])]
        if notation is None:
            places: tuple[tuple[int, ...], ...] = ((*row, *column), (*column, *row))
            texts = [label_indices(place) for place in places]
        else:
            i, j = notation.ordering.position(*row), notation.ordering.position(*column)
            places = ((i, j), (j, i))
            texts = [f"{notation.label_places(place)} (row {place[0] + 1}, column {place[1] + 1})" for place in places]
        values = [given[(*member, *place)] for place in places]
        return f"{texts[0]} is {values[0]:.10g} and {texts[1]} is {values[1]:.10g} in {notation or 'the given tensor'}"

    return check_equal_components(
        held.reshape(*held.shape[:-2], 36),
        _UPPER,
        _LOWER,
        rtol,
        describe,
        f"the usual cause is another shear factor or a misread entry; {way_on}",
        entries,
    )


def apply(matrix: Inexact, vector: Inexact) -> Inexact:
    """Return the matrix-vector products M_IJ v_J, broadcast over batches."""
    if matrix.ndim == 2:
        return map_vectors(matrix, vector)
    # A third faster than matmul, which makes one small product after the other.
    result: Inexact = np.einsum("...ij,...j->...i", matrix, vector)
    return result


def dot(first: Inexact, second: Inexact) -> Inexact:
    """Return the double contractions s_I e_I, broadcast over batches; no conjugate is taken."""
    result: Inexact = np.einsum("...i,...i->...", first, second)
    return result
