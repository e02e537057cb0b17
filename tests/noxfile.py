"""Every check of the project: `python -m nox -f tests/noxfile.py` runs the default ones.

The two ends of the version matrix run the tests; the newer end also measures coverage, so that no suite runs twice.
An interpreter that this machine lacks is named at the start and at the end, and the nearest one stands in.
"""

import glob
import os
import shutil
import subprocess
import sys
from pathlib import Path

import nox

ROOT = Path(__file__).resolve().parents[1]
VERSIONS = ("3.11", "3.12", "3.13")
FLOOR = "numpy==1.26.*"
# The first release of numpy with wheels for each version of Python; None is the newest one.
NUMPY_BY_PYTHON = {
    "3.11": (FLOOR, "numpy==2.0.*", None),
    "3.12": (FLOOR, "numpy==2.0.*", None),
    "3.13": ("numpy==2.1.*", None),
}
DEV_EXTRA: list[str] = nox.project.load_toml(ROOT / "pyproject.toml")["project"]["optional-dependencies"]["dev"]
ONE_THREAD = {"OPENBLAS_NUM_THREADS": "1", "OMP_NUM_THREADS": "1", "MKL_NUM_THREADS": "1"}


def interpreters() -> dict[str, str]:
    """Return the interpreters of the supported versions that really start, by version."""
    root = os.environ.get("PYENV_ROOT", str(Path.home() / ".pyenv"))
    found: dict[str, str] = {}
    for version in VERSIONS:
        candidates = [
            sys.executable if sys.version_info[:2] == tuple(map(int, version.split("."))) else None,
            shutil.which(f"python{version}"),
            *sorted(glob.glob(f"{root}/versions/{version}.*/bin/python")),
        ]
        for candidate in filter(None, candidates):
            # A launcher on the path may stand for an interpreter that is switched off, so each is tried.
            probe = [candidate, "-c", "import sys, venv; print('%d.%d' % sys.version_info[:2])"]
            if subprocess.run(probe, capture_output=True, text=True, check=False).stdout.strip() == version:
                found[version] = candidate
                break
    return found


FOUND = interpreters()
MISSING = [version for version in VERSIONS if version not in FOUND]
if not FOUND:
    sys.exit(f"none of Python {', '.join(VERSIONS)} is on this machine")
OLDEST, NEWEST = min(FOUND, key=VERSIONS.index), max(FOUND, key=VERSIONS.index)
NOTICE = f"NOT CHECKED ON THIS MACHINE: Python {', '.join(MISSING)} (no interpreter found)" if MISSING else ""
if NOTICE:
    print(f"{'*' * 100}\n* {NOTICE}\n{'*' * 100}", file=sys.stderr)

nox.needs_version = ">=2024.10.9"
nox.options.envdir = str(ROOT / ".nox")
nox.options.sessions = ["lint", "types", "tests", "coverage", "docs", "package"]
nox.options.reuse_venv = "yes"
nox.options.error_on_missing_interpreters = True
nox.options.stop_on_first_error = False


def tools(*names: str) -> list[str]:
    """Return the requirements of the extra `dev` with these names, so that versions stand in one place."""
    chosen = [line for line in DEV_EXTRA if line.split("[")[0].split(">")[0] in names]
    if len(chosen) != len(names):
        sys.exit(f"pyproject.toml, extra dev: of {names} only {chosen} found")
    return chosen


def install(session: nox.Session, extras: str, *more: str | None) -> None:
    """Install the package from this folder with some extras and report what was resolved."""
    session.install("-e", f"{ROOT}[{extras}]", *filter(None, more))


def run_tests(session: nox.Session, *launcher: str) -> None:
    """Run the whole suite; further arguments come from the command line after `--`."""
    session.run("python", "-c", SHOW_VERSIONS)
    session.run("python", *launcher, "-m", "pytest", *session.posargs, env=ONE_THREAD)


SHOW_VERSIONS = """
import platform, numpy, scipy
print("Python", platform.python_version(), "with numpy", numpy.__version__, "and scipy", scipy.__version__)
"""


@nox.session(python=FOUND[OLDEST])
def tests(session: nox.Session) -> None:
    """Run the tests at the lower end: the oldest Python with the oldest numpy."""
    session.chdir(ROOT)  # a session starts in the folder of this file
    install(session, "test", NUMPY_BY_PYTHON[OLDEST][0])
    run_tests(session)


@nox.session(python=FOUND[NEWEST])
def coverage(session: nox.Session) -> None:
    """Run the tests at the upper end and demand that every statement and branch is run."""
    session.chdir(ROOT)  # a session starts in the folder of this file
    install(session, "test")
    session.run("coverage", "erase")
    run_tests(session, "-m", "coverage", "run")
    session.run("coverage", "report")


@nox.session
def types(session: nox.Session) -> None:
    """Check the types with two strict checkers, and that both reject every marked misuse."""
    session.chdir(ROOT)  # a session starts in the folder of this file
    install(session, "test", *tools("nox", "numba", "pyright", "pytest-benchmark", "scipy-stubs", "types-jsonschema"))
    session.run("mypy")
    session.run("pyright")
    session.run("python", "-m", "tests.typing.pyright_rejects")


