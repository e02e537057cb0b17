"""Packing and translation: exactness, the defining identities, and agreement with plain sums over full tensors."""

import math
from functools import partial
from importlib import import_module
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from numpy.typing import NDArray

from fourthrank import Notation, NotationError, Ordering, ShapeError, SymmetryError, Translator
from fourthrank.errors import DataError, FourthRankError, OrderingError
from tests.strategies import (
    ALL_ORDERINGS,
    DTYPES,
    LAYOUTS,
    PAIRS,
    batch_shapes,
    generators,
    laid_out,
    notations,
    partial_orderings,
    random_array,
    stiffness_tensors,
    symmetric_tensors,
    work_conjugate_notations,
)

EPS = np.finfo(float).eps
mpmath: Any = import_module("mpmath")  # it has no types
VOIGT = Notation.voigt(Ordering("11 22 33 23 13 12"))
MANDEL = Notation.mandel(Ordering("11 22 33 23 13 12"))
# The same without types, for misuse on purpose and for choices that are drawn.
UNTYPED: Any = Notation
UNTYPED_VOIGT: Any = VOIGT
UNTYPED_TRANSLATOR: Any = Translator
SIDES = st.sampled_from(["stress", "strain"])


def weight(notation: Notation, kind: str, pair: tuple[int, int]) -> float:
    """Return the weight of a component by the definition of the notation."""
    if pair[0] == pair[1]:
        return 1.0
    return notation.stress_shear if kind == "stress" else notation.strain_shear


def plain_vector(notation: Notation, tensor: NDArray[Any], kind: str) -> NDArray[Any]:
    """Return w_I t_ij, component by component."""
    sign = -1 if notation.compression_positive else 1
    columns = [sign * weight(notation, kind, (i, j)) * tensor[..., i, j] for i, j in notation.ordering.pairs]
    return np.stack(columns, axis=-1)


def plain_matrix(notation: Notation, tensor: NDArray[Any], rows: str, columns: str) -> NDArray[Any]:
    """Return the matrix by what it does: the packed images of tensors whose vectors are the unit vectors, by einsum."""
    images: list[NDArray[Any]] = []
    for i, j in notation.ordering.pairs:
        unit = np.zeros((3, 3))
        unit[i, j] = unit[j, i] = 1.0 / weight(notation, columns, (i, j))
        # The two signs of a compression-positive notation cancel in a map.
        image = np.einsum("...ijkl,kl->...ij", tensor, unit)
        sign = -1 if notation.compression_positive else 1
        images.append(sign * plain_vector(notation, image, rows))
    return np.stack(images, axis=-1)


def test_every_ordering_leads_to_every_place_and_back() -> None:
    """v_other = v_self[p] puts each pair at its place, and the permutation back undoes it, for all 720 orderings."""
    base = Ordering("12 33 23 11 13 22")
    values = np.array([10.0 * i + j for i, j in base.pairs])
    for ordering in ALL_ORDERINGS:
        moved = values[base.permutation_to(ordering)]
        assert moved.tolist() == [10.0 * i + j for i, j in ordering.pairs]
        assert moved[ordering.permutation_to(base)].tolist() == values.tolist()


@pytest.mark.parametrize("make", [Notation.voigt, Notation.tensorial], ids=["voigt", "tensorial"])
def test_passage_to_voigt_and_tensorial_forms_is_exact_for_every_ordering(make: Any) -> None:
    """Packing gives the factors 1 and 2 exactly, and unpacking gives the tensor back bit for bit."""
    rng = np.random.default_rng(1)
    sigma, C = symmetric_tensors(rng, (2,)), stiffness_tensors(rng, ())
    for ordering in ALL_ORDERINGS:
        notation = make(ordering)
        assert (notation.pack_stress(sigma) == plain_vector(notation, sigma, "stress")).all()
        assert (notation.unpack_stress(notation.pack_stress(sigma)) == sigma).all()
        strain = notation.pack_strain(sigma)
        assert (strain == plain_vector(notation, sigma, "strain")).all()
        assert (notation.unpack_strain(strain) == sigma).all()
        assert (notation.unpack_stiffness(notation.pack_stiffness(C)) == C).all()
        assert (notation.unpack_compliance(notation.pack_compliance(C)) == C).all()


