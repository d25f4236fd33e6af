"""The state behind the screens: the journal, the session at hand, its runs and their answers.

Screens read frozen views and call methods; everything slow is done by the worker and delivered by the loop."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from typing import Any

from kivy.clock import Clock
from kivy.event import EventDispatcher
from kivy.properties import ObjectProperty, StringProperty

from core.bench.readings import Readings, Ruling
from core.bench.setup import Setup
from core.bench.setup_file import setup_to_text
from core.errors import BenchError, NoAnswer
from core.handover.session import ExportSession
from core.recording.events import (
    BenchDescribed,
    Decided,
    MeasuredAfter,
    Ruled,
    SessionOpened,
    StartMoved,
)
from core.recording.opening import open_journal
from mobileapp import preferences as kept_preferences
from mobileapp import rehearsing
from mobileapp.device.ports import Device
from mobileapp.figures import clock_time, number
from mobileapp.heating import Heating
from mobileapp.outward import exported, taken_in
from mobileapp.preferences import Preferences
from mobileapp.recorder import FORGOTTEN_S, Recorder
from mobileapp.records import Record, Records
from mobileapp.views import RunView, SessionView, TruthView
from mobileapp.words import _
from mobileapp.worker import LatestWorker

Then = Callable[[Any], None]
Failed = Callable[[str], None]


class Model(EventDispatcher):
    """One journal and one session at hand; `recorder` has the run that goes on."""

    preferences = ObjectProperty(Preferences())
    session: SessionView | None = ObjectProperty(None, allownone=True)
    sessions: tuple[SessionView, ...] = ObjectProperty(())
    next_speed = StringProperty("")
    notice = StringProperty("")

    def __init__(self, device: Device, liked: Preferences, **options: Any) -> None:
        super().__init__(**options)
        self.device = device
        self.preferences = liked
        self.ticked: set[str] = set()
        self.heating = Heating(device.clock)
        self._paused_s: float | None = None
        self._opened = open_journal(device.data, wall_time=device.clock.wall_iso())
        self._records = Records(self._opened.journal)
        self._worker = LatestWorker(lambda call: Clock.schedule_once(lambda _dt: call(), 0))
        self.recorder = Recorder(device, self._records, self._worker, liked)
        self._answers: dict[int, Any] = {}
        self._alone: dict[int, Any] = {}  # answers to runs that others are compared with
        self.notice = " ".join(self._opened.notes)
        opened = self._records.sessions()
        if opened:
            self.open_session(str(opened[-1].session))
            self.notice = " ".join(filter(None, (self.notice, self.recorder.resume_open(opened[-1].session))))
            self._refresh()

    # ------------------------------------------------------------------ preferences

    def prefer(self, **changes: Any) -> None:
        """Change and keep what this person likes."""
        liked = replace(self.preferences, **changes)
        kept_preferences.write(self.device.data, liked)
        self.recorder.prefer(liked)
        self.preferences = liked

    # ------------------------------------------------------------------ sessions

    def new_session(self, title: str = "", invented: bool = False) -> int:
        """Begin a session; the bench of the one before is carried on."""
        setup = self.session.setup if self.session and not self.session.invented else None
        now = self.device.clock.wall_iso()
        title = title or _("Session of {day}").format(day=now[:16].replace("T", " "))
        session = self._records.open_session(SessionOpened(title, now, invented))
        if setup is not None:
            self._records.keep(session, None, BenchDescribed(setup_to_text(setup)))
        self.ticked = set()
        self.open_session(str(session))
        return session

    def open_session(self, session: str) -> None:
        """Bring a session to hand and have its answers worked out."""
        self.session = self._records.session_view(int(session), self._known_answer)
        self._list_sessions()
        for view in self.session.runs:
            if not view.open:
                self.ask_answer(view.run, self._answered, self._unanswered)

    def _list_sessions(self) -> None:
        opened = reversed(self._records.sessions())
        self.sessions = tuple(self._records.session_view(kept.session, None) for kept in opened)

    def _session_number(self) -> int:
        """The session that takes what a person does now; the invented one stays as it is."""
        if self.session is None:
            return self.new_session()
        if self.session.invented:
            own = self.new_session()
            self.notice = _("The invented session stays as it is: a session of your own was begun.")
            return own
        return int(self.session.session)

    def _refresh(self) -> None:
        if self.session is not None:
            self.session = self._records.session_view(int(self.session.session), self._known_answer)

    def save_setup(self, setup: Setup) -> None:
        """The bench of the session from now on."""
        session = self._session_number()
        if self._records.session_setup(session) != setup:
            self._records.keep(session, None, BenchDescribed(setup_to_text(setup)))
        self._refresh()

    def open_demo(self) -> None:
        """The invented session that comes with the app; taken in once."""
        from core.demo.cabinet_bench import FOLDER
        from core.handover.export import read_session

        for kept in self._records.sessions():
            if kept.event.invented:
                self.open_session(str(kept.session))
                return
        self.take_in(read_session(FOLDER), invented=True)

    def take_in(self, session: ExportSession, invented: bool = False) -> None:
        """Take a session that was exported elsewhere into the journal, as a session of its own."""
        opening = SessionOpened(session.name, self.device.clock.wall_iso(), invented)
        session_number = self._records.open_session(opening)
        if session.runs:
            self._records.keep(session_number, None, BenchDescribed(setup_to_text(session.runs[-1].setup)))
        for run in session.runs:
            opened, events = taken_in(run)
            self._records.keep_all(session_number, self._records.open_run(session_number, opened), events)
        self.open_session(str(session_number))

    # ------------------------------------------------------------------ runs

    def _record(self, run: str) -> Record:
        return self._records.run(int(run))

    def run_view(self, run: str) -> RunView | None:
        return self._record(run).view(self._known_answer(int(run))) if run else None

    def run_title(self, run: str) -> str:
        record = self._record(run)
        name = _("Rehearsal {number}") if record.kind == "rehearsal" else _("Run {number}")
        speed = record.velocity_m_s
        return name.format(number=record.number) + (f" · {number(speed, 1)} m/s" if speed is not None else "")

    def readings_of(self, run: str) -> Readings:
        return self._record(run).state.readings

    def setup_of(self, run: str) -> Setup:
        return self._record(run).setup

    def rulings_of(self, run: str) -> tuple[Ruling, ...]:
        return self._record(run).state.rulings

    def start_of(self, run: str) -> float | None:
        return self._record(run).state.start_s

    def _note(self, run: str, event: Any) -> None:
        self._records.keep(self._record(run).session, int(run), event)
        self._refresh()

    def note_after(self, run: str, velocity_m_s: float | None, temperature_C: float | None) -> None:
        self._note(run, MeasuredAfter(temperature_C, velocity_m_s))

    def decide(self, run: str, decision: str, reason: str = "") -> None:
        self._note(run, Decided(decision, reason))

    def move_start(self, run: str, start_s: float | None) -> None:
        self._note(run, StartMoved(start_s))

    def rule(self, run: str, row: int, keep: bool) -> None:
        self._note(run, Ruled(row, keep))

    def redescribe(self, run: str, setup: Setup) -> None:
        """Judge one run with another set-up, as after a slip in the bench."""
        self._note(run, BenchDescribed(setup_to_text(setup)))

    def asks_after(self, run: str) -> bool:
        return self._record(run).kind in ("measured", "still-air")

    # ------------------------------------------------------------------ answers

    def ask(self, topic: str, work: Callable[[], Any], then: Then, failed: Failed) -> None:
        """Have something slow done off the input path."""
        self._worker.ask(topic, work, then, failed)

    def _answer_key(self, run: int) -> tuple[Any, ...]:
        """All that the answer to a run comes from: its own record, and the versions of those that it is held
        against."""
        return *_own_key(self._records.run(run)), *((one.run, len(one.events)) for one in self._beside(run))

    def _beside(self, run: int) -> list[Record]:
        """The runs before one that it is compared with, as on the laptop."""
        record = self._records.run(run)
        own = exported(record, False, None)
        before = self._records.runs(record.session)[: record.number - 1]
        pairs = [(one, exported(one, False, None)) for one in before]
        return [one for one, there in pairs if own and there and own.stands_beside(there)]

    def _known_answer(self, run: int) -> Any:
        known = self._answers.get(run)
        return known[1] if known and known[0] == self._answer_key(run) else None

    def ask_answer(self, run: str, then: Then, failed: Failed) -> None:
        """The answer to a run, worked out once for as long as nothing about the run changes."""
        key = self._answer_key(int(run))
        known = self._known_answer(int(run))
        if known is not None:
            then(known)
            return
        own, beside = _own_key(self._record(run)), [(one.run, _own_key(one)) for one in self._beside(int(run))]

        def work() -> Any:
            from core.handover.recompute import answer_to

            earlier = []
            for number_of, key_of in beside:
                if self._alone.get(number_of, ((),))[0] != key_of:
                    try:
                        self._alone[number_of] = (key_of, answer_to(*key_of))
                    except BenchError:
                        self._alone[number_of] = (key_of, None)
                earlier.append(self._alone[number_of][1])
            return answer_to(*own, earlier=[one for one in earlier if one is not None])

        def keep(answer: Any) -> None:
            self._answers[int(run)] = (key, answer)
            self._refresh()
            then(answer)

        self.ask(f"answer {run}", work, keep, failed)

    def ask_stem_loss(self, answer: Any, then: Then, failed: Failed) -> None:
        """What holder and stem carry off, out of the answer to a run in still air."""

        def work() -> Any:
            from core.judgement.stem import stem_loss

            return stem_loss(answer.fit, answer.setup)

        self.ask("stem loss", work, then, failed)

    def adopt_stem_loss(self, stem: Any) -> None:
        """The bench takes over a measured stem loss with its uncertainty."""
        setup = self.session.setup if self.session else None
        if setup is not None:
            loss, u = float(f"{stem.loss_W_K:.4g}"), float(f"{stem.u_W_K:.3g}")
            self.save_setup(replace(setup, body=replace(setup.body, stem_loss_W_K=loss, stem_loss_u_W_K=u)))

    def _answered(self, _answer: Any) -> None:
        """An answer of the list has come; once it is the last one, the next speed can be advised."""
        if self.session and all(run.open or run.h_W_m2K is not None for run in self.session.runs):
            self.ask_series(self._advise, self._unanswered)

    def _unanswered(self, _sentence: str) -> None:
        """The list shows a dash; the run itself says why."""

    def _advise(self, result: Any) -> None:
        series, _left_out = result
        self.next_speed = number(series.next_velocity_m_s, 1)

    def ask_expectation(self, setup: Setup, then: Then, failed: Failed) -> None:
        def work() -> Any:
            from core.judgement.expect import expect

            return expect(setup)

        self.ask("expectation", work, then, failed)

    def ask_series(self, then: Then, failed: Failed) -> None:
        """The law over the session at hand, with the runs left out of it."""
        session = self.export_session()

        def work() -> Any:
            from core.handover.recompute import law_over

            return law_over(session, [run.answer or NoAnswer("It has no answer.") for run in session.runs])

        self.ask("series", work, then, failed)

    def export_session(self) -> ExportSession:
        """The session at hand on plain values, with the answers known so far."""
        view = self.session
        if view is None:
            return ExportSession("", ())
        records = self._records.runs(int(view.session))
        runs = (exported(record, view.invented, self._known_answer(record.run)) for record in records)
        return ExportSession(view.title, tuple(run for run in runs if run is not None))

    def touch_safe_s(self, run: str) -> float | None:
        """Seconds until the body of a run just made can be touched; None where nobody can know."""
        record, answer = self._record(run), self._known_answer(int(run))
        rows = record.state.rows
        if answer is None or not rows or record.kind == "rehearsal":
            return None
        since_s = self.device.clock.now_s() - rows[-1].stamp_s
        if not 0 <= since_s < FORGOTTEN_S:
            return None
        air_C = record.setup.air.temperature_C
        from core.judgement.guidance import touch_safe_in_s

        left = touch_safe_in_s(rows[-1].reading_C, air_C, answer.time_constant_s)
        return None if left is None else max(0.0, left - since_s)

    # ------------------------------------------------------------------ the run that goes on

    def begin_run(self, setup: Setup) -> None:
        """Open a measured run and take it to the pad."""
        self.recorder.begin(self._session_number(), setup)
        self._refresh()

    def begin_rehearsal(self, own_bench: bool, mode: str) -> None:
        session = self._session_number()
        bench = self.session.setup if own_bench and self.session else None
        self.recorder.begin_rehearsal(session, bench, mode)
        self._refresh()

    def end_run(self) -> str | None:
        """The run is over; returns it, or None where there is nothing to answer."""
        run = self.recorder.end()
        rows = self._record(run).state.rows if run else ()
        self.heating.end(rows[0].stamp_s if rows else None)
        self._refresh()
        return run

    # ------------------------------------------------------------------ rehearsal

    def rehearsal_truth(self, run: str) -> TruthView | None:
        record = self._record(run)
        return rehearsing.truth_view(record.state, record.setup)

    def adopt_habit(self, run: str) -> None:
        """The bench takes over the delay and scatter of this person's tap."""
        truth = self.rehearsal_truth(run)
        setup = self.session.setup if self.session else None
        if truth is None or truth.lag_s is None or truth.jitter_s is None or setup is None:
            return
        habit = replace(
            setup.recording,
            tap_lag_s=round(truth.lag_s, 4),
            tap_jitter_s=round(truth.jitter_s, 4),
            tap_lag_u_s=round(truth.lag_u_s or 0.0, 4),
        )
        self.save_setup(replace(setup, recording=habit))

    # ------------------------------------------------------------------ device

    def tick(self, name: str, on: bool) -> None:
        """A caution is ticked for this bench, for as long as this session is at hand."""
        (self.ticked.add if on else self.ticked.discard)(name)

    def watch_screen(self, on: bool) -> None:
        self.device.screen.keep_on(on)

    def pause(self) -> None:
        """The app goes to the background: stamps heard by now belong to nothing that comes later."""
        self.device.stamps.forget()
        self._paused_s = self.device.clock.now_s()

    def resume(self) -> None:
        """A run is never silently continued after the app was away."""
        self.device.stamps.forget()
        if self.recorder.pad is not None and self._paused_s is not None:
            away = clock_time(self.device.clock.now_s() - self._paused_s)
            gone = _("The app was away for {time}. The run goes on; readings missed meanwhile are simply missing.")
            self.notice = gone.format(time=away)

    def close(self) -> None:
        self._worker.close()
        self._opened.close()


def _own_key(record: Record) -> tuple[Any, ...]:
    return record.state.readings, record.setup, record.state.rulings, record.state.start_s
