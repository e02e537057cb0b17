"""Crystal axes: Cartesian axes set in a lattice by name, crystal directions and plane normals.

A lattice is given by the lengths of its vectors a, b, c and the angles alpha (between b and c), beta (c, a) and gamma
(a, b). How Cartesian axes x1, x2, x3 lie in it is a convention, and published constants differ by it: here it always
has a name.
"""

from typing import Final, Literal, NamedTuple, TypeAlias, get_args

import numpy as np
from numpy.typing import ArrayLike, NDArray

from .._arrays import broadcast_batches, check_finite, member_text, take_in
from .._packing.weights import label_indices
from ..errors import RotationError
from .axes import axes_from_vectors
from .matrices import cosine_sine, first_member, real, take_vectors, unit_vectors

__all__ = ["Setting", "axes_between_settings", "crystal_directions", "lattice_vectors", "plane_normals"]

Setting: TypeAlias = Literal[
    "x3 along c, x1 along a",
    "x3 along c, x1 along a*",
    "x3 along c, x2 along b*",
    "x1 along a, x3 along c*",
    "IEEE 176 triclinic",
    "IEEE 176 monoclinic",
    "IEEE 176 orthorhombic",
    "IEEE 176 tetragonal",
    "IEEE 176 trigonal",
    "IEEE 176 hexagonal",
    "IEEE 176 cubic",
]
"""How Cartesian axes lie in a lattice; a star marks a vector of the reciprocal lattice (a* is normal to b and c)."""


def lattice_vectors(
    lengths: ArrayLike, angles: ArrayLike, *, setting: Setting, degrees: bool = False
) -> NDArray[np.float64]:
    """Return the lattice vectors a, b, c in the Cartesian axes of a named setting.

    The rows of the result L are a, b and c: the vector of the lattice ``u a + v b + w c`` has the Cartesian components
    ``x_j = u_i L_ij``. Constants published 'along x1, x2, x3' refer to these axes. To go to other axes, get vectors
    from `crystal_directions` or `plane_normals`, a set of axes from `axes_from_vectors`, and use ``x.in_axes(A)``; the
    crystal that is turned to lie along the coordinate axes is ``x.rotate(A)``.

    Parameters
    ----------
    lengths : array_like, shape (..., 3)
        The lengths of a, b and c, in any unit.
    angles : array_like, shape (..., 3)
        The angles alpha, beta and gamma.
    setting : Setting
        How the axes lie:

        - ``"x3 along c, x1 along a"``: possible where beta is a right angle only.
        - ``"x3 along c, x1 along a*"``, ``"x3 along c, x2 along b*"``, ``"x1 along a, x3 along c*"``: always possible.
          In a hexagonal lattice a and a* are 30 degrees apart.
        - ``"IEEE 176 ..."``, the convention of that standard for a crystal system: triclinic x3 along c, x2 along b*;
          monoclinic (b unique) x2 along b, x3 along c; orthorhombic, tetragonal and cubic along a, b, c; trigonal and
          hexagonal x3 along c, x1 along a. The lattice must fit the system. Which lattice vector is called a, b or c,
          and the senses that the standard takes from the signs of piezoelectric constants, are up to the caller.
    degrees : bool
        Whether the angles are in degrees and not in radians. Right angles come out exact then.

    Returns
    -------
    ndarray of float64, shape (..., 3, 3)
        The vectors, one in each row, in the unit of the lengths.

    Raises
    ------
    RotationError
        If `setting` is unknown or impossible in this lattice, a length or an angle is out of range, or the angles do
        not close to a lattice.
    ShapeError, DataError
        If a trailing shape is not (3,), the batches do not broadcast, or something is not finite.

    References
    ----------
    IEEE Std 176-1987, Standard on Piezoelectricity, section 3.2; Nye, J. F. (1957), Physical Properties of Crystals,
    appendix B.

    Examples
    --------
    >>> from fourthrank import rotation
    >>> rotation.lattice_vectors(
    ...     [4.9, 4.9, 5.4], [90, 90, 120], setting="IEEE 176 trigonal", degrees=True
    ... ).round(3)
    array([[ 4.9  ,  0.   ,  0.   ],
           [-2.45 ,  4.244,  0.   ],
           [ 0.   ,  0.   ,  5.4  ]])
    """
    rule = _read_setting(setting, "setting")
    abc, cosines, sines = _read_lattice(lengths, angles, degrees)
    if rule.system is not None:
        _check_system(abc, cosines, rule.system, setting)
    vectors = _in_standard_axes(abc, cosines, sines)
    directions = {"a": vectors[..., 0, :], "b": vectors[..., 1, :], "c": vectors[..., 2, :]}
    reciprocal = _reciprocal(vectors)
    directions |= {"a*": reciprocal[..., 0, :], "b*": reciprocal[..., 1, :], "c*": reciprocal[..., 2, :]}
    if rule.right_angle:
        _check_right_angle(cosines[..., 1], setting)
    along = {name: directions[direction] for name, direction in rule.along}
    # The two directions are perpendicular, so that nothing hangs on which is kept exactly.
    axes = axes_from_vectors(x1=along.get("x1"), x2=along.get("x2"), x3=along["x3"], exact="x3")
    return np.asarray(vectors @ axes.swapaxes(-1, -2) + 0.0)  # no minus zeros


