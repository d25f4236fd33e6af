"""The core's tests on real aarch64 wheels of NumPy and SciPy, under user-mode emulation.

python3 buildspec/dev.py arm [WORDS FOR PYTEST]     Debian, as root; about 300 MB below build/arm

It proves the arithmetic on that processor (its vector units, its order of operations), with Debian's own Python for it;
it proves nothing about Android's C library nor about the package."""

from __future__ import annotations

import json
import os
import shutil
import subprocess
import sys
import zipfile

from dev import ROOT, Stop, lock_file, run

ARM = ROOT / "build" / "arm"
TREE, SITE = ARM / "tree", ARM / "site"
EMULATOR = "qemu-aarch64-static"
SYSTEM = ("python3.11", "libpython3.11-stdlib", "libc6", "libgcc-s1", "libstdc++6", "zlib1g")
BINARY = ("numpy", "scipy")
PURE = ("pytest", "pluggy", "iniconfig", "packaging", "pygments", "hypothesis", "sortedcontainers", "attrs")
PLATFORMS = ("manylinux_2_28_aarch64", "manylinux_2_27_aarch64", "manylinux2014_aarch64", "any")
TESTS = ("tests/cooling", "tests/convection", "tests/bench_setup")
REFERENCE = """
import json, time
from pathlib import Path
began = time.perf_counter()
from core.demo import __file__ as demo
from core.handover.export import read_session
from core.judgement.judge import judge
loaded = time.perf_counter()
runs = [run for run in read_session(Path(demo).parent / "session").runs if run.kind != "still-air"]
fits, times = [], []
for run in runs[:4]:
    start = time.perf_counter()
    answer = judge(run.readings, run.setup)
    times.append(time.perf_counter() - start)
    fits.append([answer.h_W_m2K, answer.h_u_W_m2K, answer.time_constant_s])
print(json.dumps({"fits": fits, "import_s": loaded - began, "first_fit_s": times[0], "fit_s": min(times)}))
"""


def fetch_system() -> None:
    """Debian's own packages for the processor, unpacked into a folder; the machine's package lists stay untouched."""
    apt = ARM / "apt"
    for folder in ("lists/partial", "cache/archives/partial", "state"):
        (apt / folder).mkdir(parents=True, exist_ok=True)
    (apt / "status").touch()
    options: list[str] = []
    for setting in (
        "APT::Architecture=arm64",
        "APT::Architectures=arm64",
        f"Dir::State={apt}/state",
        f"Dir::State::status={apt}/status",
        f"Dir::State::lists={apt}/lists",
        f"Dir::Cache={apt}/cache",
        "APT::Sandbox::User=root",
    ):
        options += ["-o", setting]
    install = ["-y", "-qq", "--no-install-recommends", "--download-only", "install", *SYSTEM]
    for words in (["update", "-qq"], install):
        if run(["apt-get", *options, *words], quiet=True):
            raise Stop("Debian's packages for aarch64 could not be fetched: see apt's words above.")
    for package in sorted((apt / "cache" / "archives").glob("*.deb")):
        run(["dpkg", "-x", package, TREE], quiet=True)


def fetch_wheels() -> None:
    """The locked NumPy and SciPy for the processor, and what pytest needs."""
    wheels = ARM / "wheels"
    locked = dict(line.split("==") for line in lock_file("test").read_text("utf-8").split())
    versions = {name.lower(): version for name, version in locked.items()}
    wanted = [f"{name}=={versions[name]}" for name in (*BINARY, *PURE)]
    platforms = [word for name in PLATFORMS for word in ("--platform", name)]
    words = ["download", "-q", "--no-deps", "--only-binary=:all:", "--python-version", "3.11", *platforms]
    pip = [sys.executable, "-m", "pip", "--disable-pip-version-check"]
    if run([*pip, *words, "-d", wheels, *wanted], quiet=True):
        raise Stop("The aarch64 wheels could not be fetched: see pip's words above.")
    for wheel in wheels.glob("*.whl"):
        zipfile.ZipFile(wheel).extractall(SITE)


def emulated(words: list[str], **options: object) -> subprocess.CompletedProcess:
    """Run the other processor's Python with these words, in the project's root."""
    libraries = f"{TREE}/lib/aarch64-linux-gnu:{TREE}/usr/lib/aarch64-linux-gnu"
    surroundings = {
        "PATH": os.environ["PATH"],
        "HOME": str(ARM),
        "PYTHONHOME": f"{TREE}/usr",
        "PYTHONPATH": f"{ROOT}:{SITE}",
        "OPENBLAS_NUM_THREADS": "1",
        "QEMU_LD_PREFIX": str(TREE),
    }
    command = [EMULATOR, "-L", str(TREE), "-E", f"LD_LIBRARY_PATH={libraries}", f"{TREE}/usr/bin/python3.11", *words]
    return subprocess.run(command, cwd=ROOT, env=surroundings, check=False, text=True, **options)


def prepare() -> None:
    """What the emulation needs, once."""
    if not shutil.which(EMULATOR):
        if os.geteuid() != 0 or not shutil.which("apt-get"):
            raise Stop("The emulator is missing: on Debian, sudo apt-get install qemu-user-static.")
        run(["apt-get", "install", "-y", "-qq", "--no-install-recommends", "qemu-user-static"], quiet=True)
    if not (TREE / "usr/bin/python3.11").exists():
        fetch_system()
    if not (SITE / "numpy").exists() or not (SITE / "pytest").exists():
        fetch_wheels()


def main() -> int:
    """Compare the demo's fits on both processors, then run the core's tests on the other one."""
    try:
        prepare()
    except Stop as stop:
        print(stop, file=sys.stderr)
        return 1
    told = emulated(["-c", REFERENCE], capture_output=True)
    if told.returncode:
        print(told.stderr, file=sys.stderr)
        return 1
    other = json.loads(told.stdout)
    surroundings = {**os.environ, "PYTHONPATH": str(ROOT)}
    own = subprocess.run(
        [sys.executable, "-c", REFERENCE], cwd=ROOT, env=surroundings, check=True, text=True, capture_output=True
    )
    here = json.loads(own.stdout)
    pairs = [pair for one, two in zip(here["fits"], other["fits"], strict=True) for pair in zip(one, two, strict=True)]
    apart = max(abs(a - b) / abs(a) for a, b in pairs)
    print(f"h, u(h) and τ of {len(here['fits'])} runs differ by at most {apart:.1e} between the processors.")
    for name in ("import_s", "first_fit_s", "fit_s"):
        print(f"{name:12} here {here[name]:6.3f}   emulated {other[name]:6.3f}")
    words = sys.argv[1:] or list(TESTS)
    status = emulated(["-m", "pytest", "-q", "-p", "no:xdist", *words]).returncode
    if apart > 1e-8:
        print("The processors disagree by more than 1e-8.", file=sys.stderr)
        return 1
    return status


if __name__ == "__main__":
    sys.exit(main())
