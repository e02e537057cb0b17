"""Collects what the benchmarks measured and prints the table at the end of the run."""

from pathlib import Path

import pytest

from .harness import Row, plain_text, restructured_text, table

ROWS: list[Row] = []


def pytest_addoption(parser: pytest.Parser) -> None:
    """Add the options that choose the sizes and write the table into the manual."""
    group = parser.getgroup("speed")
    group.addoption("--sizes", default="", help="batch sizes, separated by commas; all of them by default")
    group.addoption("--write-table", default="", help="file that takes the table for the manual")


@pytest.fixture
def rows() -> list[Row]:
    """Return the list that takes the measured rows."""
    return ROWS


def pytest_terminal_summary(terminalreporter: pytest.TerminalReporter, config: pytest.Config) -> None:
    """Print the table, and write it where that was asked for."""
    if ROWS:
        lines = table(ROWS)
        terminalreporter.write_line(plain_text(lines))
        target = str(config.getoption("--write-table"))
        if target:
            Path(target).write_text(restructured_text(lines), encoding="utf-8")
