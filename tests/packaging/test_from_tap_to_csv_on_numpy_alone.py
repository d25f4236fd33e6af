"""What a tablet without SciPy must do, done where nothing but NumPy can be imported, in the mode of its compiler."""

import json
import os
import shutil
import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]
SCRIPT = Path(__file__).with_name("on_numpy_alone.py")


def way(tree: Path, out: Path, *options: str) -> subprocess.CompletedProcess:
    """From tap to CSV with the core of this tree and no other."""
    alone = {name: value for name, value in os.environ.items() if not name.startswith("PYTHON")}
    words = [sys.executable, *options, str(SCRIPT), str(out)]
    path = {**alone, "PYTHONPATH": str(tree), "PYTHONDONTWRITEBYTECODE": "1"}
    return subprocess.run(words, cwd=out.parent, env=path, check=False, capture_output=True, text=True)


def test_the_way_needs_numpy_alone_and_gives_the_same_without_asserts(tmp_path):
    """With and without -OO: same h to the last bit, same printed answers."""
    told = []
    for mode, options in (("plain", ()), ("optimised", ("-OO",))):
        (tmp_path / mode).mkdir()
        done = way(ROOT, tmp_path / mode / "out", *options)
        assert done.returncode == 0, done.stderr
        told.append(done.stdout.replace(str(tmp_path / mode), ""))
        assert {path.name for path in (tmp_path / mode / "out").iterdir()} >= {"runs.csv", "readings.csv"}
    assert told[0] == told[1]
    last = json.loads(told[0].splitlines()[-1])
    assert last["statuses"] == [0, 0]
    assert last["readings"] > 40


@pytest.mark.parametrize(
    ("file", "line"),
    [
        ("cooling/fit.py", "import scipy.optimize"),
        ("judgement/budget.py", "try:\n    import scipy.special\nexcept ImportError:\n    pass"),
        ("handover/export.py", "import pandas"),
    ],
)
def test_a_planted_import_on_the_way_is_caught(tmp_path, file, line):
    """Even where somebody copes with the absence: on the tablet the way must not depend on what is installed."""
    shutil.copytree(ROOT / "core", tmp_path / "core", ignore=shutil.ignore_patterns("__pycache__"))
    target = tmp_path / "core" / file
    target.write_text(f"{target.read_text('utf-8')}\n{line}\n", encoding="utf-8")
    done = way(tmp_path, tmp_path / "out")
    assert done.returncode != 0
    assert line.split("import ")[1].split()[0].split(".")[0] in done.stderr
