"""Collects the counts of the statistics of the axes search and prints them at the end of the run."""

import pytest

COUNTS: dict[str, tuple[int, int, float]] = {}


@pytest.fixture
def axes_counts() -> dict[str, tuple[int, int, float]]:
    """Return the table that takes, for each class, searches, failures and the worst excess of the distance."""
    return COUNTS


def pytest_terminal_summary(terminalreporter: pytest.TerminalReporter) -> None:
    """Print how many searches there were and how many failed."""
    if COUNTS:
        searches, failures = (sum(row[k] for row in COUNTS.values()) for k in (0, 1))
        terminalreporter.write_line(f"axes search: {failures} failures in {searches} searches")
        for name, (tried, failed, excess) in COUNTS.items():
            terminalreporter.write_line(f"    {name}: {failed} of {tried}, largest excess {excess:.1e}")
