"""Build wheel and source archive, and try both from empty environments in another folder.

python3 buildspec/dev.py wheel    writes dist/"""

from __future__ import annotations

import shutil
import subprocess
import sys
import tempfile
from pathlib import Path

from dev import ROOT, Stop, lock_file, make_environment, python_in, run

SOURCES = ("pyproject.toml", "README.md", "DEVELOPERS.md", "core", "mobileapp")
PIP = ("-m", "pip", "--disable-pip-version-check")
BACKEND = "import sys, setuptools.build_meta as b; print(b.build_sdist(sys.argv[1]))"


def clean_copy(place: Path) -> None:
    """The sources without anything that was built or left in their folders."""
    place.mkdir(parents=True)
    for name in SOURCES:
        if (ROOT / name).is_dir():
            shutil.copytree(ROOT / name, place / name, ignore=shutil.ignore_patterns("__pycache__", "*.pyc"))
        else:
            shutil.copy(ROOT / name, place)


def build(out: Path, scratch: Path) -> tuple[Path, Path]:
    """The source archive, made of a clean copy, and the wheel, made of the unpacked source archive."""
    out.mkdir(parents=True, exist_ok=True)
    clean_copy(scratch / "copy")
    if run([sys.executable, "-c", BACKEND, out], quiet=True, at=scratch / "copy"):
        raise Stop("The source archive could not be built: see above.")
    archive = next(out.glob("*.tar.gz"))
    words = [sys.executable, *PIP, "wheel", "-q", "--no-deps", "--no-build-isolation", "-w", out, archive]
    if run(words, quiet=True):
        raise Stop("The wheel could not be built of the source archive: see above.")
    return archive, next(out.glob("*.whl"))


def try_out(built: Path, scratch: Path) -> None:
    """Install into an empty environment, and run both commands from another folder."""
    place = scratch / f"env-{built.suffix.strip('.')}"
    make_environment(place)
    own: list[str | Path] = [python_in(place), *PIP, "install", "-q"]
    if run([*own, "-r", lock_file("run")], quiet=True):
        raise Stop("The locked packages could not be installed in an empty environment: see above.")
    if run([*own, "--no-deps", "--no-build-isolation", built], quiet=True):
        raise Stop(f"{built.name} could not be installed in an empty environment: see above.")
    for name, *words in (
        ("cooltally-core", "air", "--temperature-C", "23", "--pressure-Pa", "101325"),
        ("cooltally", "--help"),
    ):
        command = [str(python_in(place).parent / name), *words]
        done = subprocess.run(command, cwd=scratch, check=False, text=True, capture_output=True)
        if done.returncode:
            raise Stop(f"{name} from {built.name} failed: {done.stderr.strip()}")
        print(f"{built.name}: {name} {' '.join(words)}\n{done.stdout.strip()}", flush=True)


def main() -> int:
    """Build both, try both."""
    out = ROOT / "dist"
    shutil.rmtree(out, ignore_errors=True)
    try:
        with tempfile.TemporaryDirectory() as scratch:
            for built in build(out, Path(scratch)):
                try_out(built, Path(scratch))
    except Stop as stop:
        print(stop, file=sys.stderr)
        return 1
    print("Both commands run from both archives, from empty environments in another folder.")
    return 0


if __name__ == "__main__":
    sys.exit(main())
