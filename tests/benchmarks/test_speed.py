"""Every case of every `cases_...` module: the calls agree with one another, and their times go into the table."""

import importlib
import pkgutil
from pathlib import Path
from typing import Any
from zlib import crc32

import numpy as np
import pytest

from .harness import Case, Row, check_agreement, measure

MODULES = sorted(info.name for info in pkgutil.iter_modules([str(Path(__file__).parent)]) if info.name[:6] == "cases_")
CASES: list[Case] = [case for name in MODULES for case in importlib.import_module(f"{__package__}.{name}").CASES]


def pytest_generate_tests(metafunc: pytest.Metafunc) -> None:
    """Run each case at each of its sizes that was asked for."""
    chosen = {int(size) for size in str(metafunc.config.getoption("--sizes")).split(",") if size}
    runs = [(case, size) for case in CASES for size in case.sizes if not chosen or size in chosen]
    metafunc.parametrize(("case", "size"), runs, ids=[f"{case.name}-{size}" for case, size in runs])


def test_speed(case: Case, size: int, benchmark: Any, rows: list[Row]) -> None:
    """All calls of the case give the same numbers; the medians are recorded."""
    work = case.make(size, np.random.default_rng(crc32(case.name.encode())))
    check_agreement(work)
    row = measure(case, size, work)
    rows.append(row)
    benchmark.group = case.name
    benchmark.extra_info.update(size=size, peak=row.peak, medians=dict(row.medians))
    benchmark.pedantic(work.ours, rounds=5)
