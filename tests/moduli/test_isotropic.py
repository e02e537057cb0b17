"""Isotropic: fifteen pairs, each against fifty digits and against sympy, tensors both ways, and what is refused."""

import copy
import pickle
from importlib import import_module
from itertools import combinations
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from fourthrank import Compliance, DataError, ModuliError, Notation, Ordering, ShapeError, Stiffness
from fourthrank.moduli import Isotropic
from tests.reference import Case, cases
from tests.strategies import generators

mpmath: Any = import_module("mpmath")  # it has no types
sympy: Any = import_module("sympy")
VOIGT = Notation.voigt(Ordering("11 22 33 23 13 12"))
NAMES = ("E", "nu", "G", "K", "lam", "M")
PAIRS = list(combinations(NAMES, 2))
# Near the incompressible limit, zero, auxetic, and near the lower limit.
RATIOS = [0.5 - 1e-12, 0.4999, 0.3, 0.25, 1e-3, 1e-9, -1e-9, -0.2, -0.7, -1 + 1e-9]


def exact_constants(E: Any, nu: Any) -> dict[str, Any]:
    """Return all six from E and nu by their definitions, in whatever arithmetic E and nu bring."""
    return {
        "E": E,
        "nu": nu,
        "G": E / (2 * (1 + nu)),
        "K": E / (3 * (1 - 2 * nu)),
        "lam": E * nu / ((1 + nu) * (1 - 2 * nu)),
        "M": E * (1 - nu) / ((1 + nu) * (1 - 2 * nu)),
    }


def exact_solution(pair: tuple[str, str], values: tuple[float, float], near: float) -> dict[str, Any]:
    """Solve the definitions for E and nu of two given constants, to fifty digits, near a starting ratio."""
    first, second = (mpmath.mpf(value) for value in values)
    if "nu" in pair:
        nu = dict(zip(pair, (first, second), strict=True))["nu"]
    else:
        # What E is drops out of the quotient, which fixes nu.
        def quotient(nu: Any) -> Any:
            of_one = exact_constants(mpmath.mpf(1), nu)
            return of_one[pair[0]] * second - of_one[pair[1]] * first

        nu = mpmath.findroot(quotient, (mpmath.mpf(near), mpmath.mpf(near) * (1 + mpmath.mpf(10) ** -14)))
    modulus = next(name for name in pair if name != "nu")
    of_one = exact_constants(mpmath.mpf(1), nu)
    E = dict(zip(pair, (first, second), strict=True))[modulus] / of_one[modulus]
    return exact_constants(E, nu)


# E and M differ by 2 nu^2 of themselves: near nu = 0 two doubles do not hold nu, however they are read.
GRID = [(pair, ratio) for pair in PAIRS for ratio in RATIOS if pair != ("E", "M") or abs(ratio) > 1e-6]


@pytest.mark.parametrize(("pair", "ratio"), GRID, ids=[f"{'-'.join(pair)} {ratio!r}" for pair, ratio in GRID])
def test_each_pair_is_accurate_to_the_condition_of_its_map(pair: tuple[str, str], ratio: float) -> None:
    """Relative error below 4 ulp * condition number, the condition number measured on the exact map itself."""
    start = exact_constants(123.456, ratio)
    values = float(start[pair[0]]), float(start[pair[1]])
    options: dict[str, Any] = {"branch": "larger nu" if ratio > 0 else "smaller nu"} if pair == ("E", "M") else {}
    found = Isotropic.from_two(**dict(zip(pair, values, strict=True)), **options)
    ulp = 2.0**-52
    with mpmath.workdps(60):
        exact = exact_solution(pair, values, ratio)
        step = mpmath.mpf(10) ** -25
        moved = [
            exact_solution(pair, (values[0] * (1 + step), values[1]), ratio),
            exact_solution(pair, (values[0], values[1] * (1 + step)), ratio),
        ]
        for name in NAMES:
            condition = sum(abs(other[name] / exact[name] - 1) / step for other in moved)
            error = abs(mpmath.mpf(float(getattr(found, name))) / exact[name] - 1)
            assert error <= 4 * ulp * max(condition, 1), (name, float(error / ulp), float(condition))


