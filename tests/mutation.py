"""Change the library in small ways, one at a time, and list the changes that no test notices.

    python -m tests.mutation [--sample N] [--seed S] [--report FILE] [module ...]

Run it in a copy: files are changed in place (and restored). The table `[tool.cosmic-ray]` of pyproject.toml names the
modules and the tests that are to notice; cosmic-ray makes the changes. Each change is looked at by a fork of this
process, in which numpy, scipy, hypothesis and pytest are already imported, which is three times faster than a new one.

Left out are changes that cannot matter, by a rule and not by eye: what does not compile, what alters annotations or
overloads only, and what turns the `*` before keyword-only parameters into another sign.
"""

import argparse
import ast
import difflib
import importlib
import json
import os
import random
import re
import resource
import signal
import sys
import time
import tomllib
from collections.abc import Iterator
from pathlib import Path
from typing import Any, NamedTuple

import hypothesis
import pytest

ROOT = Path(__file__).resolve().parents[1]
# Forks find hypothesis imported already, which pytest warns of.
_OPTIONS = (
    "-x",
    "-q",
    "-p",
    "no:cacheprovider",
    "-W",
    "ignore:Module already imported:pytest.PytestAssertRewriteWarning",
)


class Mutant(NamedTuple):
    """One changed module."""

    path: Path
    operator: str
    original: str
    mutated: str

    @property
    def difference(self) -> str:
        """The lines that changed."""
        lines = difflib.unified_diff(self.original.splitlines(), self.mutated.splitlines(), lineterm="", n=0)
        return "\n".join(line for line in lines if not line.startswith(("---", "+++")))


class Outcome(NamedTuple):
    """How one change fared: 'killed', 'timeout' or 'survived'."""

    mutant: Mutant
    fate: str
    seconds: float


class _NoShrinking:
    """Keeps hypothesis from looking for the smallest failure: that there is one is enough."""

    def pytest_configure(self) -> None:
        phases = (hypothesis.Phase.explicit, hypothesis.Phase.generate)
        hypothesis.settings.register_profile("mutation", hypothesis.settings(), phases=phases, database=None)
        hypothesis.settings.load_profile("mutation")


def mutants_of(path: Path, skipped: re.Pattern[str]) -> Iterator[Mutant]:
    """Yield every change of a module that can make a difference when it runs, each once."""
    syntax, mutating, plugins = (_untyped(f"cosmic_ray.{name}") for name in ("ast", "mutating", "plugins"))
    original = path.read_text(encoding="utf-8")
    nodes = list(syntax.ast_nodes(syntax.get_ast(original)))
    seen = {_what_runs(original)}
    for name in sorted(plugins.operator_names()):
        operator = plugins.get_operator(name)
        if skipped.search(name) or operator.arguments():
            continue
        count = sum(len(list(operator().mutation_positions(node))) for node in nodes)
        for occurrence in range(count):
            mutated = str(mutating.mutate_code(original, operator(), occurrence))
            running = _what_runs(mutated)
            if running is not None and running not in seen:
                seen.add(running)
                yield Mutant(path, name, original, mutated)


def _untyped(name: str) -> Any:
    """Import a module that only this tool needs and that has no types."""
    return importlib.import_module(name)


def _what_runs(source: str) -> str | None:
    """Return the syntax tree as text, without annotations and overloads; None where there is none."""
    try:
        tree = ast.parse(source)
    except SyntaxError:
        return None
    for node in ast.walk(tree):
        if isinstance(node, ast.FunctionDef):
            node.returns = None
            arguments = [*node.args.posonlyargs, *node.args.args, *node.args.kwonlyargs]
            defaults = [*node.args.defaults, *filter(None, node.args.kw_defaults)]
            names = [ast.arg(argument.arg) for argument in arguments]
            node.args = ast.arguments([], names, node.args.vararg, [], [], node.args.kwarg, defaults)
        if isinstance(node, ast.Module | ast.ClassDef):
            node.body = [part for part in node.body if not _is_for_checkers(part)]
    return ast.dump(tree)


def _is_for_checkers(node: ast.stmt) -> bool:
    if isinstance(node, ast.FunctionDef):
        others = [decorator for decorator in node.decorator_list if ast.unparse(decorator) != "overload"]
        return not others and ast.unparse(node.body[-1]) == "..."
    return isinstance(node, ast.AnnAssign) and node.value is None


