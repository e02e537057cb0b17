"""Misuse of elastic constants that a type checker must reject."""

from fourthrank.moduli import Isotropic, Orthotropic, engineering_constants

Isotropic.from_two(E=1.0)  # rejected
Isotropic.from_two(E=1.0, nu=0.3, G=0.4)  # rejected
Isotropic.from_two(E=1.0, mu=0.4)  # rejected
Isotropic.from_two(E=1.0, M=2.0)  # rejected
Isotropic.from_two(E=1.0, M=2.0, branch="upper")  # rejected
Isotropic.from_two(1.0, 0.3)  # rejected
Orthotropic(E1=1, E2=1, E3=1, G12=1, G13=1, G23=1, nu12=0.1, nu13=0.1)  # rejected
Orthotropic(E1=1, E2=1, E3=1, G12=1, G13=1, G23=1, nu12=0.1, nu21=0.1, nu23=0.1)  # rejected
Orthotropic.from_stiffness(Isotropic.from_two(E=1.0, nu=0.3).compliance())  # rejected
Isotropic.from_compliance(Isotropic.from_two(E=1.0, nu=0.3).stiffness())  # rejected
engineering_constants(Isotropic.from_two(E=1.0, nu=0.3))  # rejected
