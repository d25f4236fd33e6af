"""The run that goes on: opened in the journal, fed by touches, keys and beats, fitted as it comes."""

from __future__ import annotations

from collections.abc import Callable
from datetime import datetime
from functools import partial
from typing import Any

from kivy.clock import Clock
from kivy.event import EventDispatcher
from kivy.properties import ObjectProperty

from core.bench.setup import Setup
from core.bench.setup_file import setup_to_text
from core.recording.events import RunEnded, RunOpened
from core.recording.tally import Tally
from mobileapp import rehearsing
from mobileapp.beat import BeatPlayer
from mobileapp.device.ports import Device, Stamp
from mobileapp.preferences import Preferences
from mobileapp.records import Record, Records
from mobileapp.running import Running
from mobileapp.views import BeatView, Felt, LiveFit, PadView
from mobileapp.words import _
from mobileapp.worker import LatestWorker

FIRST_FIT = 6  # readings before a fit is tried while the run goes on
USUAL_START_C = 85.0
FORGOTTEN_S = 3600.0
CLOCK_BREAK_S = 120.0


class Recorder(EventDispatcher):
    """At most one run at a time. Screens bind to `pad`, `live` and `beat`."""

    pad: PadView | None = ObjectProperty(None, allownone=True)
    live = ObjectProperty(LiveFit(None, "", 0))
    beat: BeatView | None = ObjectProperty(None, allownone=True)

    def __init__(self, device: Device, records: Records, worker: LatestWorker, liked: Preferences) -> None:
        super().__init__()
        self.device = device
        self.simulated_display: Callable[[], str] | None = None
        self._records, self._worker = records, worker
        self._preferences = liked
        self._running: Running | None = None
        self._warm: Any = None
        self._beats = BeatPlayer(device.clock, device.sounds, device.haptics, Clock.schedule_once, self._beaten)

    def prefer(self, liked: Preferences) -> None:
        """What answers to a tap from now on."""
        self._preferences = liked
        self._beats.sound_on, self._beats.vibration_on = liked.click, liked.vibration
        if self._running is not None:
            self._running.preferences = liked

    def begin(self, session: int, setup: Setup, seed: int | None = None, truth: str = "") -> None:
        """Open a run in the journal and take it to the pad."""
        kind = "rehearsal" if truth else "still-air" if setup.recording.kind == "still-air" else "measured"
        stamps, clock = self.device.stamps, self.device.clock
        opened = RunOpened(
            run_kind=kind,
            setup_toml=setup_to_text(setup),
            wall_time=clock.wall_iso(),
            stamp_source=stamps.name,
            stamp_halfwidth_s=stamps.halfwidth_s,
            slept_s=clock.slept_s(),
            seed=seed,
            truth=truth,
        )
        self.take_up(self._records.open_run(session, opened))

    def begin_rehearsal(self, session: int, bench: Setup | None, mode: str) -> None:
        """Open a rehearsal on this bench, or on the short one."""
        plan = rehearsing.plan(bench, mode, self.device.clock.now_s())
        self.begin(session, plan.setup, plan.seed, plan.truth)

    def take_up(self, run: int) -> None:
        """Bring a run that the journal holds to the pad."""
        record = self._records.run(run)
        setup = record.setup
        keep = partial(self._records.keep, record.session, run)
        tally = Tally(setup.thermometer.resolution_K, keep, record.events, setup.thermometer.refresh_s)
        display = rehearsing.display_of(record.state.opened, setup)
        self.simulated_display = None if display is None else lambda: display.text(self.device.clock.now_s())
        start_C = self._usual_start_C(record) if display is None else display.first_to_tap_C
        self._warm = None
        self.live = LiveFit(None, "", 0)
        self._running = Running(
            str(run), record.kind, setup, tally, self.device, self._beats, start_C, self._run_changed
        )
        self.prefer(self._preferences)
        self._running.go_on()
        self._run_changed()

    def _usual_start_C(self, record: Record) -> float:
        """Where the last run of the session began."""
        before = [r for r in self._records.runs(record.session) if r.run < record.run and r.state.rows]
        same = [r for r in before if r.kind == record.kind]
        step = record.setup.thermometer.resolution_K
        start = same[-1].state.rows[0].reading_C if same else USUAL_START_C
        return round(round(start / step) * step, 9)

    def _run_changed(self) -> None:
        if self._running is None:
            self.pad = None
            return
        self.pad = self._running.pad()
        self._refit()

    def _refit(self) -> None:
        running = self._running
        if running is None:
            return
        readings, setup, warm = running.readings, running.setup, self._warm
        if len(readings) < FIRST_FIT:
            waiting = _("A first h after {count} readings.").format(count=FIRST_FIT)
            self.live = LiveFit(None, waiting, len(readings))
            return

        def work() -> Any:
            from core.judgement.guidance import guide
            from core.judgement.judge import judge
            from core.judgement.prediction import usual_end_C

            answer = judge(readings, setup, warm=warm)
            if setup.recording.kind == "still-air":
                return answer, None, None
            end_C = usual_end_C(answer.fit.start_C, answer.asymptote_C)
            return answer, guide(answer, setup, readings.reading_C[-1], end_C), end_C

        def then(found: Any) -> None:
            answer, guidance, end_C = found
            if self._running is running:
                self._warm = answer.fit
                self.live = LiveFit(answer, "", len(readings), guidance, end_C)

        def failed(sentence: str) -> None:
            if self._running is running:
                self.live = LiveFit(None, sentence, len(readings))

        self._worker.ask("live", work, then, failed)

    def _beaten(self, beat: BeatView) -> None:
        if self._running is not None:
            self._running.beat(beat)
            self.beat = beat

    def now_s(self) -> float:
        return self.device.clock.now_s()

    def stamp_now(self) -> Stamp:
        return Stamp(self.now_s(), self.device.stamps.halfwidth_s, "loop")

    def start_at(self, reading_C: float) -> None:
        """The first number that the pad waits for."""
        if self._running is not None:
            self._running.start_C = round(reading_C, 9)
            self._run_changed()

    def contact(self, stamp: Stamp) -> Felt:
        return self._running.contact(stamp) if self._running else Felt(False)

    def step(self, count: int, stamp: Stamp) -> Felt:
        return self._running.step(count, stamp) if self._running else Felt(False)

    def typed(self, reading_C: float, stamp: Stamp) -> Felt:
        return self._running.typed(reading_C, stamp) if self._running else Felt(False)

    def mark(self, name: str, stamp: Stamp) -> Felt:
        return self._running.mark(name, stamp) if self._running else Felt(False)

    def undo(self, stamp: Stamp) -> Felt:
        return self._running.undo(stamp) if self._running else Felt(False)

    def digit(self, name: str, stamp: Stamp) -> Felt:
        return self._running.digit(name, stamp) if self._running else Felt(False)

    def skip_beat(self, stamp: Stamp) -> Felt:
        return self._running.skip_beat(stamp) if self._running else Felt(False)

    def answer_question(self, reading_C: float, stamp: Stamp) -> Felt:
        return self._running.answer_question(reading_C, stamp) if self._running else Felt(False)

    def end(self) -> str | None:
        """The run is over; returns it, or None where it holds no reading and there is nothing to answer."""
        running, self._running = self._running, None
        if running is None:
            return None
        running.end()
        self.simulated_display = None
        self.pad, self.beat = None, None
        if self._preferences.click:
            self.device.sounds.play("done")
        return running.run if len(running.readings) else None

    def resume_open(self, session: int) -> str:
        """Take up the run that was open when the app was left. One that cannot go on is closed; returns what is
        then to be told."""
        still_open = [record for record in self._records.runs(session) if not record.state.ended]
        for record in still_open[:-1]:
            self._close_stale(record)
        if still_open:
            if self._clock_went_on(still_open[-1]):
                self.take_up(still_open[-1].run)
            else:
                self._close_stale(still_open[-1])
                return _("A run was open when the tablet was restarted. It ended with its last reading.")
        return ""

    def _close_stale(self, record: Record) -> None:
        rows = record.state.rows
        opened = record.state.opened
        last_s = rows[-1].stamp_s if rows else 0.0
        self._records.keep(record.session, record.run, RunEnded(last_s, opened.slept_s if opened else 0.0))

    def _clock_went_on(self, record: Record) -> bool:
        """Whether stamps of that run and of now are on one clock: no restart of the device lies between."""
        opened, rows = record.state.opened, record.state.rows
        if opened is None:
            return False
        try:
            wall_s = (datetime.now().astimezone() - datetime.fromisoformat(opened.wall_time)).total_seconds()
        except (ValueError, TypeError):
            return False
        if not rows:
            return wall_s < FORGOTTEN_S
        clock_s = self.now_s() - rows[0].stamp_s
        return 0.0 <= clock_s <= wall_s + CLOCK_BREAK_S and wall_s < 12 * FORGOTTEN_S
