"""What every benchmark shares: the case, the interleaved measurement, the peak of memory, the table.

All calls of one case are timed in turn, round after round in one process, so that whatever else the machine does at the
time hits them alike. Ratios of medians are the result; the times themselves belong to the machine.
"""

import gc
import platform
import re
import statistics
import time
import tracemalloc
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any, Final

import numpy as np
from numpy.typing import NDArray

Call = Callable[[], Any]

SIZES: Final = (1, 10, 1_000, 100_000, 1_000_000)
SECONDS: Final = 2.0
"""What one case of one size may take, apart from calls that take longer on their own."""


@dataclass(frozen=True)
class Work:
    """The calls of one case for one batch size. All of them do the same work on the same data.

    Attributes
    ----------
    ours : callable
        The public call with its checks on.
    moved : int
        Bytes that have to be read and written; `copy` is an assignment that moves as many.
    plain : mapping of str to callable
        What people write by hand, by the name of a column: 'einsum', 'einsum, optimized', 'by hand'.
    compiled : callable, optional
        A plain compiled loop in one thread.
    unchecked : callable, optional
        The same call with `check=False`.
    read : mapping of str to callable
        How to get comparable arrays from the results, by the name of the call; `numpy.asarray` where nothing is said.
    tolerance : float
        How far results may differ, relative to the largest component.
    """

    ours: Call
    moved: int
    plain: Mapping[str, Call] = field(default_factory=dict[str, Call])
    compiled: Call | None = None
    unchecked: Call | None = None
    read: Mapping[str, Callable[[Any], NDArray[Any]]] = field(default_factory=dict[str, Callable[[Any], NDArray[Any]]])
    tolerance: float = 1e-12


@dataclass(frozen=True)
class Case:
    """One row of the table: an operation, how to set it up, and the ratios that it is meant to reach.

    Attributes
    ----------
    name : str
        The operation in a few words.
    make : callable
        Takes the batch size and a generator of random numbers and returns the `Work`.
    at_least : mapping of str to float
        For columns of `Work.plain`: how many times faster the public call is meant to be at 100,000 items.
    at_most : mapping of str to float
        For 'compiled' and 'copy': how many times slower it may be.
    sizes : sequence of int
        The batch sizes.
    """

    name: str
    make: Callable[[int, np.random.Generator], Work]
    at_least: Mapping[str, float] = field(default_factory=dict[str, float])
    at_most: Mapping[str, float] = field(default_factory=dict[str, float])
    sizes: Sequence[int] = SIZES


@dataclass(frozen=True)
class Row:
    """What was measured: medians in seconds by the name of the call, and the peak of memory over the result's size."""

    case: Case
    size: int
    medians: Mapping[str, float]
    peak: float


def check_agreement(work: Work) -> None:
    """Demand that all calls give the same numbers."""
    others = {**work.plain, "compiled": work.compiled, "unchecked": work.unchecked}
    expected = work.read.get("ours", np.asarray)(work.ours())
    scale = np.abs(expected).max(initial=0.0) or 1.0
    for name, call in others.items():
        if call is not None:
            found = work.read.get(name, np.asarray)(call())
            assert found.shape == expected.shape, f"{name} gives the shape {found.shape}, ours {expected.shape}"
            found = found - expected
            defect = max(found.max(initial=0.0), -found.min(initial=0.0)) / scale
            assert defect < work.tolerance, f"{name} differs from ours by {defect:.2g}"


