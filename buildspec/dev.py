"""Everything that a fresh machine needs, in one command each; Python's standard library only.

python3 buildspec/dev.py app      make the environment, open the app with the demo session
python3 buildspec/dev.py tests    the same with the test extras, then lint, types and the whole test suite
python3 buildspec/dev.py optimised  the core's tests without asserts and docstrings, as the tablet runs the core
python3 buildspec/dev.py lock     resolve the dependencies anew and write buildspec/locks
python3 buildspec/dev.py wheel    build wheel and sdist, try both in empty environments
python3 buildspec/dev.py stage    the files that the Android package would hold, by the packing tool's own code
python3 buildspec/dev.py arm      the core's tests on aarch64 wheels under emulation (Debian, as root)
python3 buildspec/dev.py matrix   core tests and a reference fit with the oldest and newest NumPy and SciPy
python3 buildspec/dev.py bench    cost of a start beside a bare window
"""

from __future__ import annotations

import argparse
import hashlib
import json
import os
import platform
import shutil
import subprocess
import sys
import tempfile
import tomllib
import venv
from collections.abc import Callable, Sequence
from ctypes.util import find_library
from pathlib import Path

ROOT = Path(__file__).resolve().parent.parent
ENVIRONMENT = ROOT / ".venv"
LOCKS = ROOT / "buildspec" / "locks"
PYTHONS = ((3, 11), (3, 14))
SCREEN_PROGRAMS = {"Xvfb": "xvfb"}
SCREEN_LIBRARIES = {
    "GL": "libgl1",
    "EGL": "libegl1",
    "Xtst": "libxtst6",
    "X11": "libx11-6",
    "mtdev": "libmtdev1",
}
CORE_FOLDERS = ("bench_setup", "convection", "cooling", "judgement", "recording", "handover", "commands", "demo")
HELPER_PROGRAMS = {"aapt": "aapt", "javac": "default-jdk-headless", "gcc": "gcc"}
FRAMEWORK = Path("/usr/share/android-framework-res/framework-res.apk")
MESA_DRIVERS = ("/usr/lib/*/dri/swrast_dri.so", "/usr/lib/*/dri/libdril_dri.so", "/usr/lib64/dri/swrast_dri.so")


class Stop(Exception):
    """One sentence that ends the command."""


def python_in(environment: Path) -> Path:
    """The interpreter of a virtual environment."""
    return environment / ("Scripts/python.exe" if os.name == "nt" else "bin/python")


def run(command: Sequence[str | Path], *, quiet: bool = False, at: Path = ROOT, **options: object) -> int:
    """Run a command, in the project's root if not told otherwise; quiet ones show their output only when they fail."""
    words = [str(word) for word in command]
    if not quiet:
        return subprocess.run(words, cwd=at, check=False, **options).returncode
    done = subprocess.run(
        words, cwd=at, check=False, text=True, stdout=subprocess.PIPE, stderr=subprocess.STDOUT, **options
    )
    if done.returncode:
        print(done.stdout, file=sys.stderr)
    return done.returncode


def check_python() -> None:
    """Refuse a Python for which no wheels exist."""
    low, above = PYTHONS
    if not low <= sys.version_info[:2] < above:
        raise Stop(
            f"This is Python {platform.python_version()}; Cooltally needs {low[0]}.{low[1]} to "
            f"{above[0]}.{above[1] - 1}: call dev.py with one of those."
        )


def lock_file(name: str) -> Path:
    """The lock for this Python, or the general one."""
    own = LOCKS / f"{name}-py{sys.version_info[0]}{sys.version_info[1]}.txt"
    return own if own.exists() else LOCKS / f"{name}.txt"


