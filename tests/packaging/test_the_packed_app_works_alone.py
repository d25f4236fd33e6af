"""The packed tree, compiled as on the tablet and with nothing of the repository beside it, does the whole job."""

import compileall
import json
import os
import subprocess
import sys
from importlib.util import find_spec
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]
sys.path.insert(0, str(ROOT / "tests" / "screen"))
from follow import end_run, rehearse  # noqa: E402  a folder of scripts, not a package
from window import AppInWindow, virtual_screen  # noqa: E402

pytestmark = pytest.mark.screen
PACKAGES = {
    "lean": ("kivy", "numpy", "plyer", "filetype", "requests", "urllib3", "certifi", "idna"),
    "full": ("kivy", "numpy", "scipy", "plyer", "filetype", "requests", "urllib3", "certifi", "idna"),
}


@pytest.fixture(scope="module")
def device(packed, tmp_path_factory):
    """The packed files without their sources, optimised, and for each profile the device's packages and no other."""
    _tool, staged = packed
    place = tmp_path_factory.mktemp("device")
    tree = place / "app"
    subprocess.run(["cp", "-rL", str(staged), str(tree)], check=True)
    assert compileall.compile_dir(str(tree), quiet=1, legacy=True, optimize=2)
    for source in tree.rglob("*.py"):
        source.unlink()
    installed = Path(find_spec("numpy").origin).parents[1]
    for profile, names in PACKAGES.items():
        site = place / profile
        site.mkdir()
        for name in names:
            for part in (name, f"{name}.libs", f"{name.capitalize()}.libs"):
                if (installed / part).exists():
                    (site / part).symlink_to(installed / part)
    return place


def python(device, profile):
    """The bare interpreter in the device's mode, with the device's packages, as words and environment."""
    bare = getattr(sys, "_base_executable", sys.executable)
    return (bare, "-S", "-OO"), {"PYTHONPATH": str(device / profile), "PYTHONDONTWRITEBYTECODE": "1"}


def bare_python(device, script):
    """What a script says that is run as on the tablet, beside the packed tree."""
    words, path = python(device, "lean")
    surroundings = {**os.environ, **path}
    return subprocess.run(
        [*words, "-c", script], cwd=device / "app", env=surroundings, check=True, capture_output=True, text=True
    ).stdout


def test_nothing_of_the_repository_is_in_reach(device):
    looked_for = "('pytest', 'scipy', 'ht', 'buildozer') if u.find_spec(n)"
    told = bare_python(device, f"import importlib.util as u; print([n for n in {looked_for}]); assert 0")
    assert told.strip() == "[]"


def test_a_rehearsal_is_recorded_fitted_and_exported_by_the_lean_app(device, tmp_path):
    """The exported folder, fitted by the packed core, gives the number that the app showed."""
    words, path = python(device, "lean")
    with virtual_screen() as display:
        app = AppInWindow(display, tmp_path, start=(*words, "main.pyc"), at=device / "app", **path)
        taps = rehearse(app, seed=2)
        answer = end_run(app)
        app.press("←")
        app.wait_for("screen", lambda one: one["name"] == "home")
        app.wait_for("targets")
        app.go("Hand over", "handover")
        app.press("Write the session there")
        app.wait_for("handed over")
        app.close()
    folder = str(next(tmp_path.rglob("runs.csv")).parent)
    assert len(taps) >= 40
    fit = f"import sys; from core.__main__ import main; sys.exit(main(['fit', {folder!r}, '--json']))"
    told = bare_python(device, fit)
    fitted = json.loads(told.splitlines()[-1])
    assert (fitted["h_W_m2K"], fitted["verdict"]) == (answer["h"], answer["verdict"])


@pytest.mark.parametrize("profile", ["full", "lean"])
def test_it_opens_with_the_demo(device, tmp_path, profile):
    words, path = python(device, profile)
    with virtual_screen() as display:
        app = AppInWindow(display, tmp_path, "--demo", start=(*words, "main.pyc"), at=device / "app", **path)
        shown = app.target("Hand over")
        app.close()
    assert shown["w"] > 0
