"""The core with the oldest and the newest NumPy, SciPy and Python in question: its tests, and the same figures.

python3 buildspec/dev.py matrix [WORDS FOR PYTEST]

Oldest is what the Android recipes build, newest what the lock holds. Pythons are looked for on the path; those that
cannot be had are named. h, u(h) and τ of the demo's runs must agree to 1e-8."""

from __future__ import annotations

import json
import os
import shutil
import subprocess
import sys
import tempfile
from pathlib import Path

from arm import REFERENCE, TESTS
from dev import ROOT, lock_file

OLDEST = {"numpy": "2.3.0", "scipy": "1.16.2"}
PYTHONS = ("3.11", "3.12", "3.13", "3.14")
CLOSE = 1e-8
FOR_TESTS = ("pytest", "hypothesis")


def locked(name: str) -> str:
    for line in lock_file("test").read_text("utf-8").split():
        if line.lower().startswith(f"{name}=="):
            return line
    raise SystemExit(f"{name} is not in the lock.")


def fits_in(interpreter: Path) -> list[list[float]]:
    surroundings = {**os.environ, "PYTHONPATH": str(ROOT)}
    told = subprocess.run(
        [str(interpreter), "-c", REFERENCE], cwd=ROOT, env=surroundings, check=True, text=True, capture_output=True
    )
    return json.loads(told.stdout)["fits"]


def working(python: str) -> str | None:
    """The interpreter of this version, where there is one that answers."""
    found = shutil.which(f"python{python}")
    answers = found and not subprocess.run([found, "-c", "import venv"], check=False, capture_output=True).returncode
    return found if answers else None


def environment(python: str, packages: list[str], place: Path) -> Path | None:
    """A scratch environment with these packages, or None where they cannot be had."""
    subprocess.run([python, "-m", "venv", str(place)], check=True)
    interpreter = place / "bin" / "python"
    words = [interpreter, "-m", "pip", "--disable-pip-version-check", "install", "-q", "--only-binary=:all:", *packages]
    done = subprocess.run([str(word) for word in words], check=False, capture_output=True, text=True)
    return interpreter if done.returncode == 0 else None


def main() -> int:
    """One line a combination; status 1 where tests fail or figures differ."""
    reference: list[list[float]] | None = None
    faults = 0
    for python in PYTHONS:
        found = working(python)
        if found is None:
            print(f"Python {python}: cannot be had here", flush=True)
            continue
        for name, numeric in (
            ("oldest", [f"{package}=={version}" for package, version in OLDEST.items()]),
            ("newest", [locked(package) for package in OLDEST]),
        ):
            with tempfile.TemporaryDirectory() as scratch:
                tests = [locked(package) for package in FOR_TESTS]
                interpreter = environment(found, [*numeric, *tests], Path(scratch) / "env")
                if interpreter is None:
                    print(f"Python {python}, {name} {numeric}: cannot be had here", flush=True)
                    continue
                fits = fits_in(interpreter)
                reference = reference or fits
                pairs = [pair for one, two in zip(reference, fits, strict=True) for pair in zip(one, two, strict=True)]
                apart = max(abs(a - b) / abs(a) for a, b in pairs)
                words = [str(interpreter), "-m", "pytest", "-q", *(sys.argv[1:] or TESTS)]
                done = subprocess.run(words, cwd=ROOT, check=False, capture_output=True, text=True)
                closing = (done.stdout.strip().splitlines() or [done.stderr.strip()])[-1]
                faults += bool(done.returncode) + (apart > CLOSE)
                print(f"Python {python}, {name} {' '.join(numeric)}: {closing}; figures apart {apart:.1e}", flush=True)
    return 1 if faults else 0


if __name__ == "__main__":
    sys.exit(main())
