"""What the packaging tool packs, by its own code: the app, the whole app, and nothing else."""

import configparser
import re
import subprocess
import sys
import tomllib
from pathlib import Path

import buildozer
import pytest

import core

ROOT = Path(__file__).resolve().parents[2]
OF_THE_TOOL = {"sitecustomize.py"}
TOP_LEVEL = {"core", "main.py", "mobileapp", "sitecustomize.py"}
NEEDED_AT_RUN_TIME = {"py", "kv", "png", "wav", "ttf", "mo", "csv", "json", ""}


def spec_of(tools, profile="lean"):
    parsed = configparser.ConfigParser(interpolation=None, strict=True)
    parsed.optionxform = str
    parsed.read_string(tools.spec_text(profile))
    return parsed


def in_the_tree():
    """The files of the two packages, as the version control knows them."""
    words = ["git", "ls-files", "--cached", "--others", "--exclude-standard", "core", "mobileapp"]
    listed = subprocess.run(words, cwd=ROOT, check=True, capture_output=True, text=True).stdout.splitlines()
    return {path for path in listed if (ROOT / path).is_file()}


@pytest.mark.parametrize("profile", ["full", "lean"])
def test_no_key_of_the_spec_is_misspelt(tools, profile):
    """The packaging tool reads over unknown keys in silence; its own example file names those that it knows."""
    example = (Path(buildozer.__file__).parent / "default.spec").read_text("utf-8")
    known = set(re.findall(r"^#?\s*([a-z][\w.]+)\s*=", example, re.MULTILINE))
    keys = {key for section in spec_of(tools, profile).values() for key in section}
    assert len(known) > 100
    assert len(keys) > 20
    assert keys - known == set()


def test_a_misspelt_key_would_be_noticed():
    example = (Path(buildozer.__file__).parent / "default.spec").read_text("utf-8")
    known = set(re.findall(r"^#?\s*([a-z][\w.]+)\s*=", example, re.MULTILINE))
    assert "android.permission" not in known
    assert "android.permissions" in known


def test_everything_that_runs_is_packed_and_nothing_else(tools, packed):
    _tool, folder = packed
    expected = {path for path in in_the_tree() if Path(path).suffix.lstrip(".") in NEEDED_AT_RUN_TIME}
    expected -= {path for path in expected if Path(path).name.startswith(".")}
    assert set(tools.staged_files(folder)) == expected | {"main.py"} | OF_THE_TOOL


def test_the_top_level_is_as_ever(packed):
    _tool, folder = packed
    assert {path.name for path in folder.iterdir() if path.is_file() or any(path.iterdir())} == TOP_LEVEL


def test_every_kind_of_file_of_the_packages_is_packed_or_known_to_be_left():
    """A new kind of file, say a table beside the code, must be thought of in the spec."""
    left = {"po", "pot"}  # sources of the translations
    assert {Path(path).suffix.lstrip(".") for path in in_the_tree()} <= NEEDED_AT_RUN_TIME | left


def test_both_profiles_pack_the_same_files(tools, packed, tmp_path):
    _tool, lean = packed
    _full_tool, full = tools.stage("full", tmp_path)
    assert tools.staged_files(lean) == tools.staged_files(full)


def test_the_full_profile_differs_by_scipy_alone(tools):
    full, lean = (spec_of(tools, profile)["app"]["requirements"].split(",") for profile in ("full", "lean"))
    assert [name for name in full if name not in lean] == ["scipy"]
    assert [name for name in full if name != "scipy"] == lean


def test_the_version_stands_in_one_place(packed):
    tool, _folder = packed
    with pytest.MonkeyPatch.context() as patch:
        patch.chdir(ROOT / "buildspec")
        assert tool.get_version() == core.__version__


def test_the_build_spec_asks_for_what_the_project_asks_for(tools):
    """Same packages as pyproject.toml, and none that is neither there nor part of the tool chain."""
    project = tomllib.loads((ROOT / "pyproject.toml").read_text("utf-8"))["project"]
    wanted = {re.match(r"[a-z]+", line)[0] for line in project["dependencies"]}
    asked = {name.split("==")[0] for name in spec_of(tools)["app"]["requirements"].split(",")}
    assert asked == wanted | {"python3"}


def test_the_pictures_are_those_that_the_script_draws(tools):
    """The mark is our own drawing, and can be drawn again."""
    import draw_icons

    for name, pixels in draw_icons.pictures().items():
        assert (ROOT / "buildspec" / "artwork" / name).read_bytes() == draw_icons.png(pixels)
    named = [value for key, value in spec_of(tools)["app"].items() if key.endswith("filename") and "artwork" in value]
    assert {Path(value).name for value in named} == set(draw_icons.pictures())


def test_the_shim_starts_the_app():
    """The packed main.py reaches the app's own arguments."""
    words = [sys.executable, "-OO", str(ROOT / "buildspec" / "main.py"), "--help"]
    told = subprocess.run(words, cwd="/", check=False, capture_output=True, text=True)
    assert told.returncode == 0, told.stderr
    assert "--demo" in told.stdout
