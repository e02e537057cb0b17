"""Stress, strain, stiffness and compliance: entry, exit, arithmetic, inversion, turning, indexing, refusals."""

import copy
import html
import pickle
from functools import partial
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from numpy.typing import NDArray
from scipy.spatial.transform import Rotation

import fourthrank as fr
from fourthrank import Compliance, Notation, Ordering, Stiffness, Strain, Stress
from fourthrank.errors import DataError, ImplicitNotationError
from tests.strategies import (
    LAYOUTS,
    batch_shapes,
    broadcastable_batches,
    generators,
    laid_out,
    notations,
    partial_orderings,
    random_array,
    rotations,
    stiffness_tensors,
    symmetric_tensors,
    well_conditioned,
    work_conjugate_notations,
)

EPS = np.finfo(float).eps
ROTATION: Any = Rotation  # its types differ between the supported versions
VOIGT = Notation.voigt(Ordering("11 22 33 23 13 12"))
MANDEL = Notation.mandel(Ordering("11 22 33 23 13 12"))
TENSORIAL = Notation.tensorial(Ordering("12 11 22 33 13 23"))
FOURTH: list[Any] = [Stiffness, Compliance]
SECOND: list[Any] = [Stress, Strain]
KINDS = st.sampled_from([*FOURTH, *SECOND])


def tensors(kind: Any, rng: np.random.Generator, batch: tuple[int, ...], dtype: Any = np.float64) -> NDArray[Any]:
    """Return full tensors that fit a kind."""
    make = stiffness_tensors if kind in FOURTH else symmetric_tensors
    return make(rng, batch, dtype)


def some(kind: Any, rng: np.random.Generator, batch: tuple[int, ...] = (), dtype: Any = np.float64) -> Any:
    """Return objects of a kind."""
    return kind.from_tensor(tensors(kind, rng, batch, dtype))


def norms(tensor: NDArray[Any], rank: int) -> NDArray[np.float64]:
    """Return Frobenius norms of full tensors."""
    return np.asarray(np.sqrt((np.abs(tensor) ** 2).sum(axis=tuple(range(-rank, 0)))))


@given(generators, notations(), batch_shapes, KINDS, st.sampled_from(LAYOUTS), st.booleans())
def test_what_is_read_in_a_notation_is_written_in_it(
    rng: np.random.Generator, notation: Notation, batch: tuple[int, ...], kind: Any, layout: str, cplx: bool
) -> None:
    """In every notation, also an unsymmetric one; the object keeps no hold on the caller's array."""
    tensor = tensors(kind, rng, batch, np.complex128 if cplx else np.float64)
    name = kind.__name__.lower()
    packed = laid_out(getattr(notation, f"pack_{name}")(tensor), layout)
    x = kind.from_matrix(packed, notation) if kind in FOURTH else kind.from_vector(packed, notation)
    if layout != "read-only":
        kept = packed.copy()
        packed[...] = 0.0
        packed = kept
    written = x.matrix(notation) if kind in FOURTH else x.vector(notation)
    np.testing.assert_allclose(written, packed, rtol=16 * EPS)
    np.testing.assert_allclose(x.tensor(), tensor, rtol=16 * EPS)
    assert x.is_complex is cplx
    assert x.shape == batch
    assert x.ndim == len(batch)
    assert x.size == np.prod(batch, dtype=int)
    out = np.zeros_like(tensor)
    assert x.tensor(out=out) is out
    assert (out == x.tensor()).all()