def crystal_directions(uvw: ArrayLike, lattice: ArrayLike) -> NDArray[np.float64]:
    """Return unit vectors along crystal directions [uvw]: along ``u_i L_ij``, L being the lattice vectors (rows).

    The components are Cartesian, along the axes in which `lattice` is written. As x1, x2 or x3 of `axes_from_vectors`
    they give axes A: the components of a tensor along them are ``x.in_axes(A)``, and the crystal turned so that these
    directions come to lie along the coordinate axes is ``x.rotate(A)``.

    Parameters
    ----------
    uvw : array_like, shape (..., 3)
        Indices of directions; for the four-index form of hexagonal lattices convert them first.
    lattice : array_like, shape (..., 3, 3)
        Lattice vectors, one in each row, as `lattice_vectors` gives them; batches broadcast.

    Returns
    -------
    ndarray of float64, shape (..., 3)
        Unit vectors.

    Raises
    ------
    RotationError
        If a direction is [000], or a lattice has no volume.
    ShapeError, DataError
        If a trailing shape does not fit, the batches do not broadcast, or something is not finite.

    Examples
    --------
    >>> from fourthrank import rotation
    >>> cubic = rotation.lattice_vectors([1, 1, 1], [90, 90, 90], setting="IEEE 176 cubic", degrees=True)
    >>> rotation.crystal_directions([1, 1, 0], cubic).round(6)
    array([0.707107, 0.707107, 0.      ])
    """
    return _combine(uvw, "uvw", _read_vectors(lattice))


def plane_normals(hkl: ArrayLike, lattice: ArrayLike) -> NDArray[np.float64]:
    """Return unit normals of crystal planes (hkl): along ``h_i B_ij``, B being the reciprocal vectors (rows).

    The components are Cartesian, along the axes in which `lattice` is written; they are used like those of
    `crystal_directions`, with `axes_from_vectors`, ``x.in_axes(A)`` and ``x.rotate(A)``.

    Parameters
    ----------
    hkl : array_like, shape (..., 3)
        Miller indices of planes.
    lattice : array_like, shape (..., 3, 3)
        Lattice vectors, one in each row, as `lattice_vectors` gives them; batches broadcast.

    Returns
    -------
    ndarray of float64, shape (..., 3)
        Unit vectors, on the positive side of each plane.

    Raises
    ------
    RotationError
        If a plane is (000), or a lattice has no volume.
    ShapeError, DataError
        If a trailing shape does not fit, the batches do not broadcast, or something is not finite.

    Examples
    --------
    >>> from fourthrank import rotation
    >>> zinc = rotation.lattice_vectors([2.66, 2.66, 4.95], [90, 90, 120], setting="IEEE 176 hexagonal", degrees=True)
    >>> rotation.plane_normals([0, 1, 0], zinc)
    array([0., 1., 0.])
    """
    return _combine(hkl, "hkl", _reciprocal(_read_vectors(lattice)))


def axes_between_settings(
    lengths: ArrayLike, angles: ArrayLike, *, source: Setting, target: Setting, degrees: bool = False
) -> NDArray[np.float64]:
    """Return the axes of one setting, written in the axes of another: ``v_target_i = A_ij v_source_j``.

    For x along the axes of `source`, ``x.in_axes(A)`` gives the components along the axes of `target`. The same crystal
    is meant; ``x.rotate(A.swapaxes(-1, -2))`` would turn it as the axes turn.

    Parameters
    ----------
    lengths, angles : array_like, shape (..., 3)
        The lattice, as in `lattice_vectors`.
    source, target : Setting
        From which setting to which.
    degrees : bool
        Whether the angles are in degrees and not in radians.

    Returns
    -------
    ndarray of float64, shape (..., 3, 3)
        Axes, one in each row.

    Raises
    ------
    RotationError, ShapeError, DataError
        As `lattice_vectors`.

    Examples
    --------
    >>> from fourthrank import rotation
    >>> A = rotation.axes_between_settings(
    ...     [2.66, 2.66, 4.95], [90, 90, 120], degrees=True,
    ...     source="x3 along c, x1 along a*", target="IEEE 176 hexagonal",
    ... )
    >>> A.round(6)
    array([[ 0.866025, -0.5     ,  0.      ],
           [ 0.5     ,  0.866025,  0.      ],
           [ 0.      ,  0.      ,  1.      ]])
    """
    _read_setting(source, "source")
    _read_setting(target, "target")
    # The same vectors, first in the old components and then in the new ones: new = old A^T.
    old = lattice_vectors(lengths, angles, setting=source, degrees=degrees)
    new = lattice_vectors(lengths, angles, setting=target, degrees=degrees)
    frame = axes_from_vectors(x3=old[..., 2, :], x1=old[..., 0, :], exact="x3")
    other = axes_from_vectors(x3=new[..., 2, :], x1=new[..., 0, :], exact="x3")
    return np.asarray(other.swapaxes(-1, -2) @ frame + 0.0)


