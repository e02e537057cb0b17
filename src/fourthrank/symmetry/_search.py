"""The search for the axes in which tensors are closest to a class: screening of many starts, then Newton steps.

All tensors of a block, and all starts of a tensor, go through together; nothing loops over them.
"""

from dataclasses import dataclass
from typing import Final

import numpy as np
from numpy.typing import NDArray

from .._mandel import turn_matrices
from ..rotation.constructors import from_quaternion
from ._invariants import constants
from ._search_space import SearchSpace, multiply

__all__ = ["Found", "search"]

Array = NDArray[np.float64]

_STEPS: Final = 100
_LONGEST_STEP: Final = 0.15
_LAST_STEP: Final = 1e-7
"""A Newton step this short is the last one: the next would have its square."""
_FLOOR: Final = 1e-12
"""The least curvature that a step reckons with, as a part of the squared anisotropic norm; below it is rounding."""
_SOFT: Final = 1e-9
"""Turns with a curvature below this part of the squared anisotropic norm are reported as undetermined."""
_APART: Final = 0.02
"""Minima whose axes differ by less, in radians, are one."""


@dataclass(frozen=True, slots=True)
class Found:
    """The result of a search for n tensors."""

    quaternions: Array
    """Of the best axes, (n, 4)."""
    squares: Array
    """The squared distances in these axes, (n,)."""
    next_squares: Array
    """The squared distances at the next best minimum, infinite where there is none, (n,)."""
    loose: NDArray[np.bool_]
    """Which of the own axes can turn without effect, (n, 3)."""


@dataclass(slots=True)
class _Points:
    """Axes under refinement: quaternions, half the squared distance there, and the next step."""

    quaternions: Array
    values: Array
    steps: Array


def search(matrices: Array, whole: Array, space: SearchSpace) -> Found:
    """Return the best axes of tensors, given without their isotropic part, (n, 6, 6), and the norms with it, (n,)."""
    vectors = constants(matrices)
    member, start = _screen(vectors, space)
    quaternions, values = _refine(matrices, member, space.starts[start], space)
    count = len(matrices)
    # One row for each tensor, one column for each of its starts.
    first = np.searchsorted(member, np.arange(count))
    column = np.arange(len(member)) - first[member]
    width = int(column.max()) + 1
    tried = np.full((count, width), np.inf)
    tried[member, column] = values
    where = np.zeros((count, width, 4))
    where[member, column] = quaternions
    best = tried.argmin(axis=1)
    rows = np.arange(count)
    chosen = _representative(where[rows, best], space)
    other = _closeness(where, chosen, space) < np.cos(_APART if len(space.free) else 0.5 * _APART)
    following = np.where(other, tried, np.inf).min(axis=1)
    loose = _loose(matrices, whole, chosen, space)
    return Found(chosen, 2.0 * tried[rows, best], 2.0 * following, loose)


def _screen(vectors: Array, space: SearchSpace) -> tuple[NDArray[np.intp], NDArray[np.intp]]:
    """Return tensors and starts from which to search: those not worse than any neighbour, and the best of all."""
    inside = (vectors @ space.screen).reshape(len(vectors), -1, len(space.basis))
    kept = np.einsum("nmk,nmk->nm", inside, inside)
    lowest = np.ones(kept.shape, np.bool_)
    for neighbour in space.neighbours.T:
        lowest &= kept >= kept[:, neighbour]
    # Where all are alike, as many as a generic tensor has are plenty.
    lowest &= lowest.cumsum(axis=1) <= _MOST_STARTS
    # Narrow curved valleys hide a minimum from its neighbours: the best starts take part whatever theirs are.
    best = np.argpartition(kept, -_BEST_STARTS, axis=1)[:, -_BEST_STARTS:]
    np.put_along_axis(lowest, best, True, axis=1)
    member, start = np.nonzero(lowest)
    return member, start


_MOST_STARTS: Final = 60
_BEST_STARTS: Final = 10


def _refine(matrices: Array, member: NDArray[np.intp], quaternions: Array, space: SearchSpace) -> tuple[Array, Array]:
    """Return the minima reached from starts, as quaternions and half squared distances."""
    quaternions = quaternions.copy()
    values, steps = _evaluate(matrices[member], quaternions, space)
    active = np.arange(len(member))
    for _ in range(_STEPS):
        moved = multiply(_turns(steps[active], space), quaternions[active])
        moved /= np.linalg.norm(moved, axis=1, keepdims=True)
        new_values, new_steps = _evaluate(matrices[member[active]], moved, space)
        lengths = np.abs(steps[active]).max(axis=1)
        better = new_values <= values[active]
        taken = active[better]
        quaternions[taken], values[taken], steps[taken] = moved[better], new_values[better], new_steps[better]
        steps[active[~better]] *= 0.25
        active = active[lengths > _LAST_STEP]
        if not len(active):
            break
    return quaternions, values


def _turns(steps: Array, space: SearchSpace) -> Array:
    """Return the quaternions of small turns about the axes that matter."""
    half = 0.5 * steps @ space.turns
    angle = np.linalg.norm(half, axis=1, keepdims=True)
    return np.concatenate([np.cos(angle), half * np.sinc(angle / np.pi)], axis=1)


