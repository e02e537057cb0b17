"""Read by mypy and pyright, never run: the types that correct use has."""

from typing import assert_type

import numpy as np
from numpy.typing import NDArray

from fourthrank import Compliance, Notation, Ordering, Stiffness, Strain, Stress, Translator, rotation

order = Ordering("11 22 33 23 13 12")
assert_type(order, Ordering)
assert_type(order.size, int)
assert_type(Ordering(((0, 0), (1, 1), (0, 1))).pairs, tuple[tuple[int, int], ...])
assert_type(order.permutation_to(order), NDArray[np.intp])

voigt = Notation.voigt(order, compression_positive=True)
assert_type(voigt, Notation)
assert_type(Notation(order, stress_shear=1, strain_shear=2).work_conjugate, bool)

# A raw array keeps its dtype.
single = np.zeros((3, 3), np.float32)
assert_type(voigt.pack_stress(single), NDArray[np.float32])
assert_type(voigt.unpack_strain(np.zeros(6, np.complex64)), NDArray[np.complex64])
assert_type(voigt.pack_map(np.zeros((3, 3, 3, 3)), rows="strain", columns="strain"), NDArray[np.float64])
assert_type(voigt.pack_stress([[1, 0, 0], [0, 0, 0], [0, 0, 0]]), NDArray[np.inexact])
assert_type(Translator(voigt, voigt).stiffness(np.zeros((6, 6), np.float32)), NDArray[np.float32])

C = Stiffness.from_matrix(np.eye(6), voigt, rtol=1e-6)
S = Compliance.from_triangle(np.ones(21), voigt, by="columns")
sigma = Stress.from_tensor([[1, 0, 0], [0, 0, 0], [0, 0, 0]])
eps = Strain.from_vector([1, 0, 0, 0, 0, 0], voigt)
assert_type(C, Stiffness)
assert_type(S, Compliance)
assert_type(C @ eps, Stress)
assert_type(S @ sigma, Strain)
assert_type(C.inverse(), Compliance)
assert_type(S.inverse(), Stiffness)
assert_type(C + C, Stiffness)
assert_type(2 * C / 3.0 - C, Stiffness)
assert_type(-(eps * 1j), Strain)
assert_type(C[..., None], Stiffness)
assert_type(Stress.stack([sigma, sigma])[0], Stress)
assert_type(sigma.dot(eps), NDArray[np.float64])
assert_type(C.matrix(voigt), NDArray[np.float64])
assert_type(C.norm(), NDArray[np.float64])
R = rotation.about_axis([0, 0, 1], 30, degrees=True)
assert_type(C.rotate(R).in_axes(R), Stiffness)
assert_type(str(C.table(voigt, unit="GPa")), str)