def measure(case: Case, size: int, work: Work) -> Row:
    """Time all calls of one case in turn and return the medians."""
    source, target = np.ones(work.moved // 16), np.empty(work.moved // 16)
    calls: dict[str, Call] = {"ours": work.ours}
    if work.unchecked is not None:
        calls["unchecked"] = work.unchecked
    calls |= work.plain
    if work.compiled is not None:
        calls["compiled"] = work.compiled
    calls["copy"] = lambda: np.copyto(target, source)
    # A call is repeated until the clock can see it; a second one decides, since the first one warms things up.
    repeats: dict[str, int] = {}
    total = 0.0
    for name, call in calls.items():
        call()
        once = _seconds(call, 1)
        repeats[name] = max(1, min(10_000, round(2e-4 / max(once, 1e-8))))
        total += once * repeats[name]
    rounds = int(max(5, min(35, SECONDS / total)))
    times: dict[str, list[float]] = {name: [] for name in calls}
    names = list(calls)
    gc.collect()
    gc.disable()
    try:
        for k in range(rounds):
            # What ran before decides what is in the cache, so that every call has its turn in every place.
            for name in names[k % len(names) :] + names[: k % len(names)]:
                times[name].append(_seconds(calls[name], repeats[name]))
    finally:
        gc.enable()
    return Row(case, size, {name: statistics.median(values) for name, values in times.items()}, _peak(work.ours))


def _seconds(call: Call, repeats: int) -> float:
    start = time.perf_counter()
    for _ in range(repeats):
        call()
    return (time.perf_counter() - start) / repeats


def _peak(call: Call) -> float:
    """Return the peak of newly allocated memory over the size of the result."""
    call()
    tracemalloc.start()
    try:
        before = tracemalloc.get_traced_memory()[0]
        tracemalloc.reset_peak()
        result = call()
        peak = tracemalloc.get_traced_memory()[1] - before
    finally:
        tracemalloc.stop()
    return peak / max(1, sum(part.nbytes for part in _arrays_of(result)))


def _arrays_of(result: Any) -> list[NDArray[Any]]:
    """Return the arrays that a result consists of: itself, or those that an object holds."""
    if isinstance(result, np.ndarray):
        return [result]
    if type(result) is tuple:
        return _arrays_of_all(result)  # pyright: ignore[reportUnknownArgumentType]  # parts of any kind
    names = {name for kind in type(result).__mro__ for name in getattr(kind, "__slots__", ())}
    names |= set(getattr(result, "__dict__", {}))
    held = (getattr(result, name, None) for name in sorted(names))
    return _arrays_of_all([part for part in held if isinstance(part, (np.ndarray, tuple))])


def _arrays_of_all(parts: Sequence[Any]) -> list[NDArray[Any]]:
    return [array for part in parts for array in _arrays_of(part)]


COLUMNS: Final = ("einsum", "einsum, optimized", "by hand")
HEAD: Final = (
    "operation",
    "items",
    "time",
    "unchecked",
    *(f"{name} takes" for name in COLUMNS),
    "over compiled",
    "over copy",
    "peak memory",
)


def table(rows: Sequence[Row]) -> list[tuple[str, ...]]:
    """Return the lines of the table, as text, the head first; goals stand in brackets."""
    lines: list[tuple[str, ...]] = [HEAD]
    for row in rows:
        ours = row.medians["ours"]
        cells = [row.case.name, f"{row.size:,}", _time_text(ours)]
        cells.append(_time_text(row.medians["unchecked"]) if "unchecked" in row.medians else "")
        cells += [
            _ratio_text(row.medians.get(name), ours, _goal(row, row.case.at_least, name, ">=")) for name in COLUMNS
        ]
        for name in ("compiled", "copy"):
            other = row.medians.get(name)
            cells.append(_ratio_text(ours, other, _goal(row, row.case.at_most, name, "<=")) if other else "")
        cells.append(f"{row.peak:.2f}" if row.size >= 1_000 else "")
        lines.append(tuple(cells))
    return lines


def _goal(row: Row, goals: Mapping[str, float], name: str, sign: str) -> str:
    # Goals are stated for large batches; the copy's for the largest.
    stated = row.size == (1_000_000 if name == "copy" else 100_000)
    return f" ({sign} {goals[name]:g})" if stated and name in goals else ""


def _ratio_text(numerator: float | None, denominator: float | None, goal: str) -> str:
    if numerator is None or not denominator:
        return ""
    ratio = numerator / denominator
    return f"{ratio:.3g} x{goal}" if ratio < 100 else f"{ratio:.0f} x{goal}"


def _time_text(seconds: float) -> str:
    for unit, scale in (("us", 1e-6), ("ms", 1e-3)):
        if seconds < 1000 * scale:
            return f"{seconds / scale:.3g} {unit}"
    return f"{seconds:.3g} s"


def plain_text(lines: Sequence[tuple[str, ...]]) -> str:
    """Return the table for a terminal."""
    widths = [max(len(line[k]) for line in lines) for k in range(len(lines[0]))]
    return "\n".join("  ".join(cell.ljust(width) for cell, width in zip(line, widths, strict=True)) for line in lines)


def restructured_text(lines: Sequence[tuple[str, ...]]) -> str:
    """Return the table for the manual, with a line on the machine above it."""
    text = [machine(), "", ".. list-table::", "   :header-rows: 1", ""]
    for line in lines:
        text += [f"   {'* -' if k == 0 else '  -'} {cell}".rstrip() for k, cell in enumerate(line)]
    return "\n".join(text) + "\n"


def machine() -> str:
    """Return a sentence on the machine, in neutral words."""
    info = Path("/proc/cpuinfo")
    text = info.read_text(encoding="ascii", errors="replace") if info.exists() else ""
    fields = dict(re.findall(r"^(vendor_id|cpu family|model)\s*:\s*(.+)$", text, re.MULTILINE))
    cores = len(re.findall(r"^processor\s*:", text, re.MULTILINE))
    vector = "AVX-512" if " avx512f" in text else "AVX2" if " avx2" in text else "no wide vectors"
    chip = (
        f"{fields['vendor_id']} family {fields['cpu family']} model {fields['model']} with {vector}" if fields else ""
    )
    return (
        f"Measured on {platform.machine()} ({chip or 'processor not known'}), {cores or 'some'} cores shared with "
        f"other work, {platform.system()}, Python {platform.python_version()}, numpy {np.__version__} with one BLAS "
        "thread."
    )
