"""Orthotropic: nine constants to stiffness and compliance and back, and what is refused."""

import copy
import pickle
from importlib import import_module
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from fourthrank import Compliance, DataError, ModuliError, Notation, Ordering, ShapeError, Stiffness, rotation
from fourthrank.moduli import Orthotropic, engineering_constants
from tests.reference import case
from tests.strategies import generators

mpmath: Any = import_module("mpmath")  # it has no types
VOIGT = Notation.voigt(Ordering("11 22 33 23 13 12"))
PLY: dict[str, Any] = {
    "E1": 155.0, "E2": 12.1, "E3": 11.0, "G12": 4.4, "G13": 4.1, "G23": 3.2, "nu12": 0.248, "nu13": 0.23, "nu23": 0.458,
}  # fmt: skip


def random_constants(rng: np.random.Generator, batch: tuple[int, ...]) -> dict[str, Any]:
    """Return admissible constants of contrasts up to 1e8: scaled Poisson's ratios stay well inside their bounds."""
    E = {i: 10.0 ** rng.uniform(-4, 4, batch) for i in (1, 2, 3)}
    constants: dict[str, Any] = {f"E{i}": E[i] for i in E}
    for i, j in ((1, 2), (1, 3), (2, 3)):
        constants[f"G{i}{j}"] = 10.0 ** rng.uniform(-4, 4, batch)
        constants[f"nu{i}{j}"] = rng.uniform(-0.49, 0.49, batch) * np.sqrt(E[i] / E[j])
    return constants


def plain_compliance(constants: dict[str, Any]) -> np.ndarray[Any, np.dtype[np.float64]]:
    """Return the Voigt compliance by its definition, entry by entry."""
    S = np.zeros((6, 6))
    for i in (1, 2, 3):
        S[i - 1, i - 1] = 1 / constants[f"E{i}"]
    for (i, j), place in {(2, 3): 3, (1, 3): 4, (1, 2): 5}.items():
        S[i - 1, j - 1] = S[j - 1, i - 1] = -constants[f"nu{i}{j}"] / constants[f"E{i}"]
        S[place, place] = 1 / constants[f"G{i}{j}"]
    return S


def test_the_compliance_is_that_of_the_definition() -> None:
    """A swapped axis, a transposed Poisson's ratio or a lost shear factor shows in some entry."""
    found = Orthotropic(**PLY).compliance().matrix(VOIGT)
    np.testing.assert_allclose(found, plain_compliance(PLY), rtol=4e-16, atol=0)


@given(generators, st.sampled_from([(), (0,), (3, 2)]))
def test_stiffness_and_compliance_are_inverse(rng: np.random.Generator, batch: tuple[int, ...]) -> None:
    """C S = 1, with a residual that rounding of well-scaled products explains."""
    solid = Orthotropic(**random_constants(rng, batch))
    C, S = solid.stiffness().matrix(VOIGT), solid.compliance().matrix(VOIGT)
    assert C.shape == S.shape == (*batch, 6, 6)
    # Each product E_i / E_j * ratio is near one only after scaling by the moduli.
    scale = np.sqrt(np.abs(np.einsum("...ii->...i", C)))
    residual = (C @ S - np.eye(6)) * scale[..., None, :] / scale[..., :, None]
    assert np.abs(residual).max(initial=0.0) < 1e-13


@given(generators)
def test_the_stiffness_is_accurate_against_fifty_digits(rng: np.random.Generator) -> None:
    """The closed form errs by a few units in the last place times 1 / D and the cancellation in each entry."""
    constants = random_constants(rng, ())
    found = Orthotropic(**constants).stiffness().matrix(VOIGT)
    with mpmath.workdps(50):
        S = mpmath.matrix(6)
        plain = {name: mpmath.mpf(float(value)) for name, value in constants.items()}
        for i in (1, 2, 3):
            S[i - 1, i - 1] = 1 / plain[f"E{i}"]
        for (i, j), place in {(2, 3): 3, (1, 3): 4, (1, 2): 5}.items():
            S[i - 1, j - 1] = S[j - 1, i - 1] = -plain[f"nu{i}{j}"] / plain[f"E{i}"]
            S[place, place] = 1 / plain[f"G{i}{j}"]
        exact = np.array((S**-1).tolist(), dtype=object)
        nu = {(i, j): plain[f"nu{i}{j}"] for i, j in ((1, 2), (1, 3), (2, 3))}
        nu |= {(j, i): nu[i, j] * plain[f"E{j}"] / plain[f"E{i}"] for i, j in list(nu)}
        D = 1 - sum(nu[i, j] * nu[j, i] for i, j in ((1, 2), (1, 3), (2, 3))) - 2 * nu[2, 1] * nu[3, 2] * nu[1, 3]
        scale = [mpmath.sqrt(exact[k, k]) for k in range(6)]
        error = max(
            abs(mpmath.mpf(float(found[i, j])) - exact[i, j]) / (scale[i] * scale[j])
            for i in range(6)
            for j in range(6)
        )
    assert error < 16 * 2.0**-52 / min(float(D), 1.0)