@given(generators, notations(powers_of_two=True), batch_shapes, st.sampled_from(DTYPES), SIDES, SIDES)
def test_powers_of_two_are_exact_in_every_dtype(
    rng: np.random.Generator, notation: Notation, batch: tuple[int, ...], dtype: type[Any], rows: Any, columns: Any
) -> None:
    """Any linear map comes back bit for bit, in the dtype it had."""
    tensor = stiffness_tensors(rng, batch, dtype, major=False)
    matrix = notation.pack_map(tensor, rows=rows, columns=columns)
    back = notation.unpack_map(matrix, rows=rows, columns=columns)
    assert matrix.dtype == back.dtype == np.dtype(dtype)
    assert matrix.shape == (*batch, 6, 6)
    assert (back == tensor).all()


@pytest.mark.parametrize("dtype", [np.float32, np.float64, np.longdouble])
def test_mandel_form_is_within_an_ulp_of_the_rounded_exact_value(dtype: type[Any]) -> None:
    """Each component lies at most one place from the correctly rounded value; 50 digits are the reference."""
    rng = np.random.default_rng(2)
    tensor = symmetric_tensors(rng, (300,), dtype)
    vector = MANDEL.pack_stress(tensor)
    back = MANDEL.unpack_stress(vector)
    with mpmath.workdps(50):
        root = mpmath.sqrt(2)
        for source, result, factor in (
            (tensor[:, 1, 2], vector[:, 3], root),
            (vector[:, 3], back[:, 2, 1], 1 / root),
        ):
            for given_value, found in zip(source, result, strict=True):
                nearest = dtype(mpmath.nstr(exactly(given_value) * factor, 40))
                infinity = dtype(np.inf)
                assert found in (np.nextafter(nearest, -infinity), nearest, np.nextafter(nearest, infinity))
    assert (vector[:, :3] == np.einsum("...ii->...i", tensor)).all()


def exactly(value: Any) -> Any:
    """Return a number of any precision as one of 50 digits, without rounding."""
    numerator, denominator = value.as_integer_ratio()
    return mpmath.mpf(numerator) / denominator


@given(generators, notations(), batch_shapes)
def test_vectors_carry_the_weight_and_the_sign_of_the_notation(
    rng: np.random.Generator, notation: Notation, batch: tuple[int, ...]
) -> None:
    """s_I = w_I sigma_ij and e_I = w_I eps_ij, both of opposite sign where compression is positive."""
    tensor = symmetric_tensors(rng, batch)
    np.testing.assert_allclose(notation.pack_stress(tensor), plain_vector(notation, tensor, "stress"), rtol=4 * EPS)
    np.testing.assert_allclose(notation.pack_strain(tensor), plain_vector(notation, tensor, "strain"), rtol=4 * EPS)
    np.testing.assert_allclose(notation.unpack_stress(plain_vector(notation, tensor, "stress")), tensor, rtol=4 * EPS)
    np.testing.assert_allclose(notation.unpack_strain(plain_vector(notation, tensor, "strain")), tensor, rtol=4 * EPS)


@given(generators, notations(), batch_shapes, SIDES, SIDES)
def test_matrix_of_a_map_is_what_sums_over_the_tensor_give(
    rng: np.random.Generator, notation: Notation, batch: tuple[int, ...], rows: Any, columns: Any
) -> None:
    """M_IJ takes a packed tensor to the packed image, for all four pairs of sides and without major symmetry."""
    tensor = stiffness_tensors(rng, batch, major=False)
    matrix = notation.pack_map(tensor, rows=rows, columns=columns)
    expected = plain_matrix(notation, tensor, rows, columns)
    np.testing.assert_allclose(matrix, expected, rtol=8 * EPS)


@given(generators, notations(), batch_shapes)
def test_stress_vector_is_stiffness_matrix_times_strain_vector(
    rng: np.random.Generator, notation: Notation, batch: tuple[int, ...]
) -> None:
    """The defining identity holds in every notation, and so does its inverse for compliance."""
    C, eps = stiffness_tensors(rng, batch), symmetric_tensors(rng, batch)
    sigma = np.einsum("...ijkl,...kl->...ij", C, eps)
    sigma = (sigma + sigma.swapaxes(-1, -2)) / 2
    stress = np.einsum("...ij,...j->...i", notation.pack_stiffness(C), notation.pack_strain(eps))
    strain = np.einsum("...ij,...j->...i", notation.pack_compliance(C), notation.pack_stress(eps))
    np.testing.assert_allclose(stress, notation.pack_stress(sigma), rtol=1e-12, atol=1e-11)
    np.testing.assert_allclose(strain, notation.pack_strain(sigma), rtol=1e-12, atol=1e-11)


