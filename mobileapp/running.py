"""The run that goes on: what a touch, key or digit comes to, felt by the person and kept by the journal first."""

from __future__ import annotations

from collections.abc import Callable
from decimal import Decimal

from core.bench.readings import Readings
from core.bench.setup import Setup
from core.recording.completion import nearest
from core.recording.run_state import RunState
from core.recording.tally import Confirmed, Question, Refused, Tally
from mobileapp.beat import BeatPlayer
from mobileapp.device.ports import Device, Stamp
from mobileapp.preferences import Preferences
from mobileapp.trace import trace
from mobileapp.views import BeatView, Felt, PadView

Outcome = Confirmed | Refused | Question
SILENT = ("contact",)


class Running:
    """One run being recorded. `changed` is called after everything that counted."""

    def __init__(
        self,
        run: str,
        kind: str,
        setup: Setup,
        tally: Tally,
        device: Device,
        beats: BeatPlayer,
        start_C: float,
        changed: Callable[[], None],
    ) -> None:
        self.run, self.kind, self.setup = run, kind, setup
        self.start_C = start_C
        self.preferences = Preferences()
        self._tally, self._device, self._beats, self._changed = tally, device, beats, changed
        self._newest_beat: BeatView | None = None
        self._answered_beat = -1
        self._entry_beat: BeatView | None = None
        self._entered = ""

    # ------------------------------------------------------------------ what there is

    @property
    def state(self) -> RunState:
        return self._tally.state

    @property
    def readings(self) -> Readings:
        return self._tally.state.readings

    @property
    def on_beat(self) -> bool:
        return self.setup.recording.mode == "beat"

    @property
    def digits(self) -> int:
        """How many last digits are typed: the whole kelvins' last one and the decimals of the display."""
        step = Decimal(repr(self.setup.thermometer.resolution_K)).normalize()
        return 1 + max(0, -int(step.as_tuple().exponent))

    def pad(self) -> PadView:
        """The run as the pad shows it."""
        view = self._tally.view
        started = view.state != "waiting" or (self.on_beat and self._newest_beat is not None)
        question = view.question
        return PadView(
            run=self.run,
            kind=self.kind,
            mode=self.setup.recording.mode,
            state="running" if started and view.state == "waiting" else view.state,
            shown_C=view.shown_C,
            next_C=view.next_C,
            resolution_K=self.setup.thermometer.resolution_K,
            readings=view.readings,
            elapsed_from_s=view.first_stamp_s,
            can_undo=view.can_undo or question is not None,
            marks=view.marks,
            start_C=self.state.rows[0].reading_C if self.state.rows else self.start_C,
            floor_C=self.setup.air.temperature_C,
            beat_s=self.setup.recording.beat_s,
            digits=self.digits,
            entered=self._entered,
            question_C=question.candidates_C if question else (),
        )

    # ------------------------------------------------------------------ what a person does

    def contact(self, stamp: Stamp) -> Felt:
        """The pad or an outside key: the first reading, one step down, or the start of the beat."""
        if self.on_beat:
            if self._newest_beat is not None or self._tally.view.state != "waiting":
                return Felt(False)
            self._newest_beat = BeatView(-4, stamp.time_s, self.setup.recording.beat_s)
            self._beats.start(self.setup.recording.beat_s)
            return self._feel(Confirmed(-1, None), stamp)
        if self._tally.view.state == "waiting":
            return self._feel(self._tally.first(self.start_C, stamp.time_s), stamp)
        return self._feel(self._tally.tap(stamp.time_s), stamp)

    def step(self, count: int, stamp: Stamp) -> Felt:
        return self._feel(self._tally.tap(stamp.time_s, count), stamp)

    def typed(self, reading_C: float, stamp: Stamp) -> Felt:
        return self._feel(self._tally.typed(reading_C, stamp.time_s), stamp)

    def mark(self, name: str, stamp: Stamp) -> Felt:
        return self._feel(self._tally.mark(name, stamp.time_s), stamp)

    def undo(self, stamp: Stamp) -> Felt:
        """Take back: first a digit half entered, then an open question, then the last entry."""
        if self._entered:
            self._entered = self._entered[:-1]
            self._changed()
            return Felt(False)
        return self._feel(self._tally.undo(stamp.time_s), stamp)

    def end(self) -> None:
        self._beats.stop()
        self._tally.end(self._device.clock.now_s(), self._device.clock.slept_s())

    # ------------------------------------------------------------------ beat

    def go_on(self) -> None:
        """After the app was stopped, the beat falls in again with the readings that there are."""
        rows = self._tally.state.rows
        if self.on_beat and rows:
            self._newest_beat = BeatView(-1, rows[-1].stamp_s, self.setup.recording.beat_s)
            self._beats.start(self.setup.recording.beat_s, rows[0].stamp_s)

    def beat(self, beat: BeatView) -> None:
        """A beat has sounded; one before it that was passed over is noted as such."""
        before = self._newest_beat
        self._newest_beat = beat
        if before is not None and before.index > self._answered_beat and self._entry_beat is None:
            self._tally.skip(before.at_s)
            self._answered_beat = before.index
        self._changed()

    def digit(self, name: str, stamp: Stamp) -> Felt:
        """One more of the last digits; they belong to the beat that was the newest at the first of them."""
        beat = self._newest_beat
        if beat is None or beat.index < 0:
            return self._feel(Refused("early", ""), stamp)
        if not self._entered:
            if beat.index <= self._answered_beat:
                return self._feel(Refused("order", "This beat has its reading; wait for the next one."), stamp)
            self._entry_beat = beat
        self._entered += name
        if len(self._entered) < self.digits:
            self._changed()
            return self._quietly()
        digits, self._entered = self._entered, ""
        return self._feel(self._take_digits(digits), stamp)

    def _take_digits(self, digits: str) -> Outcome:
        entry = self._entry_beat
        self._entry_beat = None
        if entry is None:
            return Refused("early", "")
        self._answered_beat = entry.index
        if self._tally.state.rows:
            return self._tally.last_digits(digits, entry.at_s)
        first_C = nearest(digits, self.start_C, self.setup.thermometer.resolution_K)
        if first_C is None:
            return Refused("entry", "")
        return self._tally.first(first_C, entry.at_s)

    def skip_beat(self, stamp: Stamp) -> Felt:
        beat = self._newest_beat
        self._entered, self._entry_beat = "", None
        if beat is None or beat.index <= self._answered_beat:
            self._changed()
            return Felt(False)
        self._answered_beat = beat.index
        return self._feel(self._tally.skip(beat.at_s), stamp)

    def answer_question(self, reading_C: float, stamp: Stamp) -> Felt:
        return self._feel(self._tally.answer(reading_C), stamp)

    # ------------------------------------------------------------------ what a person feels

    def _quietly(self) -> Felt:
        if self.preferences.vibration:
            self._device.haptics.confirm()
        return Felt(True)

    def _feel(self, outcome: Outcome, stamp: Stamp) -> Felt:
        """Sound and vibration come only after the journal holds it; a refusal is felt to be different."""
        if isinstance(outcome, Confirmed):
            if self.preferences.click:
                self._device.sounds.play("confirm")
            if self.preferences.vibration:
                self._device.haptics.confirm()
            trace("tap", stamp=stamp.time_s, source=stamp.source, reading=outcome.reading_C)
            self._changed()
            return Felt(True)
        if isinstance(outcome, Question):
            self._changed()
            return Felt(True)
        trace("refused", stamp=stamp.time_s, reason=outcome.reason)
        if outcome.reason in SILENT:
            return Felt(False)
        if self.preferences.click:
            self._device.sounds.play("refuse")
        if self.preferences.vibration:
            self._device.haptics.refuse()
        self._changed()
        return Felt(False, outcome.sentence)
