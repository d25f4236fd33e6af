"""The verdict on the screen is the one that the laptop comes to, runs held against the same earlier ones."""

import time
from dataclasses import replace

import pytest
from kivy.clock import Clock

from core.bench.setup import Recording
from core.bench.setup_file import setup_to_text
from core.cooling.simulator import Truth, simulate
from core.handover.recompute import answers_to
from core.judgement.judge import judge
from core.recording.events import Decided, RunEnded, RunOpened, Typed
from mobileapp.device.clock import SystemClock
from mobileapp.device.haptics import NoHaptics
from mobileapp.device.ports import Device
from mobileapp.device.sound import NoSounds
from mobileapp.device.stamps import LoopStamp
from mobileapp.model import Model
from mobileapp.preferences import Preferences
from mobileapp.rehearsing import SHORT_BENCH

BENCH = replace(SHORT_BENCH, recording=Recording("change"))
H_W_m2K = (150.0, 151.0, 180.0)  # at one speed; the last one disagrees


class NoScreen:
    def keep_on(self, on):
        """Nothing to keep on."""


@pytest.fixture(params=["measured", "rehearsal"])
def model(request, tmp_path):
    """The app's state with three runs at one speed, and nothing drawn."""
    device = Device(SystemClock(), LoopStamp(), NoHaptics(), NoSounds(), NoScreen(), tmp_path)
    model = Model(device, Preferences())
    session = model.new_session("Repeats")
    for seed, h_W_m2K in enumerate(H_W_m2K):
        opened = RunOpened(request.param, setup_to_text(BENCH), "2026-03-04T10:00:00+01:00", "loop", 0.004)
        run = model._records.open_run(session, opened)
        readings = simulate(Truth(BENCH, h_W_m2K, 86.0, 30.0), seed)
        events = [Typed(100.0 + t, C) for t, C in zip(readings.time_s, readings.reading_C, strict=True)]
        model._records.keep_all(session, run, [*events, RunEnded(1e3)])
    yield model
    model.close()


def test_the_stem_loss_of_a_still_air_run_is_taken_to_the_bench(model):
    unsaid = replace(BENCH, recording=Recording("change", kind="still-air"))
    still = replace(unsaid, body=replace(BENCH.body, stem_loss_W_K=0.02))
    readings = simulate(Truth(still, 9.0, 86.0, 40.0), 1)
    model.save_setup(unsaid)
    found = []
    model.ask_stem_loss(judge(readings, unsaid), found.append, pytest.fail)
    end = time.monotonic() + 60.0
    while not found and time.monotonic() < end:
        Clock.tick()
    model.adopt_stem_loss(found[0])
    body = model.session.setup.body
    assert body.stem_loss_W_K == pytest.approx(0.02, abs=2.5 * body.stem_loss_u_W_K)
    assert 0.0 < body.stem_loss_u_W_K < 0.01


def answered(model):
    """All answers of the session, as they come through the worker; the newest run is asked for first."""
    model.open_session(model.session.session)
    runs, told = [run.run for run in model.session.runs], {}
    for run in reversed(runs):
        model.ask_answer(run, lambda answer, run=run: told.__setitem__(run, answer), pytest.fail)
    end = time.monotonic() + 60.0
    while len(told) < len(runs) and time.monotonic() < end:
        Clock.tick()
    return [told[run] for run in runs]


def is_compared(answer):
    return next(check.value for check in answer.checks if check.name == "earlier runs") is not None


def essence(answer):
    return answer.h_W_m2K, answer.h_U95_W_m2K, answer.verdict, answer.reason, answer.checks


def test_app_and_laptop_come_to_the_same_verdict(model):
    shown = answered(model)
    assert [essence(one) for one in shown] == [essence(one) for one in answers_to(model.export_session())]
    measured = model.session.runs[0].kind == "measured"
    assert [is_compared(one) for one in shown] == ([False, True, True] if measured else [False] * 3)
    assert ("earlier" in shown[2].reason) is measured


def test_a_run_set_aside_is_no_longer_compared_with(model):
    answered(model)
    for run in model.session.runs[:2]:
        model._records.keep(int(model.session.session), int(run.run), Decided("discard", "slipped"))
    shown = answered(model)
    assert [essence(one) for one in shown] == [essence(one) for one in answers_to(model.export_session())]
    assert not is_compared(shown[2])