@given(
    generators, work_conjugate_notations(), batch_shapes, st.sampled_from(FOURTH), st.sampled_from(["rows", "columns"])
)
def test_triangle_and_matrix_say_the_same(
    rng: np.random.Generator, notation: Notation, batch: tuple[int, ...], kind: Any, by: Any
) -> None:
    """The triangle read by a name and written by it is the upper triangle of the matrix."""
    x = some(kind, rng, batch)
    triangle = x.triangle(notation, by=by)
    matrix = x.matrix(notation)
    places = [(i, j) for i in range(6) for j in range(i, 6)] if by == "rows" else [
        (i, j) for j in range(6) for i in range(j + 1)
    ]  # fmt: skip
    assert (triangle == np.stack([matrix[..., i, j] for i, j in places], -1)).all()
    assert kind.from_triangle(triangle, notation, by=by).allclose(x, rtol=16 * EPS)


@given(generators, broadcastable_batches(), st.booleans())
def test_products_are_the_sums_over_full_tensors(
    rng: np.random.Generator, batches: tuple[tuple[int, ...], ...], cplx: bool
) -> None:
    """C @ eps, S @ sigma and the dot product against einsum, over batches that broadcast."""
    dtype = np.complex128 if cplx else np.float64
    for fourth, second in ((Stiffness, Strain), (Compliance, Stress)):
        T, t = some(fourth, rng, batches[0], dtype), some(second, rng, batches[1])
        expected = np.einsum("...ijkl,...kl->...ij", T.tensor(), t.tensor())
        np.testing.assert_allclose((T @ t).tensor(), expected, rtol=0, atol=1e-13)
    sigma, eps = some(Stress, rng, batches[0], dtype), some(Strain, rng, batches[1])
    work = np.einsum("...ij,...ij->...", sigma.tensor(), eps.tensor())
    np.testing.assert_allclose(sigma.dot(eps), work, rtol=0, atol=1e-13)
    np.testing.assert_allclose(eps.dot(sigma), work, rtol=0, atol=1e-13)


@given(generators, broadcastable_batches(), KINDS)
def test_arithmetic_is_that_of_the_tensors(
    rng: np.random.Generator, batches: tuple[tuple[int, ...], ...], kind: Any
) -> None:
    """Sums, differences, scalar factors, signs, norms, parts, and one factor for each tensor."""
    x, y = some(kind, rng, batches[0]), some(kind, rng, batches[1], np.complex128)
    a, b = x.tensor(), y.tensor()
    rank = 4 if kind in FOURTH else 2
    factors = np.asarray(rng.standard_normal(batches[1]))
    for found, expected in (
        (x + y, a + b), (x - y, a - b), (2.5 * x, 2.5 * a), (x * 2.5, 2.5 * a), (y / 2, b / 2), (-x, -a), (+x, a),
        (y.real, b.real), (y.imag, b.imag), (x.imag, 0 * a), (x * 1j, a * 1j),
        (x.scaled(factors), a * factors.reshape(factors.shape + (1,) * rank)),
    ):  # fmt: skip
        assert type(found) is kind
        np.testing.assert_allclose(found.tensor(), expected, rtol=0, atol=1e-13)
    np.testing.assert_allclose(y.norm(), norms(b, rank), rtol=1e-14)
    assert x == x.reshape(*x.shape)
    assert (x != -x) is bool(x.size)
    assert x.allclose(x * (1 + 1e-12))
    assert not x.size or not x.allclose(x * (1 + 1e-8))


@given(generators, batch_shapes, st.sampled_from(FOURTH), st.sampled_from([1.0, 10.0, 1e6, 1e12]))
def test_inverse_leaves_a_residual_below_thirty_eps_times_condition(
    rng: np.random.Generator, batch: tuple[int, ...], kind: Any, condition: float
) -> None:
    """Also where the condition number is 1e12, and for stiffnesses in pascal."""
    x = kind.from_matrix(well_conditioned(rng, batch, condition=condition, scale=1e11), MANDEL)
    inverse = x.inverse()
    assert isinstance(inverse, Compliance if kind is Stiffness else Stiffness)
    residual = x.matrix(MANDEL) @ inverse.matrix(MANDEL) - np.eye(6)
    assert (np.abs(residual).max(axis=(-1, -2), initial=0.0) <= 30 * EPS * condition).all()
    np.testing.assert_allclose(
        inverse.inverse().matrix(MANDEL), x.matrix(MANDEL), rtol=0, atol=1e11 * 1e3 * EPS * condition
    )


