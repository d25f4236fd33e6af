"""What the journal refuses is told in a sentence on the screen; the app does not fall over."""

import sqlite3
import sys
from contextlib import closing
from pathlib import Path

import pytest

from core.recording.opening import open_journal

sys.path.insert(0, str(Path(__file__).parent))
from window import AppInWindow, virtual_screen

pytestmark = pytest.mark.screen


def test_a_second_window_reads_says_so_and_refuses_to_record(tmp_path):
    """While another program holds the journal: told at the start, told again when a run is begun, alive after it."""
    (tmp_path / "data").mkdir()
    with virtual_screen() as display, closing(open_journal(tmp_path / "data", wall_time="2026-03-04T05:06:07")):
        app = AppInWindow(display, tmp_path)
        app.go("Rehearse", "rehearsal")
        app.press("To the pad")
        told = app.wait_for("told")
        assert "reading only" in told["sentence"]
        app.hand.move(640, 416)
        app.hand.tap(0.03)
        app.wait_for("understood")
        app.press("←")
        assert app.wait_for("screen")["name"] == "home"
        app.close()
    assert "Traceback" not in (tmp_path / "app.log").read_text()


def test_a_journal_of_a_newer_version_is_told_and_left_alone(tmp_path):
    """One sentence on the screen and on the terminal, nothing else."""
    (tmp_path / "data").mkdir()
    open_journal(tmp_path / "data", wall_time="2026-03-04T05:06:07").close()
    path = tmp_path / "data" / "journal.sqlite"
    with closing(sqlite3.connect(path)) as db:
        db.execute("PRAGMA user_version = 99")
    before = path.read_bytes()
    with virtual_screen() as display:
        app = AppInWindow(display, tmp_path)
        assert "newer Cooltally" in app.named("told")[0]["sentence"]
        app.close()
    log = (tmp_path / "app.log").read_text()
    assert "newer Cooltally" in log
    assert "Traceback" not in log
    assert path.read_bytes() == before