def _evaluate(matrices: Array, quaternions: Array, space: SearchSpace) -> tuple[Array, Array]:
    """Return half the squared distances, and the Newton steps from here, downhill also where the curvature is not."""
    value, gradient, hessian, square = _derivatives(matrices, quaternions, space)
    curvature, directions = np.linalg.eigh(hessian)
    floor = _FLOOR * square[:, None] + np.finfo(np.float64).tiny
    along = (gradient[:, None, :] @ directions)[:, 0] / np.maximum(np.abs(curvature), floor)
    step = -(directions @ along[..., None])[..., 0]
    length = np.linalg.norm(step, axis=1, keepdims=True)
    return value, step * np.minimum(1.0, _LONGEST_STEP / np.maximum(length, _LONGEST_STEP))


def _derivatives(matrices: Array, quaternions: Array, space: SearchSpace) -> tuple[Array, Array, Array, Array]:
    """Return half the squared distance, its gradient and Hessian along the turns, and the squared norm.

    With c the constants along the axes, P the projector and r = c - P c: f = r.r / 2, f_a = r.D_a c, and
    f_ab = D_a c.(1 - P) D_b c - D_a r.D_b c, symmetrised, since D_a is antisymmetric.
    """
    c = constants(turn_matrices(matrices, from_quaternion(quaternions, scalar="first")))
    basis, size = space.basis, len(space.rates)
    rest = c - (c @ basis.T) @ basis
    all_rates = space.rates.reshape(-1, 21).T
    change = (c @ all_rates).reshape(-1, size, 21)
    change_of_rest = (rest @ all_rates).reshape(-1, size, 21)
    inside = change @ basis.T
    across = change.swapaxes(-1, -2)
    cross = change_of_rest @ across
    hessian = change @ across - inside @ inside.swapaxes(-1, -2) - 0.5 * (cross + cross.swapaxes(-1, -2))
    gradient = (change @ rest[..., None])[..., 0]
    return 0.5 * (rest * rest).sum(axis=1), gradient, hessian, (c * c).sum(axis=1)


def _representative(quaternions: Array, space: SearchSpace) -> Array:
    """Return, of all equivalent axes, those that are nearest to the present axes."""
    all_of_them = multiply(space.equivalents[:, None], quaternions)
    if len(space.free):
        # Turn about the free axis until the scalar part is largest.
        vector = all_of_them[..., 1:] @ space.free[0]
        half = np.arctan2(-vector, all_of_them[..., 0])
        turn = np.concatenate([np.cos(half)[..., None], np.sin(half)[..., None] * space.free[0]], axis=-1)
        all_of_them = multiply(turn, all_of_them)
    scalars = np.abs(all_of_them[..., 0])
    # The first of those that are equally near, whatever the rounding.
    choice = (scalars > scalars.max(axis=0) - _TIE).argmax(axis=0)
    chosen = all_of_them[choice, np.arange(len(quaternions))]
    return np.asarray(chosen * np.where(chosen[:, :1] < 0.0, -1.0, 1.0))


_TIE: Final = 1e-9


def _closeness(tried: Array, chosen: Array, space: SearchSpace) -> Array:
    """Return the cosines of the angle between free axes, or of half the angle between equivalent axes, (n, w)."""
    if len(space.free):
        axes = [from_quaternion(q, scalar="first", normalize=True) for q in (_nonzero(tried), chosen[:, None])]
        first, second = (space.free[0] @ a for a in axes)
        return np.asarray(np.abs((first * second).sum(axis=-1)))
    equal = multiply(space.equivalents[:, None], chosen)
    return np.asarray(np.abs(np.einsum("enk,nwk->enw", equal, tried)).max(axis=0))


def _nonzero(quaternions: Array) -> Array:
    """Return quaternions with the identity where a tensor has no more starts."""
    empty = ~quaternions.any(axis=-1, keepdims=True)
    return np.where(empty, [1.0, 0.0, 0.0, 0.0], quaternions)


def _loose(matrices: Array, whole: Array, quaternions: Array, space: SearchSpace) -> NDArray[np.bool_]:
    """Return which own axes can turn without effect on the distance: those not along every such turn."""
    _, _, hessian, square = _derivatives(matrices, quaternions, space)
    curvature, directions = np.linalg.eigh(hessian)
    # The rounding of the tensor shows in the curvature, too.
    threshold = _SOFT * square + _ROUNDING * whole * np.sqrt(square)
    null = curvature <= threshold[:, None]
    turns = directions.swapaxes(-1, -2) @ space.turns
    moves = np.sqrt(np.maximum(0.0, 1.0 - turns**2)) > _ALONG
    free = (np.sqrt(np.maximum(0.0, 1.0 - space.free**2)) > _ALONG).any(axis=0)
    return np.asarray((null[..., None] & moves).any(axis=1) | free)


_ROUNDING: Final = 1e-14
_ALONG: Final = 1e-3