@pytest.mark.parametrize("kind", FOURTH)
@pytest.mark.parametrize("batch", [(), (2, 3)], ids=str)
def test_singular_tensor_has_no_inverse(kind: Any, batch: tuple[int, ...]) -> None:
    """The error gives the member and its condition number."""
    matrix = np.broadcast_to(np.eye(6), (*batch, 6, 6)).copy()
    matrix[..., -1, -1][tuple(n - 1 for n in batch)] = 0.0
    with pytest.raises(
        fr.AdmissibilityError, match=f"{kind.__name__.lower()}.*is singular to working precision"
    ) as caught:
        kind.from_matrix(matrix, MANDEL).inverse()
    assert not batch or "batch member (1, 2)" in str(caught.value)


@pytest.mark.parametrize("kind", FOURTH)
@pytest.mark.parametrize("count", [2, 300])
def test_symmetrizing_and_turning_do_not_depend_on_the_size_of_the_batch(kind: Any, count: int) -> None:
    """Averaging is (M + M^T) / 2 in Mandel form, unchecked tensors are taken as they are, members turn alike."""
    rng = np.random.default_rng(14)
    matrix = random_array(rng, (count, 6, 6))
    x = kind.from_matrix(matrix, MANDEL, symmetrize=True)
    np.testing.assert_allclose(x.matrix(MANDEL), (matrix + matrix.swapaxes(-1, -2)) / 2, rtol=0, atol=1e-15)
    tensor = tensors(kind, rng, (count,))
    assert kind.from_tensor(tensor, check=False) == kind.from_tensor(tensor)
    R = rotations(rng, (count,))
    assert x.rotate(R)[1].allclose(x[1].rotate(R[1]), rtol=1e-14)


class Turned:
    """An object of the caller's that has a rotation matrix."""

    def __init__(self, matrix: NDArray[np.float64]) -> None:
        self.matrix = matrix

    def as_matrix(self) -> NDArray[np.float64]:
        """Return the matrix."""
        return self.matrix


@given(generators, broadcastable_batches(), KINDS)
def test_turning_is_the_sum_over_full_tensors_and_can_be_undone(
    rng: np.random.Generator, batches: tuple[tuple[int, ...], ...], kind: Any
) -> None:
    """R_ip R_jq ... t_pq... to 1e-13 of the norm; back by the transpose below 64 eps; any object with a matrix."""
    x, R = some(kind, rng, batches[0]), rotations(rng, batches[1])
    rank = 4 if kind in FOURTH else 2
    sums = "...ip,...jq,...kr,...ls,...pqrs->...ijkl" if rank == 4 else "...ip,...jq,...pq->...ij"
    expected = np.einsum(sums, *[R] * rank, x.tensor(), optimize=True)
    size = np.broadcast_to(x.norm(), expected.shape[:-rank])
    for turned in (x.rotate(R), x.in_axes(R), x.rotate(Turned(R))):
        assert (norms(turned.tensor() - expected, rank) <= 1e-13 * size).all()
    back = x.rotate(R).rotate(R.swapaxes(-1, -2))
    assert (norms(back.tensor() - x.tensor(), rank) <= 64 * EPS * size).all()


@given(generators, KINDS)
def test_rotation_objects_of_scipy_are_read(rng: np.random.Generator, kind: Any) -> None:
    """One rotation and several."""
    x = some(kind, rng)
    single, several = ROTATION.from_rotvec([0.1, 0.2, 0.3]), ROTATION.from_rotvec(rng.standard_normal((3, 3)))
    assert x.rotate(single) == x.rotate(single.as_matrix())
    assert x.rotate(several).shape == (3,)
    assert x.rotate(several) == x.rotate(several.as_matrix())