def environment(lock_name: str) -> Path:
    """The project's environment with everything of a lock in it; seconds when it is already so.

    The test lock holds the run-time lock too, so an environment made for tests serves the app as well."""
    check_python()
    interpreter = python_in(ENVIRONMENT)
    marks = {name: ENVIRONMENT / f"installed-{name}.sha256" for name in ("run", "test")}
    wanted = {name: _fingerprint(lock_file(name)) for name in marks}
    fits = [name for name in marks if marks[name].exists() and marks[name].read_text() == wanted[name]]
    if interpreter.exists() and (lock_name in fits or "test" in fits):
        return interpreter
    print(f"Making the environment in {ENVIRONMENT.name} (once; a minute or two) …", flush=True)
    if not (interpreter.exists() and any(mark.exists() for mark in marks.values())):
        make_environment(ENVIRONMENT)
    pip: list[str | Path] = [interpreter, "-m", "pip", "--disable-pip-version-check", "install", "-q"]
    if run([*pip, "-r", lock_file(lock_name)], quiet=True):
        raise Stop(
            "The locked packages could not be installed: see pip's words above; is the package index reachable?"
        )
    if run([*pip, "--no-deps", "--no-build-isolation", "-e", ROOT], quiet=True):
        raise Stop("The project itself could not be installed into its environment: see pip's words above.")
    marks[lock_name].write_text(wanted[lock_name])
    return interpreter


def make_environment(place: Path) -> None:
    """A virtual environment with pip in it; one that a broken-off run left half made is completed."""
    try:
        venv.create(place, with_pip=True, clear=place.exists() and not python_in(place).exists())
    except (OSError, subprocess.CalledProcessError) as fault:
        raise Stop(
            f"The virtual environment {place} could not be made ({fault}): on Debian install python3-venv; "
            "see that the disk can be written and has 2 GB left."
        ) from fault


def _fingerprint(lock: Path) -> str:
    return hashlib.sha256(lock.read_bytes() + (ROOT / "pyproject.toml").read_bytes()).hexdigest()


def missing_packages() -> list[str]:
    """Debian packages without which no window can be opened on a virtual screen."""
    absent = [package for program, package in SCREEN_PROGRAMS.items() if not shutil.which(program)]
    absent += [package for library, package in SCREEN_LIBRARIES.items() if not find_library(library)]
    if not any(list(Path("/").glob(pattern[1:])) for pattern in MESA_DRIVERS):
        absent.append("libgl1-mesa-dri")
    return absent


def missing_helpers() -> list[str]:
    """Debian packages without which some tests are skipped: a Java compiler, a C compiler, the manifest linker."""
    absent = [package for program, package in HELPER_PROGRAMS.items() if not shutil.which(program)]
    return absent if FRAMEWORK.exists() else [*absent, "android-framework-res"]


def prepare_system() -> None:
    """Install what the tests need of the system, where that is allowed; else name it, and stop without a screen."""
    needed, helpful = missing_packages(), missing_helpers()
    absent = [*needed, *helpful]
    if not absent:
        return
    names = " ".join(absent)
    if not (shutil.which("apt-get") and hasattr(os, "geteuid") and os.geteuid() == 0):
        if needed:
            raise Stop(
                f"The tests open a real window and need these system packages first: {' '.join(needed)}. "
                f"On Debian: sudo apt-get install {names}"
            )
        print(f"Some tests of the packaging are skipped for want of these system packages: {names}", flush=True)
        return
    print(f"Installing system packages: {names} …", flush=True)
    quiet = {**os.environ, "DEBIAN_FRONTEND": "noninteractive"}
    for command in (
        ["apt-get", "update", "-qq"],
        ["apt-get", "install", "-y", "-qq", "--no-install-recommends", *absent],
    ):
        if run(command, quiet=True, env=quiet) and missing_packages():
            raise Stop(f"The system packages could not be installed: {names}; see apt's words above.")


def on_linux() -> bool:
    return sys.platform.startswith("linux")


def has_screen() -> bool:
    """Whether a window can be opened here."""
    if sys.platform in ("win32", "darwin"):
        return True
    return bool(os.environ.get("DISPLAY") or os.environ.get("WAYLAND_DISPLAY"))


def app(words: list[str]) -> int:
    """Open the app with the demo session, or run the demo's fit where there is no screen."""
    interpreter = environment("run")
    if has_screen():
        absent = [SCREEN_LIBRARIES[name] for name in ("GL", "EGL") if on_linux() and not find_library(name)]
        if absent:
            raise Stop(f"A window needs these system packages first: {' '.join(absent)}.")
        return run([interpreter, "-m", "mobileapp", "--demo", *words])
    print("There is no screen here; this is the fit of the demo session instead:", flush=True)
    return run([interpreter, "-m", "core", "fit", "core/demo/session"])