@nox.session
def lint(session: nox.Session) -> None:
    """Check style and layout of the code."""
    session.chdir(ROOT)  # a session starts in the folder of this file
    session.install(*tools("ruff"))
    session.run("ruff", "check", ".")
    session.run("ruff", "format", "--check", ".")


@nox.session
def docs(session: nox.Session) -> None:
    """Build the manual: every warning and every reference without a target is an error."""
    session.chdir(ROOT)  # a session starts in the folder of this file
    install(session, "docs")
    target = session.create_tmp()
    session.run(
        "sphinx-build", "-n", "-W", "--keep-going", "-q", "-E", "-b", "html", "docs", f"{target}/html", *session.posargs
    )
    session.run("python", "-c", OFFLINE_CHECK, f"{target}/html")


# A link that a reader may follow is no fetch; what a page loads by itself stands in src, link elements and styles.
OFFLINE_CHECK = r"""
import pathlib, re, sys
loads = re.compile(r'(?:src=|<link[^>]+href=|url\(|@import\s+)["\']?(?:https?:)?//[^"\')\s]+')
folder = pathlib.Path(sys.argv[1])
pages = [path for path in folder.rglob("*") if path.suffix in {".html", ".css"}]
hits = [(path.relative_to(folder), hit) for path in pages for hit in loads.findall(path.read_text(encoding="utf-8"))]
bad = [f"{path}: {hit}" for path, hit in hits]
print(*bad, f"{len(pages)} pages and styles, {len(bad)} that load from other hosts", sep="\n")
sys.exit(bool(bad or not pages))
"""


@nox.session
def package(session: nox.Session) -> None:
    """Build the archives, look into them, and use the wheel from an empty environment outside this folder."""
    session.chdir(ROOT)  # a session starts in the folder of this file
    session.install(*tools("build", "check-wheel-contents", "twine"))
    target = Path(session.create_tmp()) / "dist"
    shutil.rmtree(target, ignore_errors=True)
    session.run("python", "-m", "build", "--outdir", str(target))
    archives = sorted(map(str, target.iterdir()))
    (wheel,) = (archive for archive in archives if archive.endswith(".whl"))
    session.run("twine", "check", "--strict", *archives)
    session.run("check-wheel-contents", wheel)
    empty = target.parent / "empty"
    shutil.rmtree(empty, ignore_errors=True)
    session.run("python", "-m", "venv", str(empty))
    python = str(empty / ("Scripts" if os.name == "nt" else "bin") / "python")
    session.run(python, "-m", "pip", "install", "-q", wheel, external=True)
    session.chdir(target)
    session.run(python, "-W", "error", "-c", WHEEL_CHECK, external=True)


WHEEL_CHECK = """
import importlib.metadata, pathlib, sys
import fourthrank
files = [str(path) for path in importlib.metadata.files("fourthrank")]
assert "site-packages" in fourthrank.__file__, fourthrank.__file__
assert importlib.metadata.version("fourthrank") == fourthrank.__version__
assert "fourthrank/py.typed" in files
strangers = [name for name in files if not name.startswith(("fourthrank/", "fourthrank-"))]
assert not strangers, strangers
print("fourthrank", fourthrank.__version__, "imported from its wheel,", len(files), "files")
"""


@nox.session
@nox.parametrize(
    "python,numpy",
    [
        nox.param(FOUND[version], numpy, id=f"{version}-{numpy or 'newest'}")
        for version in FOUND
        for numpy in NUMPY_BY_PYTHON[version]
    ],
)
def matrix(session: nox.Session, numpy: str | None) -> None:
    """Run the tests on every supported pair of Python and numpy (not in the default set)."""
    session.chdir(ROOT)  # a session starts in the folder of this file
    install(session, "test", numpy)
    run_tests(session)


@nox.session
def benchmarks(session: nox.Session) -> None:
    """Measure against hand-written code (not in the default set)."""
    session.chdir(ROOT)  # a session starts in the folder of this file
    install(session, "test", *tools("numba", "pytest-benchmark"))
    arguments = session.posargs or ["--benchmark-group-by=group", "--benchmark-columns=median,ops,rounds"]
    session.run("python", "-m", "pytest", "tests/benchmarks", *arguments, env=ONE_THREAD)


@nox.session
def mutation(session: nox.Session) -> None:
    """Change a module in small ways and list the changes that no test notices (not in the default set).

    Arguments after `--` go to `tests/mutation.py`, for example ``--sample 50 ordering.py``.
    """
    session.chdir(ROOT)  # a session starts in the folder of this file
    # The files are changed in place, so it is a copy that is changed.
    copy = Path(session.create_tmp()) / "copy"
    shutil.rmtree(copy, ignore_errors=True)
    shutil.copytree(ROOT, copy, ignore=shutil.ignore_patterns(".*", "__pycache__", "_build"))
    session.install(*tools("cosmic-ray"), "-e", f"{copy}[test]")
    session.chdir(copy)
    session.run("python", "-m", "tests.mutation", *session.posargs, env=ONE_THREAD)
