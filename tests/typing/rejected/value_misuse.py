"""Misuse of values and notations; every line that ends in `# rejected` must be an error, no other may."""

import numpy as np

from fourthrank import Compliance, Notation, Ordering, Stiffness, Strain, Stress, Translator, rotation

order = Ordering("11 22 33 23 13 12")
voigt = Notation.voigt(order)
array = np.eye(6)
C = Stiffness.from_matrix(array, voigt)
S = Compliance.from_matrix(array, voigt)
sigma = Stress.from_vector(array[0], voigt)
eps = Strain.from_vector(array[0], voigt)

print(C @ sigma)  # rejected
print(S @ eps)  # rejected
print(C @ S)  # rejected
print(C + S)  # rejected
print(C - S)  # rejected
print(sigma + eps)  # rejected
print(C * C)  # rejected
print(C + 1.0)  # rejected
print(C * array)  # rejected
print(len(C))  # rejected
print(list(C))  # rejected
C.shape = (1,)  # rejected
C[0] = C  # rejected
print(C.matrix())  # rejected
print(C.matrix("voigt"))  # rejected
print(sigma.vector())  # rejected
print(C.triangle(voigt))  # rejected
print(C.triangle(voigt, by="row"))  # rejected
print(C.table(voigt))  # rejected
print(C.allclose(S))  # rejected
print(sigma.dot(sigma))  # rejected
print(eps.dot(eps))  # rejected
Stiffness.from_matrix(array)  # rejected
Stiffness.from_matrix(array, order)  # rejected
Stiffness.from_triangle(array[0], voigt)  # rejected
Stress.from_vector(array[0])  # rejected
Notation(order)  # rejected
Notation.voigt()  # rejected
Notation.mandel("11 22 33 23 13 12")  # rejected
Translator(order, order)  # rejected
voigt.pack_map(array, rows="stresses", columns="strain")  # rejected
voigt.pack_triangle(array, by="row")  # rejected
voigt.pack_stress(array, array)  # rejected
rotation.axes_from_vectors(x1=[1, 0, 0], x2=[0, 1, 0])  # rejected
rotation.stress_matrix(np.eye(3))  # rejected
Stiffness.stack([C, S])  # rejected
Stiffness(array, voigt)  # rejected
print(array * C)  # rejected