@pytest.mark.parametrize("kind", [*FOURTH, *SECOND])
@pytest.mark.parametrize("call", ["rotate", "in_axes"])
def test_reflections_are_taken_on_request_only(kind: Any, call: str) -> None:
    """A tensor of even rank cannot tell R from -R; what is not orthogonal is refused in any case."""
    rng = np.random.default_rng(6)
    x, R = some(kind, rng), rotations(rng, (2,))
    with pytest.raises(fr.RotationError, match="reflection"):
        getattr(x, call)(-R)
    assert getattr(x, call)(-R, allow_reflection=True).allclose(getattr(x, call)(R), rtol=1e-15)
    R[1] *= 1.001
    with pytest.raises(fr.RotationError, match=r"of batch member \(1,\) is no rotation: .* R R\^T - 1 is 0\.002"):
        getattr(x, call)(R, allow_reflection=True)


KEYS: list[Any] = [
    0, -1, slice(None), slice(1, None), slice(None, None, -2), ..., None, (0, 1), (slice(None), 0), (..., 0), (0, ...),
    (None, 1), (..., None), [0, 2], [True, False, True], np.array([[0, 1], [2, 0]]), (slice(None), [0, 1]),
    ([0, 1], [1, 0]), np.ones((3, 2), bool), (0, 1, ...), np.int64(1),
]  # fmt: skip


@pytest.mark.parametrize("kind", [*FOURTH, *SECOND])
@pytest.mark.parametrize("key", KEYS, ids=str)
def test_indexing_acts_on_the_batch_like_numpy(kind: Any, key: Any) -> None:
    """The members chosen are those that numpy chooses of a plain array of their numbers."""
    x = some(kind, np.random.default_rng(7), (3, 2))
    flat = x.reshape(6)
    numbers = np.arange(6).reshape(3, 2)[key]
    assert x[key].shape == numbers.shape
    assert x[key] == flat[numbers]


@pytest.mark.parametrize("kind", [*FOURTH, *SECOND])
def test_index_never_reaches_the_components(kind: Any) -> None:
    """A key that is longer than the batch, or out of it, fails."""
    x = some(kind, np.random.default_rng(8), (3,))
    for key in (3, (0, 0), (..., 0, 0), (slice(None), slice(None))):
        with pytest.raises(IndexError):
            _ = x[key]
    with pytest.raises(IndexError):
        _ = x[0][0]


@given(generators, batch_shapes, KINDS)
def test_pickle_and_copy_keep_value_and_immutability(
    rng: np.random.Generator, batch: tuple[int, ...], kind: Any
) -> None:
    """All protocols from 2; a copy is the object itself."""
    x = some(kind, rng, batch)
    for protocol in range(2, pickle.HIGHEST_PROTOCOL + 1):
        twin = pickle.loads(pickle.dumps(x, protocol))
        assert twin == x
        assert not twin._held.flags.writeable
    assert copy.copy(x) is copy.deepcopy(x) is x


@pytest.mark.parametrize("kind", [*FOURTH, *SECOND])
def test_objects_are_immutable_and_no_containers(kind: Any) -> None:
    """No attribute, no element, no length, no iteration, no hash, no constructor; results are the caller's own."""
    x = some(kind, np.random.default_rng(9), (2,))
    for name in ("shape", "_held", "new"):
        with pytest.raises(AttributeError, match="is immutable"):
            setattr(x, name, 1)
        with pytest.raises(AttributeError, match="is immutable"):
            delattr(x, name)
    assert not x._held.flags.writeable
    for misuse in (lambda: len(x), lambda: iter(x), lambda: hash(x), lambda: x.__setitem__(0, x[1])):
        with pytest.raises((TypeError, AttributeError)):
            misuse()
    with pytest.raises(TypeError, match="is made by its from_"):
        kind(np.eye(6))
    before = x.tensor()
    x.tensor()[...] = 0.0
    assert (x.tensor() == before).all()


