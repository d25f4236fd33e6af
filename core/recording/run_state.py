"""What the events of one run add up to. Nothing here is stored: it is derived anew from the events."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace

from core.bench.readings import Readings, Ruling
from core.recording.events import (
    BeatSkipped,
    BenchDescribed,
    Decided,
    Kept,
    Marked,
    MeasuredAfter,
    Ruled,
    RunEnded,
    RunOpened,
    StartMoved,
    Tapped,
    Typed,
    Undone,
)

Entry = Tapped | Typed | BeatSkipped | Marked

SAME_MOMENT_S = 2e-6
"""Two stamps closer than this are one moment: readings are written with whole microseconds."""


@dataclass(frozen=True, slots=True)
class Row:
    """One reading: the moment [s, monotonic clock], the number [°C], and the number of its event."""

    stamp_s: float
    reading_C: float
    event: int


@dataclass(frozen=True, slots=True)
class RunState:
    """One run, derived. `rows` are the readings that count, in order of time."""

    opened: RunOpened | None
    setup_toml: str
    rows: tuple[Row, ...]
    marks: tuple[Marked, ...]
    skipped: int
    ended: bool
    slept: bool
    after: MeasuredAfter | None
    decision: Decided | None
    rulings: tuple[Ruling, ...]
    start_s: float | None
    undoable: tuple[int, ...]

    @property
    def readings(self) -> Readings:
        """The readings with time from the first of them."""
        first = self.rows[0].stamp_s if self.rows else 0.0
        return Readings(
            tuple(round(row.stamp_s - first, 6) for row in self.rows),
            tuple(row.reading_C for row in self.rows),
            self.opened.stamp_halfwidth_s if self.opened else 0.0,
        )


def derive(events: Sequence[Kept], resolution_K: float) -> RunState:
    """The state of a run from its events, in the order in which they were kept.

    A tap counts down from the reading before it in time, so a number entered late for an earlier stamp moves
    the taps after it. Of rows with the same stamp only the one kept last counts.

    Parameters
    ----------
    events : the events of one run
    resolution_K : step of the display [K]
    """
    gone = {one.event.event for one in events if isinstance(one.event, Undone)}
    living = [one for one in events if one.number not in gone]
    entries = [one for one in living if isinstance(one.event, Tapped | Typed | BeatSkipped | Marked)]
    opened: RunOpened | None = None
    setup_toml, ended, slept = "", False, False
    after: MeasuredAfter | None = None
    decision: Decided | None = None
    rulings: dict[int, Ruling] = {}
    start_s: float | None = None
    for one in living:
        event = one.event
        if isinstance(event, RunOpened):
            opened, setup_toml = event, event.setup_toml
        elif isinstance(event, BenchDescribed):
            setup_toml = event.setup_toml
        elif isinstance(event, RunEnded):
            ended = True
            slept = opened is not None and event.slept_s > opened.slept_s
        elif isinstance(event, MeasuredAfter):
            after = event
        elif isinstance(event, Decided):
            decision = event
        elif isinstance(event, Ruled):
            rulings[event.row] = Ruling(event.row, event.keep)
        elif isinstance(event, StartMoved):
            start_s = event.start_s
    return RunState(
        opened=opened,
        setup_toml=setup_toml,
        rows=_rows(entries, resolution_K),
        marks=tuple(one.event for one in entries if isinstance(one.event, Marked)),
        skipped=sum(isinstance(one.event, BeatSkipped) for one in entries),
        ended=ended,
        slept=slept,
        after=after,
        decision=decision,
        rulings=tuple(rulings[row] for row in sorted(rulings)),
        start_s=start_s,
        undoable=tuple(one.number for one in entries),
    )


def advance(state: RunState, events: Sequence[Kept], resolution_K: float) -> RunState:
    """The state after the last of the events, where `state` is what all but the last add up to.

    It is what `derive` gives, without going through the whole run at every tap."""
    new = events[-1]
    event, rows = new.event, state.rows
    if not isinstance(event, Tapped | Typed) or not rows or event.stamp_s - rows[-1].stamp_s < SAME_MOMENT_S:
        return derive(events, resolution_K)
    row = Row(event.stamp_s, _reading_C(event, rows[-1].reading_C, resolution_K), new.number)
    return replace(state, rows=(*rows, row), undoable=(*state.undoable, new.number))


def _rows(entries: Sequence[Kept], resolution_K: float) -> tuple[Row, ...]:
    timed = [(one.event, one.number) for one in entries if isinstance(one.event, Tapped | Typed)]
    timed.sort(key=lambda pair: (pair[0].stamp_s, pair[1]))
    rows: list[Row] = []
    for event, number in timed:
        if isinstance(event, Tapped) and not rows:
            continue
        reading = _reading_C(event, rows[-1].reading_C if rows else math.nan, resolution_K)
        if rows and event.stamp_s - rows[-1].stamp_s < SAME_MOMENT_S:
            rows.pop()
        rows.append(Row(event.stamp_s, reading, number))
    return tuple(rows)


def _reading_C(event: Tapped | Typed, before_C: float, resolution_K: float) -> float:
    if isinstance(event, Typed):
        return event.reading_C
    return step_down(before_C, event.steps, resolution_K)


def step_down(reading_C: float, steps: int, resolution_K: float) -> float:
    """The number `steps` display steps [of `resolution_K`] below a reading, on the display's own grid [°C]."""
    return round(reading_C - steps * resolution_K, 9)
