"""`python -m tests.typing.pyright_rejects`: pyright, too, rejects every marked line of `rejected/` and no other.

The test run does the same with mypy; pyright is a program of its own and part of the type checks only.
"""

import json
import subprocess
import sys
from pathlib import Path

from tests.typing.marks import REJECTED, disagreements


def main() -> int:
    """Print every disagreement and return the exit code."""
    paths = sorted(REJECTED.glob("*.py"))
    # The project's configuration leaves the folder out, so the folder has one of its own.
    command = ["pyright", "--outputjson", "--pythonpath", sys.executable, "--project", str(REJECTED)]
    report = json.loads(subprocess.run(command, capture_output=True, text=True, check=False).stdout)
    found: dict[str, set[int]] = {}
    for entry in report["generalDiagnostics"]:
        if entry["severity"] == "error":
            found.setdefault(Path(entry["file"]).name, set()).add(entry["range"]["start"]["line"] + 1)
    complaints = [text for path in paths for text in disagreements(path, found.get(path.name, set()))]
    print(*complaints, f"pyright: {len(paths)} files of misuse, {len(complaints)} disagreements", sep="\n")
    return int(bool(complaints) or not paths)


if __name__ == "__main__":
    sys.exit(main())