@given(generators, work_conjugate_notations(), batch_shapes)
def test_work_conjugate_notations_keep_energy_and_symmetry(
    rng: np.random.Generator, notation: Notation, batch: tuple[int, ...]
) -> None:
    """s_I e_I is sigma_ij eps_ij, and a stiffness with major symmetry has a symmetric matrix."""
    assert notation.work_conjugate
    sigma, eps = symmetric_tensors(rng, batch), symmetric_tensors(rng, batch)
    energy = (notation.pack_stress(sigma) * notation.pack_strain(eps)).sum(-1)
    np.testing.assert_allclose(energy, np.einsum("...ij,...ij->...", sigma, eps), rtol=0, atol=1e-13)
    matrix = notation.pack_stiffness(stiffness_tensors(rng, batch))
    np.testing.assert_allclose(matrix, matrix.swapaxes(-1, -2), rtol=8 * EPS)


@pytest.mark.parametrize("a_b", [(1.0, 1.0), (1.0, 2.0 + 1e-15), (math.sqrt(2.0), 1.414), (2.0, 2.0)])
def test_other_notations_do_not_claim_energy(a_b: tuple[float, float]) -> None:
    """a * b = 2 is decided exactly, and the dot product of a shear state is off by a * b / 2 elsewhere."""
    notation = Notation(VOIGT.ordering, stress_shear=a_b[0], strain_shear=a_b[1])
    assert not notation.work_conjugate
    shear = np.zeros((3, 3))
    shear[0, 1] = shear[1, 0] = 1.0
    assert float(notation.pack_stress(shear) @ notation.pack_strain(shear)) == a_b[0] * a_b[1] != 2.0


@given(generators, notations(), notations(), batch_shapes)
def test_translator_is_the_way_through_the_full_tensor(
    rng: np.random.Generator, source: Notation, target: Notation, batch: tuple[int, ...]
) -> None:
    """For all kinds the translated array is the packed unpacked one."""
    translator = Translator(source, target)
    v, m = random_array(rng, (*batch, 6)), random_array(rng, (*batch, 6, 6))
    for found, expected in (
        (translator.stress(v), target.pack_stress(source.unpack_stress(v))),
        (translator.strain(v), target.pack_strain(source.unpack_strain(v))),
        (translator.stiffness(m), target.pack_stiffness(source.unpack_stiffness(m))),
        (translator.compliance(m), target.pack_compliance(source.unpack_compliance(m))),
        (
            translator.map(m, rows="strain", columns="strain"),
            target.pack_map(source.unpack_map(m, rows="strain", columns="strain"), rows="strain", columns="strain"),
        ),
    ):
        np.testing.assert_allclose(found, expected, rtol=8 * EPS)


@given(generators, notations(powers_of_two=True), notations(powers_of_two=True), batch_shapes)
def test_translation_there_and_back_is_exact_also_in_place(
    rng: np.random.Generator, source: Notation, target: Notation, batch: tuple[int, ...]
) -> None:
    """With weights that are powers of two nothing is rounded; `out` may be the input itself, and it is returned."""
    there, back = Translator(source, target), Translator(target, source)
    for name, shape in (("stress", (6,)), ("strain", (6,)), ("stiffness", (6, 6)), ("compliance", (6, 6))):
        array = random_array(rng, (*batch, *shape))
        moved = getattr(there, name)(array)
        assert (getattr(back, name)(moved) == array).all()
        place = array.copy()
        assert getattr(there, name)(place, out=place) is place
        assert (place == moved).all()


@given(generators, notations(), notations(), notations())
def test_translations_compose(rng: np.random.Generator, a: Notation, b: Notation, c: Notation) -> None:
    """From a to b to c is from a to c."""
    m = random_array(rng, (4, 6, 6))
    through = Translator(b, c).compliance(Translator(a, b).compliance(m))
    np.testing.assert_allclose(through, Translator(a, c).compliance(m), rtol=8 * EPS)


