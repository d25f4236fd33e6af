"""Killed in the middle of a run, the app opens where it was, with every confirmed tap."""

import sys
from pathlib import Path

import pytest

sys.path.insert(0, str(Path(__file__).parent))
from window import AppInWindow, virtual_screen

pytestmark = pytest.mark.screen
TAPS = 12
HELD_S = 0.08  # longer than the dead time in which a second contact is the same palm


def test_every_confirmed_tap_is_there_after_a_kill(tmp_path):
    with virtual_screen() as display:
        app = AppInWindow(display, tmp_path)
        app.go("Rehearse", "rehearsal")
        app.go("To the pad", "record")
        app.point(app.target("", "Pad"))
        confirmed = []
        for _tap in range(TAPS):
            app.hand.tap(HELD_S)
            confirmed.append(app.wait_for("tap"))
        app.kill()
        kept = [one for one in app.journal() if one["kind"] in ("tapped", "typed")]
        assert [one["stamp_s"] for one in kept] == [one["stamp"] for one in confirmed]

        again = AppInWindow(display, tmp_path)
        again.point(again.target("", "Pad"))
        again.hand.tap(HELD_S)
        following = again.wait_for("tap")
        screens = [one["name"] for one in again.named("screen")]
        again.close()
    assert screens[-1] == "record"
    readings = [one["reading"] for one in confirmed]
    assert readings == [readings[0] - step for step in range(TAPS)]
    assert following["reading"] == readings[-1] - 1
