"""The hand-over into Android's download store, by the pinned pyjnius on a real JVM against classes that have the
platform's signatures: all bytes, or no entry."""

import json
import os
import shutil
import subprocess
import sys
import zipfile
from importlib.metadata import version
from pathlib import Path

import pytest

pytestmark = pytest.mark.skipif(shutil.which("javac") is None, reason="needs a JDK; dev.py tests installs it on Debian")
ROOT = Path(__file__).resolve().parents[2]
SENT = bytes(range(256)) * 512


@pytest.fixture(scope="session")
def classes(tmp_path_factory):
    out = tmp_path_factory.mktemp("classes")
    sources = [str(path) for path in (Path(__file__).parent / "java").rglob("*.java")]
    subprocess.run(["javac", "-nowarn", "-d", str(out), *sources], check=True)
    return out


@pytest.fixture
def save(classes, tmp_path):
    return lambda fails_at="": on_jvm("store_on_jvm.py", classes, tmp_path, fails_at)


def on_jvm(script, *words):
    """What a script beside this file says of itself in its last line."""
    command = [sys.executable, Path(__file__).parent / script, *words]
    path = {**os.environ, "PYTHONPATH": str(ROOT)}
    done = subprocess.run(list(map(str, command)), cwd=ROOT, env=path, check=False, capture_output=True, text=True)
    assert done.returncode == 0, done.stderr
    return json.loads(done.stdout.splitlines()[-1])


def test_pyjnius_is_the_one_that_the_apk_gets():
    assert version("pyjnius") == "1.7.0"


def test_every_byte_arrives_before_the_file_is_shown(save, tmp_path):
    done = save()
    assert done["raised"] == ""
    assert (tmp_path / "entry.bin").read_bytes() == SENT
    assert done["log"] == ["insert", "open w", "update", "query"]
    assert done["entry"] == {
        "_display_name": "day one.zip",
        "mime_type": "application/zip",
        "relative_path": "Download/Cooltally",
        "is_pending": "0",
    }


def test_the_person_is_told_the_name_that_the_store_gave(save):
    assert save()["told"] == "Download/Cooltally/day one (1).zip"


def test_a_store_that_does_not_tell_the_name_costs_nothing(save, tmp_path):
    done = save("query")
    assert done["told"] == "Download/Cooltally/day one.zip"
    assert (tmp_path / "entry.bin").read_bytes() == SENT


@pytest.mark.parametrize("fails_at", ["open", "open nothing", "write", "update"])
def test_a_half_written_entry_is_taken_back(save, tmp_path, fails_at):
    done = save(fails_at)
    assert done["told"] == ""
    assert done["raised"]
    assert done["log"][-1] == "delete"
    assert done["entry"] is None
    assert not (tmp_path / "entry.bin").exists()


def test_a_store_that_takes_nothing_is_an_os_error(save):
    done = save("insert")
    assert done["raised"].startswith("OSError")
    assert done["log"] == ["insert"]


@pytest.fixture
def hand_over(classes, tmp_path):
    """Hand the demo session over; which of the three ways are open is for the caller to say."""

    def handed(fails_at="", *, folder=True, own=True):
        (tmp_path / "store").mkdir()
        downloads = tmp_path / "Download"
        downloads.mkdir() if folder else downloads.write_text("a file stands in the way")
        place = tmp_path / "own" if own else ""
        return on_jvm("hand_over_on_jvm.py", classes, tmp_path / "store", fails_at, downloads, place)

    return handed


def written(folder):
    return {path.name for path in folder.rglob("*") if path.is_file()}


def test_the_store_goes_first_and_nothing_else_is_written(hand_over, tmp_path):
    done = hand_over()
    assert done["raised"] == ""
    assert done["told"].startswith("Download/Cooltally/")
    assert done["told"].endswith(" (1).zip")  # the final name is the store's
    assert zipfile.is_zipfile(tmp_path / "store" / "entry.bin")
    assert written(tmp_path / "Download") | written(tmp_path / "own") == set()


@pytest.mark.parametrize("fails_at", ["insert", "write", "update"])
def test_the_folder_by_its_path_comes_second(hand_over, tmp_path, fails_at):
    done = hand_over(fails_at)
    assert done["raised"] == ""
    assert done["log"][0] == "insert"
    assert not (tmp_path / "store" / "entry.bin").exists()
    assert written(tmp_path / "Download") >= {"runs.csv", "readings.csv", "SHA256SUMS"}
    assert written(tmp_path / "own") == set()


def test_the_folder_of_the_app_comes_last_with_its_whole_path(hand_over, tmp_path):
    done = hand_over("open", folder=False)
    assert done["log"][-1] == "delete"
    assert zipfile.is_zipfile(done["told"])
    assert Path(done["told"]).parent == tmp_path / "own"


def test_where_no_way_is_open_the_reason_of_the_store_is_said(hand_over):
    done = hand_over("open", folder=False, own=False)
    assert done["told"] == ""
    assert done["raised"].startswith("BenchError: The download folder cannot be written: ")
    assert "no space left" in done["raised"]
