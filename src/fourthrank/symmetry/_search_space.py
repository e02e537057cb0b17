"""Where to look for the axes of a class: what leaves the class as it is, where searches start, who is whose neighbour.

Axes that differ by a rotation that maps the invariant tensors of the class onto themselves fit equally well. Leaving
them out shrinks the region that the starts must cover: 24 times for cubic and orthotropic symmetry, and from SO(3) to
the directions of one axis for monoclinic symmetry, transverse isotropy and the Laue classes 4/m and -3.
"""

from dataclasses import dataclass
from functools import lru_cache
from typing import Final

import numpy as np
from numpy.typing import NDArray

from ..rotation.constructors import about_axis, cube_rotations, from_quaternion
from ._invariants import RATES, constants, rotation_action
from .groups import Symmetry

__all__ = ["SearchSpace", "multiply", "search_space"]

Array = NDArray[np.float64]

_SAME_SPACE: Final = 1e-9
_STARTS: Final = 600
"""Starts in the region that is left, about 10 degrees apart: the distance varies over turns of 360 / 8 degrees."""
_STARTS_WHOLE: Final = 6000
_DIRECTIONS: Final = 500
_NEIGHBOURS: Final = 6


@dataclass(frozen=True, slots=True)
class SearchSpace:
    """What the search for the axes of one symmetry needs to know.

    Quaternions have their scalar first; that of axes A turns the present axes' components into those along A.
    """

    basis: Array
    """The invariant tensors in the own axes, (k, 21)."""
    rates: Array
    """Derivatives of the constants along the turns that matter, (p, 21, 21), p = 0, 2 or 3."""
    turns: Array
    """The axes of these turns, (p, 3)."""
    free: Array
    """The own axis whose turns change nothing, (1, 3) or (0, 3)."""
    equivalents: Array
    """Quaternions of rotations that map the invariant tensors onto themselves, (e, 4), the identity first."""
    starts: Array
    """Quaternions of the starts, (m, 4)."""
    screen: Array
    """The map from the constants to their components in the class at every start, (21, m k)."""
    neighbours: NDArray[np.intp]
    """For every start the nearest ones, (m, 6)."""


@lru_cache(maxsize=64)
def search_space(own: Symmetry) -> SearchSpace:
    """Return the search space of a symmetry in its own axes."""
    basis = constants(own.basis)
    leaving = RATES @ basis.T
    leaving = leaving - basis.T @ (basis @ leaving)
    sizes, directions = np.linalg.eigh(np.einsum("aij,bij->ab", leaving, leaving))
    moving = sizes > _SAME_SPACE
    turns = np.eye(3) if moving.all() else directions.T[moving]
    free = directions.T[~moving] if moving.sum() == 2 else np.empty((0, 3))
    if len(free):
        # The closest rotation is easiest to read with the axis itself, not with rounding of it.
        free = np.where(np.abs(free) < _SAME_SPACE, 0.0, free) * np.sign(free.sum())
        equivalents = np.array([[1.0, 0.0, 0.0, 0.0], [0.0, *turns[0]]])
        starts, closeness = _directions(free[0])
    elif moving.any():
        equivalents = _equivalents(own, basis)
        starts = _rotations(equivalents)
        closeness = np.zeros((len(starts), len(starts)))
        for equivalent in equivalents:
            np.maximum(closeness, np.abs(multiply(equivalent, starts) @ starts.T), out=closeness)
    else:  # isotropy and no symmetry at all: every orientation is as good
        equivalents = starts = np.array([[1.0, 0.0, 0.0, 0.0]])
        closeness = np.ones((1, 1))
    np.fill_diagonal(closeness, -1.0)
    in_class = basis @ rotation_action(from_quaternion(starts, scalar="first"))
    return SearchSpace(
        basis,
        np.tensordot(turns, RATES, 1),
        turns,
        free,
        equivalents,
        starts,
        np.ascontiguousarray(in_class.reshape(-1, 21).T),
        np.argsort(-closeness, axis=1, kind="stable")[:, :_NEIGHBOURS],
    )


