"""The imports follow the picture in DEVELOPERS.md, NumPy alone computes, and heavy packages are loaded late."""

import ast
import shutil
import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]
PACKAGES = ("core", "mobileapp")


def linted(tree: Path) -> subprocess.CompletedProcess:
    words = [sys.executable, "-c", "from importlinter.cli import lint_imports_command as lint; lint()"]
    return subprocess.run(
        [*words, "pyproject.toml", "--no-cache"], cwd=tree, check=False, capture_output=True, text=True
    )


@pytest.fixture(scope="module")
def copy(tmp_path_factory):
    """The two packages and their contracts in a folder where a violation can be planted."""
    tree = tmp_path_factory.mktemp("house")
    shutil.copy(ROOT / "pyproject.toml", tree)
    for package in PACKAGES:
        shutil.copytree(ROOT / package, tree / package, ignore=shutil.ignore_patterns("__pycache__"))
    return tree


def test_the_imports_keep_the_contracts():
    done = linted(ROOT)
    assert done.returncode == 0, done.stdout
    assert "Contracts: 4 kept, 0 broken" in done.stdout


@pytest.mark.parametrize(
    ("file", "line"),
    [
        ("core/bench/air.py", "from core.cooling import fit"),
        ("core/recording/tally.py", "from core.cooling import fit"),
        ("core/convection/numbers.py", "from core.cooling import fit"),
        ("core/judgement/verdict.py", "from core.handover import session"),
        ("core/handover/page.py", "import mobileapp.words"),
        ("core/recording/journal.py", "import kivy.clock"),
        ("mobileapp/figures.py", "import numpy"),
        ("core/cooling/fit.py", "import scipy.optimize"),
        ("mobileapp/worker.py", "from scipy import special"),
    ],
)
def test_a_planted_import_against_the_arrows_fails(copy, file, line):
    target = copy / file
    sound = target.read_text("utf-8")
    target.write_text(f"{sound}\n\ndef _planted():\n    {line}\n", encoding="utf-8")
    try:
        done = linted(copy)
    finally:
        target.write_text(sound, encoding="utf-8")
    assert done.returncode == 1
    assert "1 broken" in done.stdout


def loaded_at_import(source: str) -> set[str]:
    """Top-level names of the packages that a module loads as soon as it is imported itself."""
    waiting = list(ast.parse(source).body)
    found = set()
    while waiting:
        node = waiting.pop()
        if isinstance(node, ast.FunctionDef | ast.AsyncFunctionDef | ast.Lambda):
            continue
        if isinstance(node, ast.If) and "TYPE_CHECKING" in ast.dump(node.test):
            continue
        if isinstance(node, ast.Import):
            found |= {alias.name.split(".")[0] for alias in node.names}
        elif isinstance(node, ast.ImportFrom) and node.module and not node.level:
            found.add(node.module.split(".")[0])
        waiting += list(ast.iter_child_nodes(node))
    return found


@pytest.mark.parametrize("late", ["matplotlib", "plyer", "jnius"])
def test_heavy_and_foreign_packages_are_loaded_where_they_are_needed(late):
    paths = [path for package in PACKAGES for path in (ROOT / package).rglob("*.py")]
    assert [str(path) for path in paths if late in loaded_at_import(path.read_text("utf-8"))] == []


def test_an_import_at_the_top_is_seen_and_a_late_one_is_not():
    assert loaded_at_import("import scipy.optimize") == {"scipy"}
    assert loaded_at_import("class A:\n    from scipy import stats") == {"scipy"}
    assert loaded_at_import("try:\n    import scipy\nexcept ImportError:\n    pass") == {"scipy"}
    assert loaded_at_import("def late():\n    import scipy") == set()
