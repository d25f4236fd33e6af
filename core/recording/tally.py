"""The tally: what a touch, a key or a typed number comes to. It knows no screen and no platform.

Every input that counts is kept by the journal before the tally says so; what is refused leaves no trace but its
reason."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from decimal import Decimal
from typing import Literal

from core.errors import JournalFault
from core.recording.completion import HIGHEST_C, LOWEST_C, complete
from core.recording.events import BeatSkipped, Event, Kept, Marked, RunEnded, Tapped, Typed, Undone
from core.recording.run_state import SAME_MOMENT_S, RunState, advance, derive, step_down

DEAD_TIME_S = 0.04
"""A second contact within this time of the last one is the same palm or glove. A finger that taps ten times a
second leaves 0.1 s between contacts, and a display renewed every 0.1 s still changes no faster; bouncing contacts
of one hand lie a few milliseconds apart (common practice: 5 to 20 ms for switches)."""

State = Literal["waiting", "running", "ended"]


@dataclass(frozen=True, slots=True)
class Confirmed:
    """Kept. `reading_C` is the reading that it made, None for a mark, a skip or an undo."""

    number: int
    reading_C: float | None


@dataclass(frozen=True, slots=True)
class Refused:
    """Not kept. `reason` is one word for the program, `sentence` for the person; empty where a palm is meant."""

    reason: Literal["contact", "early", "order", "ended", "range", "nothing", "entry", "journal"]
    sentence: str


@dataclass(frozen=True, slots=True)
class Question:
    """The last digits fit more than one number; the person says which."""

    stamp_s: float
    candidates_C: tuple[float, ...]


@dataclass(frozen=True, slots=True)
class TallyView:
    """The tally as a screen shows it. `next_C` is what a single tap would add."""

    state: State
    shown_C: float | None
    next_C: float | None
    readings: int
    first_stamp_s: float | None
    last_stamp_s: float | None
    can_undo: bool
    marks: tuple[str, ...]
    skipped: int
    question: Question | None


class Tally:
    """One run being recorded on a display with steps of `resolution_K` [K], renewed each `refresh_s` [s].

    `keep` writes an event durably and gives it back with its number, or raises JournalFault. `events` are those
    already kept, when a run goes on after the app was stopped."""

    def __init__(
        self,
        resolution_K: float,
        keep: Callable[[Event], Kept],
        events: tuple[Kept, ...] = (),
        refresh_s: float = 0.0,
    ) -> None:
        self._resolution_K, self._refresh_s = resolution_K, refresh_s
        self._keep = keep
        self._events = list(events)
        self._state = derive(self._events, resolution_K)
        self._last_contact_s: float | None = None
        self._question: Question | None = None

    @property
    def state(self) -> RunState:
        """The run as its events add up."""
        return self._state

    @property
    def view(self) -> TallyView:
        """The run as a screen shows it."""
        state = self.state
        rows = state.rows
        shown = rows[-1].reading_C if rows else None
        return TallyView(
            state="ended" if state.ended else "running" if rows else "waiting",
            shown_C=shown,
            next_C=None if shown is None else step_down(shown, 1, self._resolution_K),
            readings=len(rows),
            first_stamp_s=rows[0].stamp_s if rows else None,
            last_stamp_s=rows[-1].stamp_s if rows else None,
            can_undo=bool(state.undoable) and not state.ended,
            marks=tuple(mark.name for mark in state.marks),
            skipped=state.skipped,
            question=self._question,
        )

    def first(self, reading_C: float, stamp_s: float) -> Confirmed | Refused:
        """The run starts: the display shows `reading_C` [°C] at the stamp [s]."""
        if self.state.rows:
            return Refused("early", "The run has its first reading already.")
        return self._not_now(stamp_s, contact=True) or self.typed(reading_C, stamp_s)

    def tap(self, stamp_s: float, steps: int = 1) -> Confirmed | Refused:
        """The display went down by `steps` of its resolution at the stamp [s]."""
        if refusal := self._not_now(stamp_s, contact=True):
            return refusal
        rows = self.state.rows
        if not rows:
            return Refused("early", "Give the number on the display first; then tap at each change.")
        if steps < 1:
            return Refused("entry", "A tap counts one step down or more; type the number where the display rose.")
        if stamp_s - rows[-1].stamp_s < SAME_MOMENT_S:
            return Refused("order", "This tap would lie before the last reading; nothing was counted.")
        reading = step_down(rows[-1].reading_C, steps, self._resolution_K)
        if reading < LOWEST_C:
            return Refused("range", f"{reading:g} °C is below every display that is meant here.")
        return self._kept(Tapped(float(stamp_s), int(steps)), reading)

    def typed(self, reading_C: float, stamp_s: float) -> Confirmed | Refused:
        """The display showed `reading_C` [°C] at the stamp [s], now or earlier."""
        if refusal := self._not_now(stamp_s, contact=False):
            return refusal
        if not LOWEST_C <= reading_C <= HIGHEST_C:
            return Refused("range", f"{reading_C:g} °C cannot be: give {LOWEST_C:g} to {HIGHEST_C:g} °C.")
        if not self._on_grid(reading_C):
            return Refused(
                "entry", f"{reading_C:g} °C lies between two steps of the display ({self._resolution_K:g} K)."
            )
        return self._kept(Typed(float(stamp_s), float(reading_C)), reading_C)

    def last_digits(self, digits: str, stamp_s: float) -> Confirmed | Refused | Question:
        """The last digits of the display at a beat [s]; the rest follows from the readings before, or is asked."""
        if refusal := self._not_now(stamp_s, contact=False):
            return refusal
        rows = [row for row in self.state.rows if stamp_s - row.stamp_s >= SAME_MOMENT_S]
        if not (digits.isascii() and digits.isdigit()):
            return Refused("entry", "Only digits can be the last digits of a display.")
        if not rows:
            return Refused("early", "Give the whole number for the first beat; then the last digits are enough.")
        completion = complete(digits, rows, stamp_s, self._resolution_K, self._refresh_s)
        if not completion.candidates_C:
            return Refused("entry", f"This display shows no number ending with {digits}; type the whole number.")
        if completion.certain:
            return self.typed(completion.candidates_C[0], stamp_s)
        self._question = Question(stamp_s, completion.candidates_C)
        return self._question

    def answer(self, reading_C: float) -> Confirmed | Refused:
        """The person says which number was meant."""
        if self._question is None or reading_C not in self._question.candidates_C:
            return Refused("nothing", "There is no question open for this number.")
        stamp_s = self._question.stamp_s
        return self.typed(reading_C, stamp_s)

    def skip(self, stamp_s: float) -> Confirmed | Refused:
        """The beat at the stamp [s] passed without a reading."""
        return self._not_now(stamp_s, contact=False) or self._kept(BeatSkipped(stamp_s), None)

    def mark(self, name: str, stamp_s: float) -> Confirmed | Refused:
        """Note that something happened, such as `fan on`, at the stamp [s]."""
        return self._not_now(stamp_s, contact=False) or self._kept(Marked(stamp_s, name), None)

    def undo(self, stamp_s: float) -> Confirmed | Refused:
        """The last entry that still counts no longer does."""
        if refusal := self._not_now(stamp_s, contact=False):
            return refusal
        if self._question is not None:
            self._question = None
            return Refused("nothing", "The open question is dropped; nothing was counted for it.")
        undoable = self.state.undoable
        if not undoable:
            return Refused("nothing", "There is nothing to take back.")
        return self._kept(Undone(stamp_s, undoable[-1]), None)

    def end(self, stamp_s: float, slept_s: float = 0.0) -> Confirmed | Refused:
        """The run is over."""
        return self._not_now(stamp_s, contact=False) or self._kept(RunEnded(stamp_s, slept_s), None)

    def _not_now(self, stamp_s: float, *, contact: bool) -> Refused | None:
        if self.state.ended:
            return Refused("ended", "This run has ended; start the next one.")
        if not math.isfinite(stamp_s):
            return Refused("order", "The clock gave no time for this; nothing was counted.")
        if not contact:
            return None
        last, self._last_contact_s = self._last_contact_s, stamp_s
        if last is not None and 0.0 <= stamp_s - last < DEAD_TIME_S:
            return Refused("contact", "")
        return None

    def _on_grid(self, reading_C: float) -> bool:
        steps = Decimal(repr(float(reading_C))) / Decimal(repr(float(self._resolution_K)))
        return abs(steps - steps.to_integral_value()) < Decimal("1e-6")

    def _kept(self, event: Event, reading_C: float | None) -> Confirmed | Refused:
        try:
            kept = self._keep(event)
        except JournalFault as fault:
            return Refused("journal", str(fault))
        self._events.append(kept)
        self._state = advance(self._state, self._events, self._resolution_K)
        self._question = None
        return Confirmed(kept.number, reading_C)

