"""Misuse is refused before the program runs."""

import re
import subprocess
import sys
from collections.abc import Mapping
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[2]
REJECTED = Path(__file__).parent / "rejected"
MARK = re.compile(r"#\s*rejected\s*$")


@pytest.fixture(scope="module")
def errors(tmp_path_factory: pytest.TempPathFactory) -> Mapping[str, frozenset[int]]:
    """Return the lines with errors of each file in the folder, as mypy sees them."""
    return _errors(REJECTED, tmp_path_factory.mktemp("mypy"))


@pytest.mark.parametrize("path", sorted(REJECTED.glob("*.py")), ids=lambda path: path.stem)
def test_type_checker_rejects_every_marked_line_and_no_other(path: Path, errors: Mapping[str, frozenset[int]]) -> None:
    """Each misuse is an error at its own line, and what stands around it is correct."""
    marked = _marked(path)
    assert marked, f"{path.name} marks no line"
    found = errors.get(path.name, frozenset())
    assert sorted(marked - found) == [], "lines that are accepted although they are marked as misuse"
    assert sorted(found - marked) == [], "lines that are rejected although they are not marked"


def test_accepted_line_is_not_counted_as_rejected(tmp_path: Path) -> None:
    """The check itself can fail: it tells a correct line from a wrong one."""
    (tmp_path / "sample.py").write_text(
        'number: int = "one"  # rejected\nother: int = 1  # rejected\n', encoding="utf-8"
    )
    assert _marked(tmp_path / "sample.py") == {1, 2}
    assert _errors(tmp_path, tmp_path / "cache") == {"sample.py": {1}}


def _marked(path: Path) -> frozenset[int]:
    lines = path.read_text(encoding="utf-8").splitlines()
    return frozenset(number for number, line in enumerate(lines, start=1) if MARK.search(line))


def _errors(folder: Path, cache: Path) -> Mapping[str, frozenset[int]]:
    command = [sys.executable, "-m", "mypy", "--strict", "--config-file=", f"--cache-dir={cache}", "--no-pretty"]
    command += ["--no-error-summary", "--show-error-codes", *map(str, sorted(folder.glob("*.py")))]
    done = subprocess.run(command, cwd=ROOT, capture_output=True, text=True, check=False)
    # 1 is mypy's exit code for errors found; 2 means that it could not work at all.
    assert done.returncode == 1, done.stdout + done.stderr
    found: dict[str, set[int]] = {}
    for line in done.stdout.splitlines():
        if match := re.match(r"(?P<path>.+?\.py):(?P<line>\d+)(:\d+)?: error:", line):
            found.setdefault(Path(match["path"]).name, set()).add(int(match["line"]))
    return {name: frozenset(lines) for name, lines in found.items()}