@pytest.mark.parametrize("pair", PAIRS, ids="-".join)
def test_each_pair_agrees_with_sympy(pair: tuple[str, str]) -> None:
    """Sympy solves the two definitions for E and nu; for E and M both branches are among its solutions."""
    E, nu = sympy.symbols("E nu", real=True)
    symbolic = exact_constants(E, nu)
    wanted = {
        name: sympy.Rational(value) for name, value in exact_constants(sympy.Integer(200), sympy.Rational(1, 4)).items()
    }
    equations = [symbolic[name] - wanted[name] for name in pair]
    solutions = sympy.solve(equations, [E, nu], dict=True)
    admissible = [s for s in solutions if s[E] > 0 and -1 < s[nu] < sympy.Rational(1, 2)]
    branches = [{"branch": "larger nu"}, {"branch": "smaller nu"}]
    options: list[dict[str, Any]] = [*branches] if pair == ("E", "M") else [{}]
    assert len(admissible) == len(options)
    given_pair: dict[str, Any] = {name: float(wanted[name]) for name in pair}
    results = sorted(float(Isotropic.from_two(**given_pair, **option).nu) for option in options)
    np.testing.assert_allclose(results, sorted(float(s[nu]) for s in admissible), rtol=1e-13)


@given(generators, st.sampled_from([(), (0,), (2, 3)]))
def test_tensors_are_those_of_the_definition_and_come_back(rng: np.random.Generator, batch: tuple[int, ...]) -> None:
    """C_ijkl = lam d_ij d_kl + G (d_ik d_jl + d_il d_jk), S its inverse, and both give the constants back."""
    solid = Isotropic.from_two(E=rng.uniform(0.1, 300, batch), nu=rng.uniform(-0.9, 0.49, batch))
    d = np.eye(3)
    spherical = np.einsum("ij,kl->ijkl", d, d)
    shear = np.einsum("ik,jl->ijkl", d, d) + np.einsum("il,jk->ijkl", d, d)
    expected = np.multiply.outer(solid.lam, spherical) + np.multiply.outer(solid.G, shear)
    C, S = solid.stiffness(), solid.compliance()
    np.testing.assert_allclose(C.tensor(), expected, rtol=1e-13, atol=0)
    np.testing.assert_allclose(
        C.matrix(VOIGT) @ S.matrix(VOIGT), np.broadcast_to(np.eye(6), (*batch, 6, 6)), atol=1e-12
    )
    for again in (Isotropic.from_stiffness(C), Isotropic.from_compliance(S)):
        assert again.shape == batch
        np.testing.assert_allclose(again.E, solid.E, rtol=1e-12)
        np.testing.assert_allclose(again.nu, solid.nu, rtol=1e-11, atol=1e-14)


PUBLISHED = [item for item in cases(kind="isotropic") if set(item.inputs) <= set(NAMES)]


@pytest.mark.parametrize("item", PUBLISHED, ids=[item.id for item in PUBLISHED])
def test_published_constants(item: Case) -> None:
    """Handbook tables of metals and others: what follows from the two printed inputs; sources stand in the table."""
    # Kaye and Laby, Sadd, Gere, EN 1993-1-1 and others; whether seen in print is said with each case.
    found = Isotropic.from_two(**{name: item.value(name) for name in item.inputs})
    for name in item.figures:
        value = np.sqrt(found.M / found.G) if name == "VpVs" else getattr(found, name)
        assert abs(float(value) - item.expected(name)) <= item.tolerance(name), name
    for name, departure in item.not_reproduced.items():
        assert abs(float(getattr(found, name)) / float(departure.computed) - 1) < 1e-5


def test_the_incompressible_limit_has_a_compliance_only() -> None:
    """nu = 1/2, exactly: K, lam and M are infinite."""
    solid = Isotropic.from_two(E=[3.0, 3.0], nu=[0.3, 0.5])
    assert solid.G[1] == 1.0
    assert np.isinf([solid.K[1], solid.lam[1], solid.M[1]]).all()
    assert solid.compliance().matrix(VOIGT)[1, 0, 1] == -0.5 / 3.0
    assert Isotropic.from_compliance(solid.compliance()).nu[1] == 0.5
    with pytest.raises(ModuliError, match=r"K of batch member \(1,\) is inf, but must be finite; an incompressible"):
        solid.stiffness()


