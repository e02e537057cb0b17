"""The stiffness of a timber deck panel, from the printed page of a handbook to the input of a solver.

The scenario is invented: a deck panel is cut from Douglas-fir so that the grain runs at an angle to the panel's edge
and the growth rings are inclined to its faces. The data of the wood are those of the Wood Handbook; beside each figure
stands whether it was read in print.

Run with ``python docs/examples/timber_panel.py``; it prints a page to file with the calculation.
"""

import numpy as np

from fourthrank import Notation, Ordering, Stiffness
from fourthrank.assurance import admissibility
from fourthrank.moduli import Orthotropic, engineering_constants
from fourthrank.rotation import axes_from_vectors

WIDTH = 100
SOURCE = "Forest Products Laboratory, Wood Handbook, FPL-GTR-282 (2021), Tables 5-1, 5-2 and 5-3"

# Axes of the wood: 1 = L (along the grain), 2 = R (across the growth rings), 3 = T (along the rings).
# Ratios of the moduli of elasticity to E_L at 12 % moisture, Table 5-1; read in print.
RATIO_ER, RATIO_ET = 0.068, 0.050
# Ratios of the shear moduli to E_L, same table; value from memory.
RATIO_GLR, RATIO_GLT, RATIO_GRT = 0.064, 0.078, 0.007
# Poisson's ratios, Table 5-2: nu_ij is the strain along j under stress along i; all six read in print.
NU_LR, NU_LT, NU_RT = 0.292, 0.449, 0.390
NU_RL, NU_TL, NU_TR = 0.036, 0.029, 0.374
# Modulus of elasticity in bending of the coast type, GPa, Table 5-3, and the handbook's rule that E_L is about 1.10 of
# it, since bending tests include some deflection by shear; values from memory.
E_BENDING, SHEAR_ALLOWANCE = 13.4, 1.10

# The panel (invented): x along its edge, y across it, z normal to its faces.
GRAIN_ANGLE = 20.0  # degrees, from x to the grain, in the plane of the panel
RING_ANGLE = 35.0  # degrees, by which the radial direction leaves the plane of the panel

# What the solver reads (invented): its component order, and engineering shear strain.
SOLVER = Notation.voigt(Ordering("11 22 33 12 13 23"))
# What the wood's own table is shown in.
WOOD = Notation.voigt(Ordering("11 22 33 23 13 12"))


def main() -> None:
    """Print the page."""
    heading("Stiffness of a Douglas-fir deck panel")
    print(f"Source of the wood's data: {SOURCE}.")
    print("Read in print: E_R/E_L, E_T/E_L and the six Poisson's ratios. From memory, check before use: the")
    print("ratios of the shear moduli, the bending modulus of the coast type, and the factor from it to E_L.")
    print("Axes of the wood: 1 = L along the grain, 2 = R across the growth rings, 3 = T along them. 12 % moisture.")

    E_L = SHEAR_ALLOWANCE * E_BENDING
    print_reciprocity(E_L)
    wood = Orthotropic(
        E1=E_L,
        E2=RATIO_ER * E_L,
        E3=RATIO_ET * E_L,
        G12=RATIO_GLR * E_L,
        G13=RATIO_GLT * E_L,
        G23=RATIO_GRT * E_L,
        nu12=NU_LR,
        nu13=NU_LT,
        nu23=NU_RT,
    )
    C_wood = wood.stiffness()
    heading("The wood in its own axes L, R, T")
    print(C_wood.table(WOOD, unit="GPa", digits=5))
    print()
    print(admissibility(C_wood))

    heading("The panel's axes")
    axes = panel_axes()
    print(
        f"Grain {GRAIN_ANGLE:g} degrees from the panel's edge x, in its plane; radial direction {RING_ANGLE:g} degrees"
    )
    print("out of the plane. The panel's axes, written in the wood's axes (rows x, y, z; columns L, R, T):")
    for name, axis in zip("xyz", axes, strict=True):
        print(f"  {name}  " + "  ".join(f"{component + 0.0:8.5f}" for component in axis))
    C = C_wood.in_axes(axes)
    print()
    print(admissibility(C))

    heading("For the solver: stiffness in the panel's axes (1 = x, 2 = y, 3 = z)")
    print(C.table(SOLVER, unit="GPa", digits=5))
    print()
    print("The 21 constants of the upper triangle, column by column, in GPa:")
    triangle = C.triangle(SOLVER, by="columns")
    print_triangle(triangle)
    print_read_back(C, triangle)

    heading("For the engineer: constants in the panel's axes")
    print(engineering_constants(C).table(unit="GPa"))
    print("The panel's axes are no axes of symmetry of the wood: stress along one of them also shears the panel, see")
    print("the matrix above. These twelve constants alone do not describe it.")

    heading("Caution")
    print("Handbook ratios are averages over few specimens, and the panel is invented. Data and results need")
    print("checking by a qualified engineer before anything is built on them; local codes and licensed practice")
    print("come first. Wood is elastic only at small stress, constant moisture and short duration of load.")


