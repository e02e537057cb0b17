"""Misuse is refused before the program runs."""

import re
import subprocess
import sys
from collections.abc import Mapping
from pathlib import Path

import pytest

from tests.typing.marks import REJECTED, disagreements

ROOT = Path(__file__).parents[2]


@pytest.fixture(scope="module")
def errors(tmp_path_factory: pytest.TempPathFactory) -> Mapping[str, set[int]]:
    """Return the lines with errors of each file in the folder, as mypy sees them."""
    return _errors(REJECTED, tmp_path_factory.mktemp("mypy"))


@pytest.mark.parametrize("path", sorted(REJECTED.glob("*.py")), ids=lambda path: path.stem)
def test_type_checker_rejects_every_marked_line_and_no_other(path: Path, errors: Mapping[str, set[int]]) -> None:
    """Each misuse is an error at its own line, and what stands around it is correct."""
    assert disagreements(path, errors.get(path.name, set())) == []


def test_check_of_the_marks_can_fail(tmp_path: Path) -> None:
    """A marked line that is correct, an unmarked one that is not, and a file without marks are all reported."""
    sample = tmp_path / "sample.py"
    sample.write_text('one: int = "1"  # rejected\ntwo: int = 2  # rejected\nthree: int = "3"\n', encoding="utf-8")
    empty = tmp_path / "unmarked.py"
    empty.write_text("four: int = 4\n", encoding="utf-8")
    found = _errors(tmp_path, tmp_path / "cache")
    assert found == {"sample.py": {1, 3}}
    assert disagreements(sample, found["sample.py"]) == [
        "sample.py:2: accepted although it is marked as misuse",
        "sample.py:3: rejected although it is not marked",
    ]
    assert disagreements(empty, set()) == ["unmarked.py: no line is marked"]


def _errors(folder: Path, cache: Path) -> Mapping[str, set[int]]:
    """Return the lines that mypy rejects, by file name."""
    command = [sys.executable, "-m", "mypy", "--strict", "--config-file=", f"--cache-dir={cache}", "--no-pretty"]
    command += ["--no-error-summary", *map(str, sorted(folder.glob("*.py")))]
    done = subprocess.run(command, cwd=ROOT, capture_output=True, text=True, check=False)
    # 1 is mypy's exit code for errors found; with 2 it could not work at all.
    assert done.returncode == 1, done.stdout + done.stderr
    found: dict[str, set[int]] = {}
    for line in done.stdout.splitlines():
        if match := re.match(r"(?P<path>.+?\.py):(?P<line>\d+)(:\d+)?: error:", line):
            found.setdefault(Path(match["path"]).name, set()).add(int(match["line"]))
    return found
