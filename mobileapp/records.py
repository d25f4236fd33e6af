"""The journal as views: sessions and runs, read once and kept until something new is written."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from functools import cached_property

from core.bench.setup import Setup
from core.bench.setup_file import setup_from_text
from core.convection.flow import velocity_before_m_s
from core.errors import BenchError
from core.judgement.answer import Answer
from core.recording.events import BenchDescribed, Event, Kept, RunOpened, SessionOpened, SessionRenamed
from core.recording.journal import Journal
from core.recording.run_state import RunState, derive
from mobileapp.views import RunView, SessionView


@dataclass(frozen=True)
class Record:
    """One run as the journal holds it, with the set-up that it is judged with."""

    run: int
    session: int
    number: int
    events: tuple[Kept, ...]

    @cached_property
    def opened_setup(self) -> Setup:
        toml = next(
            (one.event.setup_toml for one in reversed(self.events) if hasattr(one.event, "setup_toml")), ""
        )
        return setup_from_text(toml, f"run {self.number}")

    @cached_property
    def state(self) -> RunState:
        return derive(self.events, self.opened_setup.thermometer.resolution_K)

    @cached_property
    def setup(self) -> Setup:
        """The set-up with what was measured after the run."""
        setup, after = self.opened_setup, self.state.after
        if after is None:
            return setup
        return replace(
            setup,
            air=replace(setup.air, temperature_end_C=after.temperature_C),
            flow=replace(setup.flow, velocity_end_m_s=after.velocity_m_s),
        )

    @property
    def kind(self) -> str:
        return self.state.opened.run_kind if self.state.opened else "measured"

    @property
    def velocity_m_s(self) -> float | None:
        try:
            return velocity_before_m_s(self.setup)
        except BenchError:
            return None

    def view(self, answer: Answer | None) -> RunView:
        """The run as a line of a list."""
        state = self.state
        return RunView(
            run=str(self.run),
            number=self.number,
            kind=self.kind,
            mode=self.setup.recording.mode,
            started=state.opened.wall_time if state.opened else "",
            open=not state.ended,
            readings=len(state.rows),
            velocity_m_s=self.velocity_m_s,
            h_W_m2K=answer.h_W_m2K if answer else None,
            h_U95_W_m2K=answer.h_U95_W_m2K if answer else None,
            verdict=answer.verdict if answer else "",
            decision=state.decision.decision if state.decision else "",
            reason=state.decision.reason if state.decision else "",
        )


class Records:
    """Reads the journal; everything that is written goes through here, so that nothing is read twice."""

    def __init__(self, journal: Journal) -> None:
        self._journal = journal
        self._runs: dict[int, Record] = {}

    def keep(self, session: int, run: int | None, event: Event) -> Kept:
        """Write an event, durably, before anyone is told of it."""
        kept = self._journal.keep(session, run, event)
        if run is not None:
            self._runs.pop(run, None)
        return kept

    def keep_all(self, session: int, run: int, events: Sequence[Event]) -> None:
        """Write the events of a finished run, all or none."""
        self._journal.keep_all(session, run, events)
        self._runs.pop(run, None)

    def open_session(self, event: SessionOpened) -> int:
        """Begin a session; returns its number."""
        return self._journal.open_session(event).number

    def open_run(self, session: int, event: RunOpened) -> int:
        """Begin a run; returns its number."""
        return self._journal.open_run(session, event).number

    def sessions(self) -> tuple[Kept, ...]:
        return self._journal.sessions()

    def runs(self, session: int) -> list[Record]:
        return [self.run(kept.number) for kept in self._journal.runs(session)]

    def run(self, run: int) -> Record:
        """One run; its number counts from 1 within its session."""
        if run not in self._runs:
            events = self._journal.events(run=run)
            session = events[0].session
            order = [kept.number for kept in self._journal.runs(session)]
            self._runs[run] = Record(run, session, order.index(run) + 1, events)
        return self._runs[run]

    def session_setup(self, session: int) -> Setup | None:
        """The bench as it was described last in a session."""
        for kept in reversed(self._journal.events(session=session)):
            if kept.run is None and isinstance(kept.event, BenchDescribed):
                return setup_from_text(kept.event.setup_toml, "bench")
        return None

    def session_view(self, session: int, answer_to: Callable[[int], Answer | None] | None) -> SessionView:
        """A session with its runs, or without them where no answers are asked for."""
        own = [kept.event for kept in self._journal.events(session=session) if kept.run is None]
        opened = next(event for event in own if isinstance(event, SessionOpened))
        title = next((e.title for e in reversed(own) if isinstance(e, SessionRenamed | SessionOpened)), "")
        runs = () if answer_to is None else tuple(r.view(answer_to(r.run)) for r in self.runs(session))
        setup = self.session_setup(session) if answer_to is not None else None
        return SessionView(str(session), title, opened.wall_time, setup, opened.invented, runs)