def heading(text: str) -> None:
    """Print a heading."""
    print(f"\n{text}\n{'-' * min(len(text), WIDTH)}")


def print_reciprocity(E_L: float) -> None:
    """Print how far the printed Poisson's ratios depart from nu_ij / E_i = nu_ji / E_j."""
    heading("Reciprocity of the printed Poisson's ratios")
    print("An elastic solid has nu_ij / E_i = nu_ji / E_j. The printed ratios of a pair were measured apart:")
    modulus = {"L": E_L, "R": RATIO_ER * E_L, "T": RATIO_ET * E_L}
    print("  pair   printed         nu_ji from nu_ij   printed nu_ji departs by")
    for i, j, nu_ij, nu_ji in (("L", "R", NU_LR, NU_RL), ("L", "T", NU_LT, NU_TL), ("R", "T", NU_RT, NU_TR)):
        needed = nu_ij * modulus[j] / modulus[i]
        print(
            f"  {i}{j} {j}{i}  {nu_ij:.3f}  {nu_ji:.3f}    {needed:.4f}             {100 * (nu_ji / needed - 1):+.1f} %"
        )
    print("Choice made here: nu_LR, nu_LT and nu_RT are kept, since the larger strain of each pair is measured with")
    print("the smaller relative error; the other three follow from reciprocity.")


def panel_axes() -> np.ndarray[tuple[int, ...], np.dtype[np.float64]]:
    """Return the panel's axes, one a row, written in the wood's axes."""
    grain, ring = np.deg2rad((GRAIN_ANGLE, RING_ANGLE))
    along = [np.cos(grain), np.sin(grain), 0.0]
    across = [-np.sin(grain) * np.cos(ring), np.cos(grain) * np.cos(ring), np.sin(ring)]
    # The wood's axes written in the panel's; the transpose holds the panel's axes written in the wood's.
    return axes_from_vectors(x1=along, x2=across, exact="x1").T


def print_triangle(triangle: np.ndarray[tuple[int, ...], np.dtype[np.float64]]) -> None:
    """Print 21 constants, one column of the triangle a line, digits enough to read them back exactly."""
    labels = SOLVER.ordering.labels()
    start = 0
    for column, label in enumerate(labels):
        values = triangle[start : start + column + 1]
        print(f"  column {label}: " + " ".join(f"{float(value)!r}" for value in values))
        start += column + 1


def print_read_back(C: Stiffness, triangle: np.ndarray[tuple[int, ...], np.dtype[np.float64]]) -> None:
    """Read the printed constants back and print what changed."""
    text = " ".join(repr(float(value)) for value in triangle)
    constants = [float(word) for word in text.split()]
    same = np.array_equal(SOLVER.unpack_triangle(constants, by="columns"), C.matrix(SOLVER))
    again = Stiffness.from_triangle(constants, SOLVER, by="columns")
    moved = float((again - C).norm() / C.norm())
    print(f"Read back from this text: the matrix is the same bit for bit: {'yes' if same else 'NO'};")
    print(f"the tensor made of it differs by {moved:.1e} of its norm (the rounding of a factor sqrt 2).")
    if not same or moved > 4e-16:
        raise SystemExit("reading back has changed the stiffness")


if __name__ == "__main__":
    main()