def tests(words: list[str]) -> int:
    """Lint, types and the whole test suite; words after `tests` go to pytest."""
    interpreter = environment("test")
    prepare_system()
    for name, command in (
        ("ruff", ["-m", "ruff", "check", "-q", "."]),
        ("mypy", ["-m", "mypy", "--strict", "core"]),
    ):
        if run([interpreter, *command]):
            raise Stop(f"{name} found something; see above.")
        print(f"{name}: good", flush=True)
    os.environ["OPENBLAS_NUM_THREADS"] = "1"  # the matrices are tiny, and two workers share the cores
    return run([interpreter, "-m", "pytest", "-q", "-n", "2", "--dist", "loadgroup", *words])


def optimised(words: list[str]) -> int:
    """The core's tests as the tablet runs the core: without its asserts and docstrings.

    pytest turns the asserts of the tests themselves into plain raises, so these go on holding."""
    interpreter = environment("test")
    as_on_the_tablet = {**os.environ, "PYTHONOPTIMIZE": "2", "OPENBLAS_NUM_THREADS": "1"}
    named = words or [f"tests/{name}" for name in CORE_FOLDERS]
    return run([interpreter, "-m", "pytest", "-q", "-n", "2", *named], env=as_on_the_tablet)


def lock(_words: list[str]) -> int:
    """Resolve the dependencies anew, as for an empty environment and without installing any, and write the locks."""
    LOCKS.mkdir(exist_ok=True)
    extras = tomllib.loads((ROOT / "pyproject.toml").read_text("utf-8"))["project"]["optional-dependencies"]
    building = ["setuptools>=77"]
    with tempfile.TemporaryDirectory() as scratch:
        place = Path(scratch) / "env"
        make_environment(place)
        pip: list[str | Path] = [python_in(place), "-m", "pip", "--disable-pip-version-check"]
        report = Path(scratch) / "report.json"
        for name, wanted in (
            ("run", [*building, str(ROOT)]),
            ("test", [*building, f"{ROOT}[test,report,android]"]),
            ("android", extras["android"]),
        ):
            words = ["install", "-q", "--dry-run", "--ignore-installed", "--report", report, *wanted]
            if run([*pip, *words], quiet=True):
                raise Stop("The dependencies could not be resolved: see pip's words above.")
            found = [one["metadata"] for one in json.loads(report.read_text("utf-8"))["install"]]
            lines = {one["name"].lower(): f"{one['name']}=={one['version']}\n" for one in found}
            lines.pop("cooltally", None)
            (LOCKS / f"{name}.txt").write_text("".join(lines[key] for key in sorted(lines)), encoding="utf-8")
            print(f"{name}: {len(lines)} packages", flush=True)
    return 0


def beside(script: str, lock_name: str = "test") -> Callable[[list[str]], int]:
    """A command that stands in a script of its own and runs in the project's environment."""
    return lambda words: run([environment(lock_name), ROOT / "buildspec" / script, *words])


COMMANDS: dict[str, Callable[[list[str]], int]] = {
    "app": app,
    "tests": tests,
    "optimised": optimised,
    "lock": lock,
    "wheel": beside("release.py"),
    "stage": beside("android_staging.py"),
    "arm": beside("arm.py"),
    "matrix": beside("matrix.py"),
    "bench": beside("start_cost.py"),
}


def main() -> int:
    """Run one command; a refusal is one sentence and exit status 1."""
    parser = argparse.ArgumentParser(
        prog="dev.py", description=__doc__, formatter_class=argparse.RawTextHelpFormatter
    )
    parser.add_argument("command", choices=sorted(COMMANDS))
    chosen, words = parser.parse_known_args()
    try:
        return COMMANDS[chosen.command](words)
    except Stop as stop:
        print(stop, file=sys.stderr)
        return 1


if __name__ == "__main__":
    sys.exit(main())
