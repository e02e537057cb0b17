"""The marks in the files of misuse: a line that ends in `# rejected` must be an error, no other line may be one."""

import re
from collections.abc import Collection
from pathlib import Path
from typing import Final

REJECTED: Final = Path(__file__).parent / "rejected"

_MARK: Final = re.compile(r"#\s*rejected\s*$")


def disagreements(path: Path, errors: Collection[int]) -> list[str]:
    """Return one sentence for each line of `path` where its marks and a type checker's errors differ."""
    lines = path.read_text(encoding="utf-8").splitlines()
    marked = {number for number, line in enumerate(lines, start=1) if _MARK.search(line)}
    complaints = [] if marked else [f"{path.name}: no line is marked"]
    complaints += [
        f"{path.name}:{line}: accepted although it is marked as misuse" for line in sorted(marked - set(errors))
    ]
    complaints += [f"{path.name}:{line}: rejected although it is not marked" for line in sorted(set(errors) - marked)]
    return complaints
