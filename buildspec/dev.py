"""Everything that a fresh machine needs, in one command each; Python's standard library only.

python3 buildspec/dev.py app      make the environment, open the app with the demo session
python3 buildspec/dev.py tests    the same with the test extras, then lint, types and the whole test suite
python3 buildspec/dev.py lock     resolve the dependencies anew and write buildspec/locks
python3 buildspec/dev.py wheel    build wheel and sdist, try both in an empty environment
"""

from __future__ import annotations

import argparse
import hashlib
import os
import platform
import shutil
import subprocess
import sys
import tempfile
import venv
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
MESA_DRIVERS = ("/usr/lib/*/dri/swrast_dri.so", "/usr/lib/*/dri/libdril_dri.so", "/usr/lib64/dri/swrast_dri.so")


class Stop(Exception):
    """One sentence that ends the command."""


def python_in(environment: Path) -> Path:
    """The interpreter of a virtual environment."""
    return environment / ("Scripts/python.exe" if os.name == "nt" else "bin/python")


def run(command: list[str | Path], *, quiet: bool = False, **options: object) -> int:
    """Run a command in the project's root; quiet ones show their output only when they fail."""
    words = [str(word) for word in command]
    if not quiet:
        return subprocess.run(words, cwd=ROOT, check=False, **options).returncode
    done = subprocess.run(
        words, cwd=ROOT, check=False, text=True, stdout=subprocess.PIPE, stderr=subprocess.STDOUT, **options
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
    if not interpreter.exists():
        venv.create(ENVIRONMENT, with_pip=True)
    pip: list[str | Path] = [interpreter, "-m", "pip", "--disable-pip-version-check", "install", "-q"]
    if run([*pip, "-r", lock_file(lock_name)], quiet=True):
        raise Stop(
            "The locked packages could not be installed: see pip's words above; is the package index reachable?"
        )
    if run([*pip, "--no-deps", "--no-build-isolation", "-e", ROOT], quiet=True):
        raise Stop("The project itself could not be installed into its environment: see pip's words above.")
    marks[lock_name].write_text(wanted[lock_name])
    return interpreter


def _fingerprint(lock: Path) -> str:
    return hashlib.sha256(lock.read_bytes() + (ROOT / "pyproject.toml").read_bytes()).hexdigest()


def missing_packages() -> list[str]:
    """Debian packages without which no window can be opened on a virtual screen."""
    absent = [package for program, package in SCREEN_PROGRAMS.items() if not shutil.which(program)]
    absent += [package for library, package in SCREEN_LIBRARIES.items() if not find_library(library)]
    if not any(list(Path("/").glob(pattern[1:])) for pattern in MESA_DRIVERS):
        absent.append("libgl1-mesa-dri")
    return absent


def prepare_screen() -> None:
    """Install what the virtual screen needs, where that is allowed; else name it and stop."""
    absent = missing_packages()
    if not absent:
        return
    names = " ".join(absent)
    if not (shutil.which("apt-get") and hasattr(os, "geteuid") and os.geteuid() == 0):
        raise Stop(f"The tests open a real window and need these system packages first: {names}.")
    print(f"Installing system packages: {names} …", flush=True)
    quiet = {**os.environ, "DEBIAN_FRONTEND": "noninteractive"}
    for command in (
        ["apt-get", "update", "-qq"],
        ["apt-get", "install", "-y", "-qq", "--no-install-recommends", *absent],
    ):
        if run(list(command), quiet=True, env=quiet):
            raise Stop(f"The system packages could not be installed: {names}; see apt's words above.")


def has_screen() -> bool:
    """Whether a window can be opened here."""
    if sys.platform in ("win32", "darwin"):
        return True
    return bool(os.environ.get("DISPLAY") or os.environ.get("WAYLAND_DISPLAY"))


def app(words: list[str]) -> int:
    """Open the app with the demo session, or run the demo's fit where there is no screen."""
    interpreter = environment("run")
    if has_screen():
        return run([interpreter, "-m", "mobileapp", "--demo", *words])
    print("There is no screen here; this is the fit of the demo session instead:", flush=True)
    return run([interpreter, "-m", "core", "fit", "core/demo/session"])


def tests(words: list[str]) -> int:
    """Lint, types and the whole test suite; words after `tests` go to pytest."""
    interpreter = environment("test")
    prepare_screen()
    for name, command in (
        ("ruff", ["-m", "ruff", "check", "-q", "."]),
        ("mypy", ["-m", "mypy", "--strict", "core"]),
    ):
        if run([interpreter, *command]):
            raise Stop(f"{name} found something; see above.")
        print(f"{name}: good", flush=True)
    os.environ["OPENBLAS_NUM_THREADS"] = "1"  # the matrices are tiny, and two workers share the cores
    return run([interpreter, "-m", "pytest", "-q", "-n", "2", "--dist", "loadgroup", *words])


def lock(_words: list[str]) -> int:
    """Resolve the dependencies anew in fresh environments and write the lock files."""
    LOCKS.mkdir(exist_ok=True)
    for name, extras in (("run", ""), ("test", "[test,report]")):
        with tempfile.TemporaryDirectory() as scratch:
            place = Path(scratch) / "env"
            venv.create(place, with_pip=True)
            pip: list[str | Path] = [python_in(place), "-m", "pip", "--disable-pip-version-check"]
            if run([*pip, "install", "-q", "setuptools>=77", "wheel", f"{ROOT}{extras}"], quiet=True):
                raise Stop("The dependencies could not be resolved: see pip's words above.")
            frozen = subprocess.run(
                [str(w) for w in [*pip, "freeze", "--all", "--exclude", "pip", "--exclude", "cooltally"]],
                check=True,
                text=True,
                capture_output=True,
            ).stdout
        (LOCKS / f"{name}.txt").write_text(frozen)
        print(f"{name}: {len(frozen.splitlines())} packages")
    return 0


def wheel(_words: list[str]) -> int:
    """Build wheel and sdist into dist/, and try the wheel in an empty environment from another folder."""
    interpreter = environment("test")
    out = ROOT / "dist"
    shutil.rmtree(out, ignore_errors=True)
    pip: list[str | Path] = [interpreter, "-m", "pip", "--disable-pip-version-check"]
    if run([*pip, "wheel", "-q", "--no-deps", "--no-build-isolation", "-w", out, ROOT], quiet=True):
        raise Stop("The wheel could not be built: see above.")
    backend = "import setuptools.build_meta as b; print(b.build_sdist('dist'))"
    if run([interpreter, "-c", backend], quiet=True):
        raise Stop("The source archive could not be built: see above.")
    built = next(out.glob("*.whl"))
    with tempfile.TemporaryDirectory() as scratch:
        place = Path(scratch) / "env"
        venv.create(place, with_pip=True)
        own: list[str | Path] = [python_in(place), "-m", "pip", "--disable-pip-version-check", "install", "-q"]
        if run([*own, "-r", lock_file("run")], quiet=True) or run([*own, "--no-deps", built], quiet=True):
            raise Stop("The wheel could not be installed in an empty environment: see above.")
        scripts = python_in(place).parent
        for command in (
            [scripts / "cooltally-core", "air", "--temperature-C", "23", "--pressure-Pa", "101325"],
            [scripts / "cooltally", "--help"],
        ):
            done = subprocess.run(
                [str(w) for w in command], cwd=scratch, check=False, text=True, capture_output=True
            )
            if done.returncode:
                raise Stop(f"{Path(command[0]).name} from the wheel failed: {done.stderr.strip()}")
            print(done.stdout.strip())
    print(f"{built.name}: both commands run from an empty environment in another folder.")
    return 0


COMMANDS = {"app": app, "tests": tests, "lock": lock, "wheel": wheel}


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
