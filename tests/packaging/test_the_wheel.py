"""Wheel and source archive hold the whole app, and run from another folder."""

import subprocess
import sys
import tarfile
import zipfile
from pathlib import Path

import pytest
from test_the_packed_app import in_the_tree

ROOT = Path(__file__).resolve().parents[2]


@pytest.fixture(scope="module")
def archives(tmp_path_factory):
    import release

    return release.build(tmp_path_factory.mktemp("dist"), tmp_path_factory.mktemp("scratch"))


def test_the_wheel_holds_every_file_of_the_packages_and_nothing_else(archives):
    _archive, wheel = archives
    names = set(zipfile.ZipFile(wheel).namelist())
    assert {name for name in names if ".dist-info/" not in name} == in_the_tree()


def test_the_source_archive_holds_them_too(archives):
    archive, _wheel = archives
    with tarfile.open(archive) as opened:
        names = {name.partition("/")[2] for name in opened.getnames()}
    assert names >= in_the_tree() | {"pyproject.toml", "README.md"}


def test_both_commands_run_from_the_wheel_in_another_folder(archives, tmp_path):
    """Installed without the repository beside it: the demo is found and fitted, the app knows its arguments."""
    _archive, wheel = archives
    place = tmp_path / "installed"
    pip = [sys.executable, "-m", "pip", "install", "-q", "--no-deps", "--no-index", "--target", str(place)]
    subprocess.run([*pip, str(wheel)], check=True)
    inside = {"PYTHONPATH": str(place), "PATH": "/usr/bin:/bin"}
    for words in (
        ["cooltally-core", "fit", str(place / "core" / "demo" / "session")],
        ["cooltally", "--help"],
    ):
        command = [sys.executable, str(place / "bin" / words[0]), *words[1:]]
        done = subprocess.run(command, cwd=tmp_path, env=inside, check=False, capture_output=True, text=True)
        assert done.returncode == 0, done.stderr
        assert done.stdout