@given(generators, st.sampled_from([(), (4,)]))
def test_constants_come_back_from_either_tensor(rng: np.random.Generator, batch: tuple[int, ...]) -> None:
    """There and back: every constant to 1e-10 relative (the condition number of the scaled map is below 1e5)."""
    solid = Orthotropic(**random_constants(rng, batch))
    for again in (
        Orthotropic.from_compliance(solid.compliance()),
        Orthotropic.from_stiffness(Stiffness.from_tensor(solid.stiffness().tensor())),
    ):
        for name in PLY:
            scale = np.sqrt(getattr(solid, f"E{name[2]}") / getattr(solid, f"E{name[3]}")) if "nu" in name else 0.0
            np.testing.assert_array_less(
                np.abs(getattr(again, name) - getattr(solid, name)), 1e-10 * (np.abs(getattr(solid, name)) + scale)
            )


@pytest.mark.parametrize("first", ["nu12", "nu21"])
@pytest.mark.parametrize("second", ["nu13", "nu31"])
@pytest.mark.parametrize("third", ["nu23", "nu32"])
def test_either_ratio_of_a_pair_serves(first: str, second: str, third: str) -> None:
    """The same material from all eight choices; reciprocity read the wrong way round would give another."""
    solid = Orthotropic(**PLY)
    given_constants = {name: PLY[name] for name in ("E1", "E2", "E3", "G12", "G13", "G23")}
    given_constants |= {name: getattr(solid, name) for name in (first, second, third)}
    assert Orthotropic(**given_constants).stiffness().allclose(solid.stiffness(), rtol=1e-14)
    assert solid.nu21 / 12.1 == pytest.approx(0.248 / 155.0, rel=1e-15)
    assert solid.nu31 / 11.0 == pytest.approx(0.23 / 155.0, rel=1e-15)
    assert solid.nu32 / 11.0 == pytest.approx(0.458 / 12.1, rel=1e-15)


def test_fields_broadcast_and_are_read_only() -> None:
    """Nine fields of mixed shapes make one batch."""
    solid = Orthotropic(**(PLY | {"E1": [155.0, 160.0, 165.0], "nu12": np.full((2, 1), 0.2)}))
    assert solid.shape == (2, 3) == solid.stiffness().shape
    assert repr(solid) == "<Orthotropic: batch shape (2, 3)>"
    with pytest.raises(ValueError, match="read-only"):
        solid.E1[0] = 1.0
    with pytest.raises(AttributeError, match="immutable"):
        solid.E1 = np.array(1.0)


def test_complex_moduli_pass_through() -> None:
    """A loss factor common to all moduli scales the stiffness."""
    loss = 1.0 + 0.02j
    lossy = {name: value * loss if name[0] in "EG" else value for name, value in PLY.items()}
    solid = Orthotropic(**lossy)
    assert solid.stiffness().is_complex
    assert solid.stiffness().allclose(Orthotropic(**PLY).stiffness() * loss, rtol=1e-14)
    assert np.iscomplexobj(Orthotropic.from_compliance(solid.compliance()).E1)


def test_equality_copies_and_pickles() -> None:
    """Values are compared, copied and pickled as values; the repr evaluates back."""
    solid = Orthotropic(**PLY)
    assert pickle.loads(pickle.dumps(solid)) == solid
    assert copy.deepcopy(solid) is solid
    assert eval(repr(solid)) == solid
    assert solid != Orthotropic(**(PLY | {"G23": 3.3}))
    assert solid != "a ply"
    with pytest.raises(TypeError, match="unhashable"):
        hash(solid)