class _Rule(NamedTuple):
    along: tuple[tuple[str, str], tuple[str, str]]
    right_angle: bool = False
    system: str | None = None


_RULES: Final[dict[str, _Rule]] = {
    "x3 along c, x1 along a": _Rule((("x3", "c"), ("x1", "a")), right_angle=True),
    "x3 along c, x1 along a*": _Rule((("x3", "c"), ("x1", "a*"))),
    "x3 along c, x2 along b*": _Rule((("x3", "c"), ("x2", "b*"))),
    "x1 along a, x3 along c*": _Rule((("x3", "c*"), ("x1", "a"))),
    "IEEE 176 triclinic": _Rule((("x3", "c"), ("x2", "b*"))),
    "IEEE 176 monoclinic": _Rule((("x3", "c"), ("x2", "b")), system="monoclinic"),
    "IEEE 176 orthorhombic": _Rule((("x3", "c"), ("x1", "a")), system="orthorhombic"),
    "IEEE 176 tetragonal": _Rule((("x3", "c"), ("x1", "a")), system="tetragonal"),
    "IEEE 176 trigonal": _Rule((("x3", "c"), ("x1", "a")), system="hexagonal"),
    "IEEE 176 hexagonal": _Rule((("x3", "c"), ("x1", "a")), system="hexagonal"),
    "IEEE 176 cubic": _Rule((("x3", "c"), ("x1", "a")), system="cubic"),
}


class _System(NamedTuple):
    equal: tuple[str, ...]
    cosines: dict[str, float]


# What a crystal system demands of its lattice. Trigonal crystals are described by hexagonal axes.
_SYSTEMS: Final[dict[str, _System]] = {
    "monoclinic": _System((), {"alpha": 0.0, "gamma": 0.0}),
    "orthorhombic": _System((), {"alpha": 0.0, "beta": 0.0, "gamma": 0.0}),
    "tetragonal": _System(("a", "b"), {"alpha": 0.0, "beta": 0.0, "gamma": 0.0}),
    "hexagonal": _System(("a", "b"), {"alpha": 0.0, "beta": 0.0, "gamma": -0.5}),
    "cubic": _System(("a", "b", "c"), {"alpha": 0.0, "beta": 0.0, "gamma": 0.0}),
}
_FIT: Final = 1e-6
"""How closely lengths (relative) and cosines must fit a crystal system, or a right angle."""
_FLAT: Final = 1e-6
"""A lattice whose volume is smaller than this part of the product of its lengths has none."""
_LENGTHS: Final = ("a", "b", "c")
_ANGLES: Final = ("alpha", "beta", "gamma")


def _read_setting(setting: str, name: str) -> _Rule:
    rule = _RULES.get(setting)
    if rule is None:
        known = ", ".join(f"'{known}'" for known in get_args(Setting))
        raise RotationError(f"{name} must be one of {known}; got {name}={setting!r}")
    return rule


def _read_lattice(
    lengths: ArrayLike, angles: ArrayLike, degrees: bool
) -> tuple[NDArray[np.float64], NDArray[np.float64], NDArray[np.float64]]:
    """Return the lengths, and the cosines and sines of the angles, with a common batch."""
    abc, corners = take_vectors(lengths, "lengths"), take_vectors(angles, "angles")
    batch = broadcast_batches(lengths=abc.shape[:-1], angles=corners.shape[:-1])
    for array, names, largest, what in (
        (abc, _LENGTHS, np.inf, "positive"),
        (corners, _ANGLES, 180.0 if degrees else np.pi, "between 0 and 180 degrees"),
    ):
        bad = (array <= 0.0) | (array >= largest)
        if bad.any():
            *member, k = (int(n) for n in np.unravel_index(int(bad.argmax()), bad.shape))
            raise RotationError(f"{names[k]}{member_text(member)} must be {what}, got {array[(*member, k)]:.6g}")
    cosines, sines = cosine_sine(corners, degrees)
    shape = (*batch, 3)
    return np.broadcast_to(abc, shape), np.broadcast_to(cosines, shape), np.broadcast_to(sines, shape)