def test_complex_moduli_pass_through() -> None:
    """A common loss factor scales the stiffness and leaves nu real in value."""
    lossy = Isotropic.from_two(E=200.0 * (1 + 0.01j), G=80.0 * (1 + 0.01j))
    plain = Isotropic.from_two(E=200.0, G=80.0)
    assert lossy.stiffness().allclose(plain.stiffness() * (1 + 0.01j), rtol=1e-13)
    assert abs(lossy.nu - 0.25) < 1e-15


def test_equality_copies_and_pickles() -> None:
    """Values are compared, copied and pickled as values, and cannot be changed."""
    solid = Isotropic.from_two(K=160.0, G=80.0)
    assert pickle.loads(pickle.dumps(solid)) == solid
    assert copy.copy(solid) is solid
    assert solid != Isotropic.from_two(K=160.0, G=81.0)
    assert solid != 160.0
    assert repr(solid) == "<Isotropic: E 205.714, nu 0.285714, G 80, K 160, lam 106.667, M 266.667>"
    assert repr(Isotropic.from_two(K=[1.0, 2.0], G=1.0)) == "<Isotropic: batch shape (2,)>"
    with pytest.raises(AttributeError, match="immutable"):
        solid.E = np.array(1.0)
    with pytest.raises(TypeError, match="unhashable"):
        hash(solid)


@pytest.mark.parametrize(
    ("constants", "words"),
    [
        ({"E": 1.0}, ["exactly two of E, nu, G, K, lam, M", "got E"]),
        ({}, ["got none"]),
        ({"E": 1.0, "nu": 0.3, "G": 1.0}, ["got E, nu, G"]),
        ({"E": [1.0, -2.0], "nu": 0.3}, ["E of batch member (1,) is -2", "positive"]),
        ({"E": 1.0, "nu": 0.6}, ["nu is 0.6", "-1 < nu <= 1/2"]),
        ({"E": 1.0, "nu": -1.5}, ["G is -1", "positive", "follows from E and nu"]),
        ({"nu": 0.0, "lam": 1.0}, ["G is inf", "determined by nu and lam", "leave it open"]),
        ({"E": 3.1, "G": 1.0}, ["nu is 0.55", "it follows from E and G"]),
        ({"K": 1.0, "lam": 2.0}, ["G is -1.5", "positive"]),
        ({"E": 1.0, "M": 2.0}, ["shared by two solids", "branch='larger nu'", "branch=None"]),
        ({"E": 2.0, "M": 1.0, "branch": "larger nu"}, ["E is 2", "at most M"]),
        ({"E": 1.0, "G": 0.4, "branch": "larger nu"}, ["branch is for the pair E, M", "E, G has one"]),
    ],
)
def test_what_no_stable_solid_has_is_refused(constants: dict[str, Any], words: list[str]) -> None:
    """The message names the symbol, the batch member, the value, the bound and the way on."""
    with pytest.raises(ModuliError) as caught:
        Isotropic.from_two(**constants)
    for word in words:
        assert word in str(caught.value)


def test_what_is_no_constant_is_refused() -> None:
    """NaN and shapes that do not broadcast are named."""
    with pytest.raises(DataError, match="nu is nan"):
        Isotropic.from_two(E=1.0, nu=np.nan)
    with pytest.raises(ShapeError, match=r"\(2,\) of E and \(3,\) of nu"):
        Isotropic.from_two(E=[1.0, 2.0], nu=[0.1, 0.2, 0.3])


def test_an_anisotropic_tensor_is_refused_with_its_amount() -> None:
    """Silicon is no isotropic solid; the message says how far it is and points to the projection."""
    # Constants: Hopcroft, Nix and Kenny 2010; value from memory.
    C = np.diag([165.7, 165.7, 165.7, 79.6, 79.6, 79.6])
    C[:3, :3] += 63.9 * (1 - np.eye(3))
    silicon = Stiffness.from_matrix(C, VOIGT)
    with pytest.raises(ModuliError, match=r"stiffness is not isotropic.* by 0\.2\d+ of its norm") as caught:
        Isotropic.from_stiffness(silicon)
    assert "symmetry.isotropic().project" in str(caught.value)
    batch = Compliance.stack([Isotropic.from_two(E=1.0, nu=0.2).compliance(), silicon.inverse()])
    with pytest.raises(ModuliError, match=r"compliance of batch member \(1,\) is not isotropic"):
        Isotropic.from_compliance(batch)
    assert pytest.approx(79.6) == Isotropic.from_stiffness(silicon, rtol=0.5).G