@pytest.mark.parametrize("kind", [*FOURTH, *SECOND])
def test_bare_arrays_and_objects_do_not_mix(kind: Any) -> None:
    """numpy cannot take an object, nor an object numpy's operands, on either side."""
    x = some(kind, np.random.default_rng(10))
    with pytest.raises(ImplicitNotationError, match=f"a {kind.__name__} is no bare array: .*name a notation"):
        np.asarray(x)
    with pytest.raises(ImplicitNotationError):
        kind.from_tensor(x)
    operand = np.ones(6)
    misuses: list[Any] = [
        lambda: operand * x, lambda: x * operand, lambda: operand @ x, lambda: x @ operand, lambda: operand + x,
        lambda: x + operand, lambda: x - operand, lambda: x / operand, lambda: x + 1, lambda: 1 - x, lambda: x * x,
        lambda: 1 / x, lambda: np.add(x, x), lambda: x * "2", lambda: x / "2",
    ]  # fmt: skip
    for misuse in misuses:
        with pytest.raises(TypeError):
            misuse()
    assert x != operand.tolist()


def test_kinds_do_not_mix() -> None:
    """Products, sums and work of the wrong kinds are type errors."""
    rng = np.random.default_rng(11)
    C, S, sigma, eps = (some(kind, rng) for kind in (Stiffness, Compliance, Stress, Strain))
    for misuse in (
        lambda: C @ sigma, lambda: S @ eps, lambda: C + S, lambda: sigma + eps, lambda: sigma - eps, lambda: C @ C,
        lambda: sigma.dot(sigma), lambda: eps.dot(eps), lambda: C.allclose(S), lambda: Stiffness.stack([C, S]),
    ):  # fmt: skip
        with pytest.raises(TypeError):
            misuse()
    assert C != S
    with pytest.raises(fr.ShapeError, match=r"\(2,\) of Stiffness and \(3,\) of Strain do not broadcast"):
        _ = some(Stiffness, rng, (2,)) @ some(Strain, rng, (3,))


@pytest.mark.parametrize("kind", [*FOURTH, *SECOND])
def test_stack_reshape_and_scalars_refuse_what_does_not_fit(kind: Any) -> None:
    """Each with a message of its own; what fits is joined in order."""
    rng = np.random.default_rng(12)
    x, y = some(kind, rng, (2,)), some(kind, rng, (2,))
    assert kind.stack([x, y])[1] == y
    assert x.reshape(-1, 1).shape == (2, 1)
    with pytest.raises(fr.ShapeError, match="at least one"):
        kind.stack([])
    with pytest.raises(fr.ShapeError, match=r"\(\) and \(2,\)"):
        kind.stack([x, x[0]])
    with pytest.raises(fr.ShapeError, match=r"cannot be reshaped to \(3,\)"):
        x.reshape(3)
    for bad in (0, np.nan, np.inf):
        with pytest.raises(DataError, match="cannot be divided by"):
            _ = x / bad
    with pytest.raises(DataError, match="factor"):
        _ = x * np.nan
    with pytest.raises(fr.ShapeError, match="do not broadcast"):
        x.scaled(np.ones(3))


