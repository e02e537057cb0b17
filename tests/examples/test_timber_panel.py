"""The example of the timber panel: it runs as a user runs it, and its page holds what an engineer files."""

import re
import subprocess
import sys
from pathlib import Path

EXAMPLE = Path(__file__).parents[2] / "docs" / "examples" / "timber_panel.py"


def test_the_page_is_complete_and_its_numbers_are_right() -> None:
    """Sources, axes, departures from reciprocity, both matrices, 21 constants that read back, and the caution."""
    page = subprocess.run(
        [sys.executable, "-W", "error", str(EXAMPLE)], capture_output=True, text=True, check=True
    ).stdout
    for words in (
        "Wood Handbook, FPL-GTR-282 (2021)",
        "From memory, check before use",
        # Departures that follow from the printed ratios: nu_RL 81.3 %, nu_TL 29.2 %, nu_TR 30.4 % too large.
        "+81.3 %",
        "+29.2 %",
        "+30.4 %",
        "Notation.voigt(Ordering('11 22 33 12 13 23'))",
        "Stiffness in GPa",
        "the matrix is the same bit for bit: yes",
        "qualified engineer",
        "local codes",
    ):
        assert words in page
    columns = re.findall(r"^  column \d\d: (.*)$", page, re.MULTILINE)
    assert [len(column.split()) for column in columns] == [1, 2, 3, 4, 5, 6]
    assert page.count("positive definite") == 2