def try_out(mutant: Mutant, tests: list[str], timeout: float) -> Outcome:
    """Run the tests against a changed module, in a fork, and restore the module."""
    stat = mutant.path.stat()
    start = time.monotonic()
    try:
        mutant.path.write_text(mutant.mutated, encoding="utf-8")
        # Compiled files are recognised by whole seconds and size, so the time must differ from that of the original.
        os.utime(mutant.path, (stat.st_atime, stat.st_mtime + 10_000.0))
        child = os.fork()
        if child == 0:
            _run_tests(tests)
        fate = _wait(child, start + timeout)
    finally:
        mutant.path.write_text(mutant.original, encoding="utf-8")
        os.utime(mutant.path, (stat.st_atime, stat.st_mtime))
    return Outcome(mutant, fate, time.monotonic() - start)


def _run_tests(tests: list[str]) -> None:
    """Run tests in this process, silently, and end it with their verdict."""
    code = 1
    try:
        os.setsid()
        silence = os.open(os.devnull, os.O_RDWR)
        for descriptor in (0, 1, 2):
            os.dup2(silence, descriptor)
        resource.setrlimit(resource.RLIMIT_AS, (4 << 30, 4 << 30))
        sys.dont_write_bytecode = True
        code = int(pytest.main([*_OPTIONS, *tests], plugins=[_NoShrinking()]))
    finally:
        os._exit(min(code, 255))


def _wait(child: int, deadline: float) -> str:
    """Return the fate that the end of the child tells; end it where it takes too long."""
    while time.monotonic() < deadline:
        ended, status = os.waitpid(child, os.WNOHANG)
        if ended:
            return "survived" if status == 0 else "killed"
        time.sleep(0.01)
    os.killpg(child, signal.SIGKILL)
    os.waitpid(child, 0)
    return "timeout"


def main() -> int:
    """Try the changes of the named modules, or of all in the table, and print those that survive."""
    parser = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    parser.add_argument("modules", nargs="*", help="parts of the paths of modules; by default all of the table")
    parser.add_argument("--sample", type=int, help="how many changes to draw at random, over all modules named")
    parser.add_argument("--seed", type=int, default=0, help="for the drawing")
    parser.add_argument("--report", type=Path, help="a file that takes a line of JSON for each change")
    options = parser.parse_args()
    settings: dict[str, Any] = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))["tool"][
        "cosmic-ray"
    ]
    os.chdir(ROOT)
    sys.path[:0] = [str(ROOT / "src"), str(ROOT)]
    for name in ("mpmath", "numpy.testing", "hypothesis.extra.numpy", "scipy.spatial.transform"):
        __import__(name)

    work: list[tuple[Mutant, list[str]]] = []
    for pattern, tests in settings["tests"].items():
        for path in sorted(Path("src/fourthrank").glob(pattern)):
            if not options.modules or any(part in path.as_posix() for part in options.modules):
                own = [name for test in tests if Path(name := test.format(module=path.stem)).exists()]
                found = list(mutants_of(path, re.compile(settings["skip-operators"])))
                print(f"{path}: {len(found)} changes, to be noticed by {' '.join(own)}", flush=True)
                work += [(mutant, [*own, str(path)]) for mutant in found]
    if options.sample is not None and options.sample < len(work):
        work = random.Random(options.seed).sample(work, options.sample)
    for tests in {tuple(tests): tests for _, tests in work}.values():
        if pytest_verdict(tests, settings["timeout"]) != "survived":
            print(f"the unchanged code fails {' '.join(tests)}")
            return 2

    fates = {"killed": 0, "timeout": 0, "survived": 0}
    for mutant, tests in work:
        outcome = try_out(mutant, tests, settings["timeout"])
        fates[outcome.fate] += 1
        if options.report:
            line: dict[str, object] = {"path": str(mutant.path), "operator": mutant.operator, "fate": outcome.fate}
            line |= {"seconds": round(outcome.seconds, 2), "difference": mutant.difference}
            with options.report.open("a", encoding="utf-8") as file:
                file.write(json.dumps(line) + "\n")
        if outcome.fate == "survived":
            print(f"\nsurvived: {mutant.path} ({mutant.operator})\n{mutant.difference}", flush=True)
    noticed = fates["killed"] + fates["timeout"]
    print(f"\n{len(work)} changes: {noticed} noticed ({fates['timeout']} by time), {fates['survived']} survived")
    return 0


def pytest_verdict(tests: list[str], timeout: float) -> str:
    """Run tests against the code as it is; 'survived' where they pass."""
    child = os.fork()
    if child == 0:
        _run_tests(tests)
    return _wait(child, time.monotonic() + timeout)


if __name__ == "__main__":
    sys.exit(main())