def _check_system(abc: NDArray[np.float64], cosines: NDArray[np.float64], name: str, setting: str) -> None:
    system = _SYSTEMS[name]
    same = [np.abs(abc[..., _LENGTHS.index(k)] / abc[..., 0] - 1.0) for k in system.equal]
    turned = [np.abs(cosines[..., _ANGLES.index(k)] - value) for k, value in system.cosines.items()]
    bad = np.max(np.stack([*same, *turned]), axis=0) > _FIT
    if bad.any():
        lengths = " = ".join(system.equal)
        angles = ", ".join(f"{k} = {'90' if value == 0.0 else '120'} degrees" for k, value in system.cosines.items())
        raise RotationError(
            f"the lattice{first_member(bad)} does not fit {setting!r}, which needs {lengths}{', ' if lengths else ''}"
            f"{angles} to 1e-6; name another setting, or correct the lattice"
        )


def _check_right_angle(cosine: NDArray[np.float64], setting: str) -> None:
    bad = np.abs(cosine) > _FIT
    if bad.any():
        beta = float(np.rad2deg(np.arccos(cosine[bad][0])))
        raise RotationError(
            f"{setting!r} is impossible in the lattice{first_member(bad)}: c and a are not perpendicular (beta is "
            f"{beta:.6g} degrees); 'x3 along c, x1 along a*' and 'x1 along a, x3 along c*' are the two ways out"
        )


def _in_standard_axes(
    abc: NDArray[np.float64], cosines: NDArray[np.float64], sines: NDArray[np.float64]
) -> NDArray[np.float64]:
    """Return the lattice vectors with x1 along a and x3 along c*."""
    unit = np.zeros((*abc.shape[:-1], 3, 3))
    unit[..., 0, 0] = 1.0
    unit[..., 1, 0], unit[..., 1, 1] = cosines[..., 2], sines[..., 2]
    unit[..., 2, 0] = cosines[..., 1]
    unit[..., 2, 1] = (cosines[..., 0] - cosines[..., 1] * cosines[..., 2]) / sines[..., 2]
    height = 1.0 - unit[..., 2, 0] ** 2 - unit[..., 2, 1] ** 2
    flat = np.asarray(height <= _FLAT**2)
    if flat.any():
        raise RotationError(
            f"the angles{first_member(flat)} do not close to a lattice: each must be smaller than the sum of the other "
            "two, and all three together smaller than 360 degrees"
        )
    unit[..., 2, 2] = np.sqrt(height)
    return np.asarray(unit * abc[..., :, None])


def _reciprocal(vectors: NDArray[np.float64]) -> NDArray[np.float64]:
    """Return vectors along a*, b*, c*, as in the reciprocal lattice but for a positive factor common to all."""
    a, b, c = (vectors[..., k, :] for k in range(3))
    handed = np.sign(_volume(vectors))[..., None, None]
    return np.asarray(handed * np.stack([np.cross(b, c), np.cross(c, a), np.cross(a, b)], axis=-2))


def _volume(vectors: NDArray[np.float64]) -> NDArray[np.float64]:
    a, b, c = (vectors[..., k, :] for k in range(3))
    return np.asarray((a * np.cross(b, c)).sum(axis=-1))


def _read_vectors(lattice: ArrayLike) -> NDArray[np.float64]:
    """Return lattice vectors that span a volume, scaled so that the longest component is 1."""
    given = real(take_in(lattice, "lattice", (3, 3)), "lattice")
    check_finite(given, "lattice", 2, label_indices)
    vectors = given.astype(np.float64, copy=False)
    largest = np.abs(vectors).max(axis=(-2, -1), keepdims=True)
    vectors = vectors / np.where(largest == 0.0, 1.0, largest)
    flat = np.abs(_volume(vectors)) <= _FLAT * np.linalg.norm(vectors, axis=-1).prod(axis=-1)
    if flat.any():
        raise RotationError(
            f"lattice{first_member(flat)} has no volume: its three rows must be vectors that do not lie in a plane"
        )
    return vectors


def _combine(indices: ArrayLike, name: str, vectors: NDArray[np.float64]) -> NDArray[np.float64]:
    given = take_vectors(indices, name)
    broadcast_batches(**{name: given.shape[:-1], "lattice": vectors.shape[:-2]})
    none = np.asarray((given == 0.0).all(axis=-1))
    if none.any():
        raise RotationError(f"{name}{first_member(none)} is (0, 0, 0): it has no direction")
    return unit_vectors((given[..., None, :] @ vectors)[..., 0, :] + 0.0, name)