@given(generators, partial_orderings, batch_shapes, st.booleans())
def test_partial_ordering_packs_plane_tensors(
    rng: np.random.Generator, ordering: Ordering, batch: tuple[int, ...], compression: bool
) -> None:
    """Components with a place come back exactly, the others are zero; a shear one without a place is refused."""
    notation = Notation.voigt(ordering, compression_positive=compression)
    vector = random_array(rng, (*batch, ordering.size))
    tensor = notation.unpack_strain(vector)
    assert (notation.pack_strain(tensor) == vector).all()
    assert np.count_nonzero(tensor) == np.count_nonzero(vector) // ordering.size * (ordering.size + 1)
    lacking = next(pair for pair in PAIRS[3:] if pair not in ordering.pairs)
    bad = np.zeros((2, 3, 3))
    bad[1, lacking[0], lacking[1]] = bad[1, lacking[1], lacking[0]] = 0.25
    label = f"{lacking[0] + 1}{lacking[1] + 1}"
    with pytest.raises(SymmetryError, match=rf"stress: component {label} is 0\.25 .*\(1,\).*complete ordering"):
        notation.pack_stress(bad)


def test_partial_ordering_has_no_six_by_six_matrix() -> None:
    """The refusal leads to the functions of plane problems."""
    plane = Notation.voigt(Ordering("11 22 12"))
    with pytest.raises(OrderingError, match=r"has 3: .*plane_stress_stiffness"):
        plane.pack_stiffness(np.zeros((3, 3, 3, 3)))
    with pytest.raises(NotationError, match="do not list the same pairs"):
        Translator(plane, VOIGT)


@given(generators, work_conjugate_notations(), batch_shapes, st.sampled_from(DTYPES))
def test_triangles_list_the_places_of_a_plain_double_loop(
    rng: np.random.Generator, notation: Any, batch: tuple[int, ...], dtype: type[Any]
) -> None:
    """By rows is i then j >= i, by columns is j then i <= j; both come back exactly."""
    matrix = random_array(rng, (*batch, 6, 6), dtype)
    matrix = np.triu(matrix) + np.triu(matrix, 1).swapaxes(-1, -2)
    places = {
        "rows": [(i, j) for i in range(6) for j in range(i, 6)],
        "columns": [(i, j) for j in range(6) for i in range(j + 1)],
    }
    for by in ("rows", "columns"):
        triangle = notation.pack_triangle(matrix, by=by)
        expected = np.stack([matrix[..., i, j] for i, j in places[by]], axis=-1)
        assert triangle.dtype == np.dtype(dtype)
        assert (triangle == expected).all()
        assert (notation.unpack_triangle(triangle, by=by) == matrix).all()


def test_triangle_refusals_name_entry_and_way_on() -> None:
    """An unsymmetric matrix, an unsymmetric notation and a misspelt `by` are refused."""
    matrix = np.eye(6)
    matrix[1, 4] = 0.5
    with pytest.raises(SymmetryError, match=r"\[22, 13\] and \[13, 22\].* 0\.5 and 0 differ by 0\.5"):
        VOIGT.pack_triangle(matrix, by="rows")
    with pytest.raises(NotationError, match="not work-conjugate"):
        Notation.tensorial(VOIGT.ordering).pack_triangle(np.eye(6), by="rows")
    with pytest.raises(NotationError, match="by must be 'rows' or 'columns', got by='row'"):
        UNTYPED_VOIGT.unpack_triangle(np.zeros(21), by="row")


CALLS: dict[str, tuple[Any, tuple[int, ...], tuple[int, ...]]] = {
    "pack_stress": (MANDEL.pack_stress, (3, 3), (6,)),
    "pack_strain": (MANDEL.pack_strain, (3, 3), (6,)),
    "unpack_stress": (MANDEL.unpack_stress, (6,), (3, 3)),
    "unpack_strain": (MANDEL.unpack_strain, (6,), (3, 3)),
    "pack_stiffness": (MANDEL.pack_stiffness, (3, 3, 3, 3), (6, 6)),
    "pack_compliance": (MANDEL.pack_compliance, (3, 3, 3, 3), (6, 6)),
    "unpack_stiffness": (MANDEL.unpack_stiffness, (6, 6), (3, 3, 3, 3)),
    "unpack_compliance": (MANDEL.unpack_compliance, (6, 6), (3, 3, 3, 3)),
    "translate stress": (Translator(VOIGT, MANDEL).stress, (6,), (6,)),
    "translate strain": (Translator(VOIGT, MANDEL).strain, (6,), (6,)),
    "translate stiffness": (Translator(VOIGT, MANDEL).stiffness, (6, 6), (6, 6)),
    "translate compliance": (Translator(VOIGT, MANDEL).compliance, (6, 6), (6, 6)),
    "pack_triangle": (partial(VOIGT.pack_triangle, by="rows"), (6, 6), (21,)),
    "unpack_triangle": (partial(VOIGT.unpack_triangle, by="rows"), (21,), (6, 6)),
}
EACH_CALL = pytest.mark.parametrize("call", CALLS.values(), ids=CALLS.keys())


