"""The hand-over into Android's download store, by the pinned pyjnius on a real JVM against classes that have the
platform's signatures: all bytes, or no entry."""

import json
import os
import shutil
import subprocess
import sys
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
    def on_jvm(fails_at=""):
        script = Path(__file__).parent / "store_on_jvm.py"
        words = [sys.executable, str(script), str(classes), str(tmp_path), fails_at]
        path = {**os.environ, "PYTHONPATH": str(ROOT)}
        done = subprocess.run(words, cwd=ROOT, env=path, check=False, capture_output=True, text=True)
        assert done.returncode == 0, done.stderr
        return json.loads(done.stdout.splitlines()[-1])

    return on_jvm


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
