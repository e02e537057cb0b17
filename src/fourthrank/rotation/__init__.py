"""Rotations: matrices that turn a body, sets of axes, and the 6x6 (Bond) matrices of a rotation.

There are two questions, and each has its own call. ``x.rotate(R)`` turns the body and keeps the axes: a vector of the
body goes from v to R v. ``x.in_axes(A)`` keeps the body and changes the axes: the rows of A are the new axes, written
in the old ones, and a vector has the new components A v. The axes that a turn by R takes the old axes to are the rows
of the transpose of R.
"""

from .axes import axes_from_vectors
from .bond import mandel_matrix, strain_matrix, stress_matrix
from .constructors import (
    about_axis,
    cube_rotations,
    from_bunge_euler,
    from_euler,
    from_quaternion,
    from_rotation_vector,
    random,
)
from .crystal import Setting, axes_between_settings, crystal_directions, lattice_vectors, plane_normals
from .matrices import RotationLike, SupportsAsMatrix
from .matrices import take_rotation as take_rotation  # for use inside the library
from .measures import angle_between, nearest
from .turn import Turn

__all__ = [
    "RotationLike",
    "Setting",
    "SupportsAsMatrix",
    "Turn",
    "about_axis",
    "angle_between",
    "axes_between_settings",
    "axes_from_vectors",
    "crystal_directions",
    "cube_rotations",
    "from_bunge_euler",
    "from_euler",
    "from_quaternion",
    "from_rotation_vector",
    "lattice_vectors",
    "mandel_matrix",
    "nearest",
    "plane_normals",
    "random",
    "strain_matrix",
    "stress_matrix",
]