def valid(core: tuple[int, ...], batch: tuple[int, ...], dtype: type[Any] = np.float64) -> NDArray[Any]:
    """Return an array that every call with this core takes."""
    rng = np.random.default_rng(3)
    if core == (3, 3):
        return symmetric_tensors(rng, batch, dtype)
    if core == (3, 3, 3, 3):
        return stiffness_tensors(rng, batch, dtype)
    array = random_array(rng, (*batch, *core), dtype)
    return np.asarray(array + array.swapaxes(-1, -2)) if core == (6, 6) else array


@EACH_CALL
@pytest.mark.parametrize("dtype", DTYPES)
@pytest.mark.parametrize("batch", [(), (0,), (7, 1, 5), (260,)], ids=str)
def test_dtype_batch_and_layout_do_not_change_a_result(call: Any, dtype: type[Any], batch: tuple[int, ...]) -> None:
    """The dtype is kept, the batch is in front, the input is unchanged, and the layout does not matter."""
    function, core, result_core = call
    array = valid(core, batch, dtype)
    result = function(array)
    assert result.dtype == np.dtype(dtype)
    assert result.shape == (*batch, *result_core)
    for layout in LAYOUTS:
        given_array = laid_out(array, layout)
        assert (function(given_array) == result).all()
        assert (given_array == array).all()
    swapped = array.astype(array.dtype.newbyteorder())
    assert function(swapped).dtype == np.dtype(dtype)
    assert (function(swapped) == result).all()


@EACH_CALL
@pytest.mark.parametrize("dtype", [np.int8, np.int64, np.uint16, np.float16])
def test_integers_and_half_precision_become_double(call: Any, dtype: type[Any]) -> None:
    """Nothing is computed in less than single precision."""
    function, core, _ = call
    array = np.ones(core, dtype)
    result = function(array)
    assert result.dtype == np.float64
    assert (result == function(array.astype(float))).all()


@EACH_CALL
@pytest.mark.parametrize("bad", [math.nan, math.inf, -math.inf])
@pytest.mark.parametrize("batch", [(), (2, 3), (400,)], ids=str)
def test_what_is_not_finite_never_passes(call: Any, bad: float, batch: tuple[int, ...]) -> None:
    """At every place, in single items and large batches, the error gives value and member, and `out` is untouched."""
    function, core, result_core = call
    out = np.full((*batch, *result_core), 7.0)
    for place in np.ndindex(core):
        array = np.ones((*batch, *core))
        member = tuple(n - 1 for n in batch)
        array[(*member, *place)] = bad
        with pytest.raises(DataError, match=rf"is {bad}; every component must be finite") as caught:
            function(array, out=out)
        assert not batch or f"batch member {member}" in str(caught.value)
    assert (out == 7.0).all()


@EACH_CALL
@pytest.mark.parametrize("batch", [(), (300,)], ids=str)
def test_numbers_whose_squares_overflow_are_finite(call: Any, batch: tuple[int, ...]) -> None:
    """1e200 is a number."""
    function, core, _ = call
    assert np.isfinite(function(np.full((*batch, *core), 1e200))).all()


@EACH_CALL
@pytest.mark.parametrize("batch", [(), (300,)], ids=str)
def test_unchecked_data_give_the_same_numbers_and_let_nan_through(call: Any, batch: tuple[int, ...]) -> None:
    """`check=False` changes nothing for good data, and does not look at bad ones."""
    function, core, _ = call
    array = valid(core, batch)
    assert (function(array, check=False) == function(array)).all()
    assert np.isnan(function(np.full((*batch, *core), math.nan), check=False)).any()


