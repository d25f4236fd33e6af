"""Home lists the newest runs of a long session, and the earlier ones when somebody asks for them."""

import sys
from pathlib import Path

import pytest

sys.path.insert(0, str(Path(__file__).parent))
from window import AppInWindow, virtual_screen

from core.bench.setup_file import setup_to_text
from core.recording.events import RunEnded, RunOpened, SessionOpened, Tapped, Typed
from core.recording.opening import open_journal
from mobileapp.rehearsing import SHORT_BENCH

pytestmark = pytest.mark.screen
WALL_TIME = "2026-03-04T05:06:07+01:00"
RUNS = 14
TALL = "1280x1500"  # so that nothing has to be scrolled to


@pytest.fixture
def app(tmp_path):
    """The app, opened on a session of many short runs."""
    (tmp_path / "data").mkdir()
    opened = open_journal(tmp_path / "data", wall_time=WALL_TIME)
    session = opened.journal.open_session(SessionOpened("A long evening", WALL_TIME)).number
    for _ in range(RUNS):
        run = opened.journal.open_run(
            session, RunOpened("measured", setup_to_text(SHORT_BENCH), WALL_TIME, "loop", 0.002)
        ).number
        opened.journal.keep(session, run, Typed(100.0, 85.0))
        for tap in range(12):
            opened.journal.keep(session, run, Tapped(101.0 + 1.1 * tap + 0.03 * tap**2, 1))
        opened.journal.keep(session, run, RunEnded(130.0))
    opened.close()
    with virtual_screen(TALL) as display:
        app = AppInWindow(display, tmp_path, size=TALL)
        yield app
        app.close()


def listed(app):
    """The numbers of the runs in the list, once it stands."""
    app.target("", "RunRow")
    return [int(one["text"]) for one in app.named("targets")[-1]["targets"] if one["kind"] == "RunRow"]


def test_the_newest_runs_are_listed_and_the_earlier_ones_on_demand(app):
    assert listed(app) == list(range(RUNS, RUNS - 10, -1))
    since = len(app.named("targets"))
    app.press("Earlier runs: 4")
    while len(app.named("targets")) == since:
        app.wait_for("targets")
    assert listed(app) == list(range(RUNS, 0, -1))
