"""Counts what became of the mutated records and prints it at the end of the run."""

import pytest

COUNTS: dict[str, float] = {}


@pytest.fixture
def mutated_counts() -> dict[str, float]:
    """Return the table that takes the counts."""
    return COUNTS


def pytest_terminal_summary(terminalreporter: pytest.TerminalReporter) -> None:
    """Print how many mutated records were read and refused, and the slowest."""
    if COUNTS:
        terminalreporter.write_line(
            f"mutated records: {COUNTS['same']:.0f} read to the same value, {COUNTS['refused']:.0f} refused, the "
            f"slowest took {1e3 * COUNTS['slowest']:.1f} ms"
        )