@pytest.mark.parametrize("bad", [np.nan, np.inf])
@pytest.mark.parametrize("count", [1, 300])
def test_what_is_not_finite_never_enters(bad: float, count: int) -> None:
    """Every constructor refuses it, by the caller's label; `check=False` is the one way round."""
    xx = Notation.voigt(Ordering("xx yy zz xy yz zx"))
    vector, matrix, triangle = np.zeros((count, 6)), np.zeros((count, 6, 6)), np.zeros((count, 21))
    vector[-1, 4] = matrix[-1, 3, 4] = triangle[-1, 1] = bad
    second, fourth = np.zeros((count, 3, 3)), np.zeros((count, 3, 3, 3, 3))
    second[-1, 0, 2] = fourth[-1, 0, 1, 2, 2] = bad
    member = rf"of batch member \({count - 1},\) is {bad}"
    for kind in SECOND:
        for call in (partial(kind.from_vector, vector, xx), partial(kind.from_tensor, second, symmetrize=True)):
            with pytest.raises(DataError, match=f"component (23|13) {member}"):
                call()
        kind.from_vector(vector, xx, check=False)
        kind.from_tensor(second, check=False)
    for kind in FOURTH:
        with pytest.raises(DataError, match=rf"component \[12, 23\] {member}"):
            kind.from_matrix(matrix, xx, symmetrize=True)
        with pytest.raises(DataError, match=f"component 1233 {member}"):
            kind.from_tensor(fourth, symmetrize=True)
        with pytest.raises(DataError, match=member):
            kind.from_triangle(triangle, xx, by="rows")
        kind.from_matrix(matrix, xx, check=False)


def test_asymmetry_of_a_matrix_is_reported_in_the_callers_own_numbers() -> None:
    """Places, labels and values are those of the caller's array; a tolerance or a request lets it in."""
    notation = Notation.voigt(Ordering("xx yy zz xy yz zx"))
    matrix = np.tile(10.0 * np.eye(6), (2, 1, 1))
    matrix[1, 0, 3], matrix[1, 3, 0] = 3.0, 2.0
    for kind in FOURTH:
        with pytest.raises(fr.SymmetryError) as caught:
            kind.from_matrix(matrix, notation)
        text = str(caught.value)
        assert "[11, 12] (row 1, column 4) is 3 and [12, 11] (row 4, column 1) is 2" in text
        assert "batch member (1,)" in text
        assert "rtol=1e-09" in text
        assert "symmetrize=True" in text
        assert kind.from_matrix(matrix, notation, symmetrize=True).matrix(notation)[1, 0, 3].round(12) == 2.5
        assert kind.from_matrix(matrix, notation, rtol=0.3) == kind.from_matrix(matrix, notation, symmetrize=True)
    with pytest.raises(DataError, match="rtol must be a finite number that is not negative"):
        Stiffness.from_matrix(matrix, notation, rtol=-1.0)


def test_asymmetry_in_a_tensorial_notation_is_that_of_the_tensor() -> None:
    """[11, 12] is twice [12, 11] there, as it must be; equal entries are the fault."""
    matrix = np.eye(6)
    matrix[1, 0], matrix[0, 1] = 0.5, 0.25
    Stiffness.from_matrix(matrix, TENSORIAL, rtol=1.0)
    matrix[1, 0] = 0.5
    with pytest.raises(fr.SymmetryError, match=r"row \d, column \d\) is 0\.\d+ and .* is 0\.\d+"):
        Stiffness.from_matrix(matrix + matrix.T, TENSORIAL)
    fine = TENSORIAL.pack_stiffness(stiffness_tensors(np.random.default_rng(1), ()))
    assert not np.allclose(fine, fine.T)
    Stiffness.from_matrix(fine, TENSORIAL)


def test_asymmetry_of_a_tensor_is_reported_by_its_components() -> None:
    """Minor symmetry, major symmetry, and the symmetry of second-order tensors."""
    C = stiffness_tensors(np.random.default_rng(13), ())
    C[0, 0, 1, 2] = C[0, 0, 2, 1] = C[1, 2, 0, 0] + 1.0
    with pytest.raises(fr.SymmetryError, match=rf"1123 is {C[0, 0, 1, 2]:.10g} and 2311 is {C[1, 2, 0, 0]:.10g}"):
        Compliance.from_tensor(C)
    Compliance.from_tensor(C, symmetrize=True)
    C[0, 0, 2, 1] += 1.0
    with pytest.raises(fr.SymmetryError, match="1123 and 1132"):
        Stiffness.from_tensor(C)
    with pytest.raises(fr.SymmetryError, match="stress must be symmetric: components 12 and 21"):
        Stress.from_tensor([[0, 1, 0], [2, 0, 0], [0, 0, 0]])
    assert Strain.from_tensor([[0, 1, 0], [2, 0, 0], [0, 0, 0]], symmetrize=True).tensor()[0, 1].round(12) == 1.5


