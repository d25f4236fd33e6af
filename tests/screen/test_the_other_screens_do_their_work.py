"""Second level, series, hand-over and intake in a real window, driven from outside on the invented session."""

import json
import subprocess
import sys
import time
from pathlib import Path

import pytest

sys.path.insert(0, str(Path(__file__).parent))
from window import ROOT, AppInWindow, virtual_screen

from core.demo.cabinet_bench import FOLDER
from core.handover.export import read_session

pytestmark = pytest.mark.screen
TALL = "1600x1500"  # so that nothing has to be scrolled to
PATIENCE_S = 60.0  # fits take their time on a busy machine
LOG = "Logger 7, channel 2\nDate;Time;Temp;RH\n" + "".join(
    f"10.03.2026;09:{12 + 5 * i // 60:02d}:{5 * i % 60:02d};{f'{22.7 + 66 * 0.94**i:.1f}'.replace('.', ',')};41\n"
    for i in range(40)
)


@pytest.fixture(scope="module")
def app(tmp_path_factory):
    """The app with the invented session, at home."""
    folder = tmp_path_factory.mktemp("screens")
    (folder / "logger.csv").write_text(LOG, encoding="utf-8")
    with virtual_screen(TALL) as display:
        opened = AppInWindow(display, folder, "--demo", size=TALL)
        yield opened
        opened.close()


def told(app, act, event, **wanted):
    """Do something until the app tells of it: a touch while one screen gives way to the next is not taken."""
    since = len(app.events)
    for _try in range(6):
        act()
        end = time.monotonic() + PATIENCE_S / 6
        while time.monotonic() < end:
            app.read()
            for one in app.events[since:]:
                if one["event"] == event and all(one[key] == value for key, value in wanted.items()):
                    return one
            time.sleep(0.01)
    raise AssertionError(f"no {event} came of it")


def go(app, text, screen):
    told(app, lambda: app.press(text), "screen", name=screen)


def home(app):
    """Back to the first screen."""
    if app.named("screen")[-1]["name"] != "home":
        told(app, lambda: app.press("←"), "screen", name="home")


def detail(app):
    """To the second level of the newest run."""
    home(app)
    told(app, lambda: app.press("", "RunRow"), "screen", name="answer")
    return told(app, lambda: app.press("Curve and budget"), "detail")


def drag(app, start, end):
    app.target("Keep")
    app.hand.move(*start)
    app.hand.button(True)
    for i in range(1, 11):
        app.hand.move(*(a + (b - a) * i / 10 for a, b in zip(start, end, strict=True)))
        time.sleep(0.02)  # a finger's pace
    app.hand.button(False)


def last(app, kind):
    return [one for one in app.journal() if one["kind"] == kind][-1]


def test_the_start_of_the_fit_can_be_dragged_and_given_back(app):
    """The journal holds the new start, the fit begins there, and the program's own comes back on one touch."""
    before = detail(app)
    x, y = before["places"]["start"]
    moved = told(app, lambda: drag(app, (x, y + 8), (x + 70, y + 8)), "detail", by="person")
    assert moved["start_s"] > before["start_s"]
    assert last(app, "start moved")["start_s"] == pytest.approx(moved["start_s"], abs=5.0)
    again = told(app, lambda: app.press("Give it back"), "detail", by="program")
    assert again["h"] == before["h"]
    assert last(app, "start moved")["start_s"] is None


def test_a_reading_can_be_left_out_and_taken_back(app):
    """A touched point is named; left out, it is out of the fit; kept again, h is what it was."""
    before = detail(app)
    app.target("Keep")

    def leave_out():
        app.hand.move(*before["places"]["middle"])
        app.hand.tap(0.03)
        app.press("Leave it out")

    without = told(app, leave_out, "detail")
    assert len(without["left_out"]) == len(before["left_out"]) + 1
    assert last(app, "ruled")["keep"] is False
    assert told(app, lambda: app.press("Keep it"), "detail")["left_out"] == before["left_out"]


def test_a_run_is_set_aside_with_a_reason(app):
    """One touch gives the reason; the journal holds it beside the run, which stays."""
    detail(app)
    app.press("Set aside …")
    told(app, lambda: app.press("Only a trial"), "decided", decision="discard")
    assert (last(app, "decided")["decision"], last(app, "decided")["reason"]) == ("discard", "Only a trial")
    told(app, lambda: app.press("Look again later"), "decided", decision="look")
    assert last(app, "decided")["decision"] == "look"


def test_the_law_on_the_screen_is_that_of_the_command(app):
    home(app)
    shown = told(app, lambda: app.press("Series"), "law")
    answered = subprocess.run(
        [sys.executable, "-m", "core", "series", str(FOLDER), "--json"],
        cwd=ROOT, capture_output=True, text=True, check=True,
    )  # fmt: skip
    law = json.loads(answered.stdout)
    assert shown["m"] == pytest.approx(law["m"], abs=2 * law["m_u"])
    assert shown["C"] == pytest.approx(law["C"], abs=2 * law["C_u"])


def test_the_local_hand_over_lives_only_while_its_screen_is_open():
    """Off at first; opened, a wrong code gets nothing and the shown one the whole session; left, nothing listens."""
    script = Path(__file__).with_name("share_once.py")
    ran = subprocess.run([sys.executable, str(script)], capture_output=True, text=True, timeout=120, check=False)
    assert ran.returncode == 0, ran.stderr[-2000:]
    found = json.loads(ran.stdout.splitlines()[-1])
    assert found["before"] == ""
    assert (found["wrong"], found["right"], found["after"]) == (403, 200, 0)
    assert found["files"] == ["SHA256SUMS", "csv-metadata.json", "readings.csv", "runs.csv"]
    assert found["runs"] == len(read_session(FOLDER).runs)
    assert found["shown"] == ["", ""]


def test_what_a_person_likes_shows_at_once_and_is_kept(app):
    """Language and theme change on the spot, on the screen where they were chosen, and lie in the preferences."""
    home(app)
    go(app, "Settings", "settings")
    for word, value in (("Deutsch", "de"), ("Helle Halle", "hall"), ("English", "en"), ("Day", "day")):
        told(app, lambda word=word: app.press(word), "preferred", value=value)
    app.target("Bright hall")
    kept = json.loads((app.data / "preferences.json").read_text(encoding="utf-8"))
    assert (kept["language"], kept["palette"]) == ("en", "day")


def test_a_loggers_table_becomes_a_run_with_its_answer(app):
    """Chosen, mapped by the guess, taken in: a session of its own with a run that is fitted."""
    home(app)
    go(app, "Settings", "settings")
    go(app, "Take in a table …", "intake")
    assert told(app, lambda: app.press("logger.csv"), "table")["readable"]
    app.press("Readings on a beat")
    assert told(app, lambda: app.press("Make a run of it"), "taken in")["runs"] == 1
    typed = [one for one in app.journal() if one["kind"] == "typed"]
    assert typed[-40]["reading_C"] == pytest.approx(88.7)
    assert typed[-1]["stamp_s"] - typed[-40]["stamp_s"] == pytest.approx(195.0)