@pytest.mark.parametrize(
    ("change", "words"),
    [
        ({"E2": [12.1, -3.0]}, ["E2", "batch member (1,)", "-3", "positive"]),
        ({"G13": 0.0}, ["G13", "is 0", "positive"]),
        ({"nu12": 4.0}, ["nu12", "is 4", "sqrt(E1 / E2)", "nu21 given for nu12"]),
        ({"nu21": 0.1}, ["of nu12 and nu21 exactly one", "nu12 and nu21"]),
        ({"nu12": None}, ["of nu12 and nu21 exactly one", "none"]),
        ({"nu12": 3.0, "nu13": 3.0, "nu23": 0.9}, ["1 - nu12 nu21", "at least 0", "cannot occur together"]),
    ],
)
def test_what_no_stable_solid_has_is_refused(change: dict[str, Any], words: list[str]) -> None:
    """The message names the symbol, the batch member, the value, the bound and the way on."""
    with pytest.raises(ModuliError) as caught:
        Orthotropic(**(PLY | change))
    for word in words:
        assert word in str(caught.value)


def test_what_is_no_constant_is_refused() -> None:
    """NaN and shapes that do not broadcast are named."""
    with pytest.raises(DataError, match=r"G12.*batch member \(1,\) is nan"):
        Orthotropic(**(PLY | {"G12": [1.0, np.nan]}))
    with pytest.raises(ShapeError, match=r"\(2,\) of E1 and .*\(3,\) of E2"):
        Orthotropic(**(PLY | {"E1": [1.0, 2.0], "E2": [1.0, 2.0, 3.0]}))


def test_at_the_limit_of_incompressibility_there_is_a_compliance_only() -> None:
    """E = 2, nu = 1/2, exactly: the compliance is given, the stiffness is refused."""
    solid = Orthotropic(E1=2, E2=2, E3=2, G12=1, G13=1, G23=1, nu12=0.5, nu13=0.5, nu23=0.5)
    assert solid.compliance().matrix(VOIGT)[0, 1] == -0.25
    with pytest.raises(ModuliError, match=r"is 0, but must be greater than 0; at the limit the solid has a compliance"):
        solid.stiffness()


def test_another_class_is_refused_with_its_amount() -> None:
    """A turned ply has couplings in these axes; within rtol they are left out."""
    turned = Orthotropic(**PLY).stiffness().rotate(rotation.about_axis([0, 0, 1], 0.01))
    with pytest.raises(ModuliError, match=r"stiffness is not orthotropic.*makes 0\.0\d+ of its norm.*11,12") as caught:
        Orthotropic.from_stiffness(turned)
    assert "symmetry.orthotropic().project" in str(caught.value)
    batch = Compliance.stack([Orthotropic(**PLY).compliance(), turned.inverse()])
    with pytest.raises(ModuliError, match=r"compliance of batch member \(1,\)"):
        Orthotropic.from_compliance(batch)
    assert pytest.approx(155.0, rel=0.1) == Orthotropic.from_stiffness(turned, rtol=0.02).E1


def test_published_ply() -> None:
    """Engineering constants, compliance and stiffness printed together (the printed C11 does not follow from them)."""
    # Hyer (1998), Stress Analysis of Fiber-Reinforced Composite Materials, chapter 2; values from memory.
    ply = case("ORT3D-HYER")
    E1, E2, nu12, nu23, G12, G23 = (ply.value(name) for name in ("E1", "E2", "nu12", "nu23", "G12", "G23"))
    solid = Orthotropic(E1=E1, E2=E2, E3=E2, G12=G12, G13=G12, G23=G23, nu12=nu12, nu13=nu12, nu23=nu23)
    C, S = solid.stiffness().matrix(VOIGT), 1000.0 * solid.compliance().matrix(VOIGT)
    for matrix, letter, places in (
        (S, "S", ("11", "12", "22", "23", "44", "55")),
        (C, "C", ("12", "22", "23", "44", "55")),
    ):
        for place in places:
            found = matrix[int(place[0]) - 1, int(place[1]) - 1]
            assert found == pytest.approx(ply.expected(letter + place), abs=ply.tolerance(letter + place))


def test_published_bone() -> None:
    """The technical constants of bovine femur from its nine stiffnesses: all twelve, either ratio of each pair."""
    # Van Buskirk, Cowin and Ward (1981), J. Biomech. Eng. 103, 67-72; values from memory.
    bone = case("BONE-VANBUSKIRK")
    C = np.zeros((6, 6))
    for name in bone.inputs:
        i, j = int(name[1]) - 1, int(name[2]) - 1
        C[i, j] = C[j, i] = bone.value(name)
    stiffness = Stiffness.from_matrix(C, VOIGT)
    constants, solid = engineering_constants(stiffness), Orthotropic.from_stiffness(stiffness)
    for name in ("E1", "E2", "E3", "G23", "G13", "G12", "nu12", "nu13", "nu23", "nu21", "nu31", "nu32"):
        for found in (getattr(constants, name), getattr(solid, name)):
            assert found == pytest.approx(bone.expected(name), abs=bone.tolerance(name))
