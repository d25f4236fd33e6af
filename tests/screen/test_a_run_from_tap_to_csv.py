"""The main job in a real window, driven from outside: rehearse, tap, read h, hand over, and fit the CSV again."""

import json
import re
import subprocess
import sys
from pathlib import Path

import pytest

sys.path.insert(0, str(Path(__file__).parent))
from follow import end_run, rehearse, truth_of
from window import ROOT, AppInWindow, virtual_screen

pytestmark = pytest.mark.screen
CORE_FIT = (sys.executable, "-m", "core", "fit")


@pytest.fixture(scope="module")
def display():
    with virtual_screen() as display:
        yield display


@pytest.fixture(scope="module")
def rehearsed(display, tmp_path_factory):
    """One rehearsal, tapped to its end: the app still open, the taps as sent, the answer shown."""
    app = AppInWindow(display, tmp_path_factory.mktemp("rehearsal"))
    sent = rehearse(app, seed=1)
    answer = end_run(app)
    yield app, sent, answer
    app.close()


def test_every_tap_is_counted_once(rehearsed):
    app, sent, _answer = rehearsed
    counted = [one for one in app.named("tap") if one["reading"] is not None]
    assert len(sent) >= 40
    assert len(counted) == len(sent)


def test_a_tap_is_stamped_when_it_was_made(rehearsed):
    """While fits run, the stamps of the record are those of the pointer events: half of them within 2 ms of the
    sending, none before it and none after the confirmation (the machine itself may stall in between)."""
    app, sent, _answer = rehearsed
    counted = [one for one in app.named("tap") if one["reading"] is not None]
    errors_s = sorted(abs(one["stamp"] - moment) for one, moment in zip(counted, sent, strict=True))
    assert errors_s[len(errors_s) // 2] < 0.002
    for one, moment in zip(counted, sent, strict=True):
        assert moment - 0.001 <= one["stamp"] <= one["t"]


def test_what_going_on_would_bring_stands_beside_the_live_h(rehearsed):
    """From the first fit on a promise for half a minute and for the end, and at last that it is enough."""
    app, _sent, _answer = rehearsed
    told = [one["text"] for one in app.named("guided") if one["text"]]
    assert re.fullmatch(r"± [\d.]+.% in 30 s, ± [\d.]+.% at \d\d °C in \d+:\d\d", told[0])
    assert told[-1].startswith(("Enough", "Far enough"))


def test_h_lies_within_its_uncertainty_of_the_truth(rehearsed):
    app, _sent, answer = rehearsed
    assert abs(answer["h"] - truth_of(app)) <= answer["U95"]


def test_the_exported_folder_fits_to_the_number_shown(rehearsed):
    """What the journal holds, exported and fitted by the command, is the app's answer to the last digit."""
    app, _sent, answer = rehearsed
    folder = _exported(app)
    told = subprocess.run([*CORE_FIT, str(folder), "--json"], cwd=ROOT, capture_output=True, text=True, check=True)
    fitted = json.loads(told.stdout.splitlines()[-1])
    assert fitted["h_W_m2K"] == answer["h"]
    assert fitted["h_U95_W_m2K"] == answer["U95"]
    assert fitted["verdict"] == answer["verdict"]


def _exported(app) -> Path:
    """By the app's own screen where it hands over into a folder."""
    app.press("←")
    app.wait_for("screen", lambda one: one["name"] == "home")
    app.wait_for("targets")
    app.go("Hand over", "handover")
    app.press("Write the session there")
    app.wait_for("handed over")
    return next(app.folder.rglob("runs.csv")).parent