def test_a_matrix_needs_a_complete_notation() -> None:
    """A partial ordering and something that is no notation are refused on the way in and out."""
    plane, x = Notation.voigt(Ordering("11 22 12")), Stiffness.from_matrix(np.eye(6), MANDEL)
    for misuse in (lambda: x.matrix(plane), lambda: Stiffness.from_matrix(np.eye(6), plane)):
        with pytest.raises(fr.OrderingError, match="plane_stress_stiffness"):
            misuse()
    wrong: Any = "voigt"
    with pytest.raises(fr.NotationError, match="notation must be a Notation, got 'voigt'"):
        x.matrix(wrong)
    with pytest.raises(fr.ShapeError, match="from_triangle"):
        Stiffness.from_matrix(np.zeros(21), MANDEL)


@given(generators, partial_orderings, batch_shapes, st.sampled_from(SECOND))
def test_plane_vectors_are_read_and_written(
    rng: np.random.Generator, ordering: Ordering, batch: tuple[int, ...], kind: Any
) -> None:
    """In a partial ordering, exactly; a state that does not fit is refused."""
    notation = Notation.voigt(ordering)
    vector = random_array(rng, (*batch, ordering.size))
    x = kind.from_vector(vector, notation)
    np.testing.assert_allclose(x.vector(notation), vector, rtol=4 * EPS)
    with pytest.raises(fr.SymmetryError, match="has no place for it"):
        kind.from_tensor(np.ones((3, 3))).vector(notation)


def test_tables_show_head_labels_and_numbers() -> None:
    """As text and, escaped, as HTML; of a single tensor only."""
    notation = Notation.voigt(Ordering("xx yy zz xy yz zx"))
    C = Stiffness.from_matrix(np.diag([1.0, 2, 3, 4, 5, 6.123456789]), notation)
    table = C.table(notation, unit="<GPa> & more", digits=4)
    lines = str(table).splitlines()
    assert repr(table) == str(table)
    assert lines[:2] == ["Stiffness in <GPa> & more", repr(notation)]
    assert lines[2].split() == ["11", "22", "33", "12", "23", "13"]
    assert lines[-1].split() == ["13", "0", "0", "0", "0", "0", "6.123"]
    page = table._repr_html_()  # pyright: ignore[reportPrivateUsage]  # the name is the notebooks'
    assert html.escape("<GPa> & more") in page
    assert "<GPa>" not in page
    assert page.count("<td>") == 36
    assert pickle.loads(pickle.dumps(table)) is not None
    assert str(pickle.loads(pickle.dumps(table))) == str(table)
    vector = Stress.from_vector([1, 2, 3, 4, 5, -0.0], notation).table(notation, unit="MPa")
    assert [line.split() for line in str(vector).splitlines()[2:]] == [
        ["11", "1"], ["22", "2"], ["33", "3"], ["12", "4"], ["23", "5"], ["13", "0"],
    ]  # fmt: skip
    assert vector._repr_html_().count("<td>") == 6  # pyright: ignore[reportPrivateUsage]  # as above
    with pytest.raises(fr.ShapeError, match=r"batch has shape \(1,\): index it first"):
        C.reshape(1).table(notation, unit="GPa")


def test_repr_names_kind_batch_and_size() -> None:
    """One line, without components."""
    C = Stiffness.from_matrix(np.eye(6), MANDEL)
    assert repr(C).startswith("<Stiffness: batch shape (), real, norm 2.44949; held as Notation.mandel(")
    assert repr((C * 1j).reshape(1)).startswith("<Stiffness: batch shape (1,), complex; held as")