def multiply(first: Array, second: Array) -> Array:
    """Return the quaternion products, those of the matrices' products; batches broadcast."""
    a, b = np.broadcast_arrays(first, second)
    result = np.empty(a.shape)
    result[..., 0] = a[..., 0] * b[..., 0] - (a[..., 1:] * b[..., 1:]).sum(axis=-1)
    result[..., 1:] = a[..., :1] * b[..., 1:] + b[..., :1] * a[..., 1:]
    for i, j, k in ((1, 2, 3), (2, 3, 1), (3, 1, 2)):
        result[..., i] += a[..., j] * b[..., k] - a[..., k] * b[..., j]
    return result


def _equivalents(own: Symmetry, basis: Array) -> Array:
    """Return the quaternions of the rotations, among likely ones, that map the invariant tensors onto themselves."""
    axes = np.eye(3)
    steps = about_axis(axes[:, None], np.arange(0, 360, 15), degrees=True)
    flips = np.stack([about_axis(axes[(a + 1) % 3], 180.0, degrees=True) for a in range(3)])
    likely = (own.rotations, cube_rotations(), steps.reshape(-1, 3, 3), (steps @ flips[:, None]).reshape(-1, 3, 3))
    rotations = np.concatenate(likely)
    turned = basis @ rotation_action(rotations).swapaxes(-1, -2)
    outside = np.abs(turned - (turned @ basis.T) @ basis).max(axis=(-2, -1))
    found = np.array([[1.0, 0.0, 0.0, 0.0]])
    for q in _quaternions(rotations[outside < _SAME_SPACE]):
        if np.abs(found @ q).max() < 1.0 - _SAME_SPACE:
            found = np.concatenate([found, q[None]])
    return found


def _quaternions(rotations: Array) -> Array:
    """Return unit quaternions of rotations: the dominant eigenvectors of a 4x4 matrix (Bar-Itzhack 2000)."""
    r = rotations
    k = np.zeros((len(r), 4, 4))
    k[:, 0, 0] = r[:, 0, 0] + r[:, 1, 1] + r[:, 2, 2]
    k[:, 1:, 1:] = r + r.swapaxes(-1, -2) - k[:, :1, :1] * np.eye(3)
    for place, i, j in ((1, 2, 1), (2, 0, 2), (3, 1, 0)):
        k[:, 0, place] = k[:, place, 0] = r[:, i, j] - r[:, j, i]
    return np.asarray(np.linalg.eigh(k)[1][..., -1])


def _rotations(equivalents: Array) -> Array:
    """Return starts that cover the rotations that are not equivalent, evenly: a spiral on the sphere of quaternions.

    Alexa (2022), Super-Fibonacci spirals, CVPR, eqs. (7)-(9).
    """
    count = max(_STARTS * len(equivalents), _STARTS_WHOLE)
    s = np.arange(count) + 0.5
    inner, outer = np.sqrt(s / count), np.sqrt(1.0 - s / count)
    alpha, beta = 2.0 * np.pi * s / np.sqrt(2.0), 2.0 * np.pi * s / 1.533751168755204288118041
    q = np.stack([inner * np.sin(alpha), inner * np.cos(alpha), outer * np.sin(beta), outer * np.cos(beta)], axis=-1)
    nearest = np.abs(multiply(equivalents[:, None], q)[..., 0]).max(axis=0)
    return np.ascontiguousarray(q[np.abs(q[:, 0]) >= nearest])


def _directions(axis: Array) -> tuple[Array, Array]:
    """Return starts whose own axis covers a hemisphere evenly (a Fibonacci spiral), and the cosines between them."""
    k = np.arange(_DIRECTIONS)
    height = (k + 0.5) / _DIRECTIONS
    angle = k * np.pi * (3.0 - np.sqrt(5.0))
    radius = np.sqrt(1.0 - height**2)
    local = np.stack([radius * np.cos(angle), radius * np.sin(angle), height], axis=-1)
    # The hemisphere around the axis itself.
    frame = np.linalg.svd(axis[None])[2]
    directions = local @ np.stack([frame[1], frame[2], axis])
    # The shortest rotation from the direction to the axis.
    q = np.concatenate([1.0 + directions @ axis[:, None], np.cross(directions, axis)], axis=1)
    return q / np.linalg.norm(q, axis=1, keepdims=True), np.abs(directions @ directions.T)
