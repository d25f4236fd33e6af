"""A run of the journal as an exported one, and back."""

from __future__ import annotations

import json
from collections.abc import Sequence

from core.bench.setup_file import setup_to_text
from core.handover.session import ExportRun
from core.judgement.answer import Answer
from core.recording.events import Decided, Event, Ruled, RunEnded, RunOpened, StartMoved, Typed
from mobileapp.records import Record
from mobileapp.rehearsing import truth_of


def exported(record: Record, invented: bool, answer: Answer | None) -> ExportRun | None:
    """The run on plain values with the answer that the app shows; None where there is nothing to hand over."""
    state = record.state
    if state.opened is None or not state.rows:
        return None
    truth = truth_of(state.opened)
    return ExportRun(
        run=str(record.number),
        kind=record.kind,
        setup=record.setup,
        readings=state.readings,
        invented=invented,
        recorded_at=state.opened.wall_time,
        stamp_source=state.opened.stamp_source,
        rulings=state.rulings,
        start_s=state.start_s,
        decision=state.decision.decision if state.decision else "",
        decision_reason=state.decision.reason if state.decision else "",
        answer=answer,
        no_answer="" if answer else "Not fitted yet.",
        true_h_W_m2K=truth.h_W_m2K if truth else None,
    )


def taken_in(run: ExportRun) -> tuple[RunOpened, Sequence[Event]]:
    """The events that make a run of the journal out of an exported one."""
    times, readings = run.readings.time_s, run.readings.reading_C
    opened = RunOpened(
        run_kind="imported",
        setup_toml=setup_to_text(run.setup),
        wall_time=run.recorded_at,
        stamp_source=run.stamp_source,
        stamp_halfwidth_s=run.readings.stamp_halfwidth_s,
        truth="" if run.true_h_W_m2K is None else json.dumps({"h_W_m2K": run.true_h_W_m2K}),
    )
    events: list[Event] = [Typed(time_s, reading_C) for time_s, reading_C in zip(times, readings, strict=True)]
    events += [Ruled(ruling.row, ruling.keep) for ruling in run.rulings]
    if run.start_s is not None:
        events.append(StartMoved(run.start_s))
    events.append(RunEnded(times[-1] if times else 0.0))
    if run.decision:
        events.append(Decided(run.decision, run.decision_reason))
    return opened, events