@EACH_CALL
def test_out_takes_the_result_or_is_refused_untouched(call: Any) -> None:
    """The very object is returned, also one that is not contiguous; one that does not fit keeps its contents."""
    function, core, result_core = call
    array = valid(core, (4,))
    expected = function(array)
    for layout in ("plain", "strided", "reversed", "fortran"):
        out = laid_out(np.zeros((4, *result_core)), layout)
        assert function(array, out=out) is out
        assert (out == expected).all()
    read_only = np.zeros((4, *result_core))
    read_only.flags.writeable = False
    for out, error, text in (
        (np.zeros((5, *result_core)), ShapeError, r"out must have the shape of the result, \(4, "),
        (np.zeros((4, *result_core), int), DataError, "out of dtype int64 cannot take"),
        (read_only, DataError, "out is read-only"),
    ):
        with pytest.raises(error, match=text):
            function(array, out=out)
        assert not out.any()
    with pytest.raises(DataError, match="out must be a numpy array, got list"):
        function(array, out=[0.0])


@EACH_CALL
def test_wrong_input_gets_an_error_of_our_own(call: Any) -> None:
    """Wrong shapes, ragged lists, text, masked elements and objects: always a `FourthRankError`."""
    function, core, _ = call
    text = ", ".join(map(str, core))
    with pytest.raises(ShapeError, match=rf"must have shape \(\.\.\., {text}\), got \(2, 5\)"):
        function(np.zeros((2, 5)))
    with pytest.raises(ShapeError, match=r"got \(\)"):
        function(1.0)
    with pytest.raises(ShapeError, match="no rectangular array of numbers"):
        function([[1.0, 2.0], [3.0]])
    with pytest.raises(DataError, match="must hold real or complex numbers, got dtype <U1"):
        function(np.full(core, "a"))
    with pytest.raises(DataError, match="got dtype bool"):
        function(np.ones(core, bool))
    with pytest.raises(DataError, match="masked elements"):
        function(np.ma.masked_less(np.zeros(core), 1.0))
    with pytest.raises(FourthRankError):
        function(None)


@pytest.mark.parametrize("count", [1, 300])
def test_asymmetry_is_reported_with_component_amount_and_tolerance(count: int) -> None:
    """The worst pair of the worst member; rounding within the tolerance passes, and so does anything unchecked."""
    sigma = symmetric_tensors(np.random.default_rng(4), (count,))
    sigma[-1] = np.eye(3)
    sigma[-1, 0, 2] = 1e-3
    with pytest.raises(
        SymmetryError, match=rf"stress must be symmetric: components 13 and 31 of batch member \({count - 1},\).*"
        r"0\.001 and 0 differ by 0\.001, 0\.001 of the largest component; the tolerance is rtol=1e-09"
    ):  # fmt: skip
        VOIGT.pack_stress(sigma)
    assert VOIGT.pack_stress(sigma, check=False)[-1, 4] == 1e-3
    sigma[-1, 0, 2] = 1e-10
    assert VOIGT.pack_stress(sigma)[-1, 4] == 1e-10
    C = stiffness_tensors(np.random.default_rng(5), (count,))
    C[-1, 0, 0, 2, 1] += 1.0
    with pytest.raises(SymmetryError, match=r"minor symmetries: components 1123 and 1132"):
        VOIGT.pack_stiffness(C)


def test_notation_refuses_what_is_no_notation() -> None:
    """Weights, ordering, sign and sides are checked, and the argument is named."""
    order = VOIGT.ordering
    for bad in (0.0, -1.0, math.nan, math.inf, True, "1", None):
        with pytest.raises(NotationError, match="stress_shear must be a positive finite number"):
            UNTYPED(order, stress_shear=bad, strain_shear=1.0)
    with pytest.raises(NotationError, match=r"ordering must be an Ordering, got '11 22'"):
        UNTYPED.voigt("11 22")
    with pytest.raises(NotationError, match="compression_positive must be True or False, got 1"):
        UNTYPED.voigt(order, compression_positive=1)
    with pytest.raises(NotationError, match="rows must be 'stress' or 'strain', got rows='stresses'"):
        UNTYPED_VOIGT.pack_map(np.zeros((3, 3, 3, 3)), rows="stresses", columns="strain")
    with pytest.raises(NotationError, match="source must be a Notation, got 'voigt'"):
        UNTYPED_TRANSLATOR("voigt", VOIGT)
