"""Home: the session at hand with its runs, and the way to everything else."""

from __future__ import annotations

from typing import Any

from kivy.clock import Clock
from kivy.properties import BooleanProperty, StringProperty

from mobileapp.labels import bench_line
from mobileapp.navigation import Page
from mobileapp.widgets import badge, basics  # noqa: F401  the .kv of this screen uses them
from mobileapp.widgets.basics import PlainPress, SmallWords
from mobileapp.widgets.run_row import RunListHead, RunRow, rows_for
from mobileapp.words import _

SHOWN_EVERY_S = 0.15
NEWEST = 10  # runs that are listed until somebody wants the earlier ones too


class HomeScreen(Page):
    """Runs of the session, newest first; older sessions below."""

    session_title = StringProperty("")
    bench_words = StringProperty("")
    next_words = StringProperty("")
    has_bench = BooleanProperty(False)
    has_runs = BooleanProperty(False)
    invented = BooleanProperty(False)
    all_runs = BooleanProperty(False)
    notice = StringProperty("")

    def __init__(self, **options: Any) -> None:
        super().__init__(**options)
        self._show_soon = Clock.create_trigger(self._show, SHOWN_EVERY_S)

    def arrive(self, **_aim: Any) -> None:
        self.model.bind(session=self._later, sessions=self._later, next_speed=self._later, notice=self._tell)
        self._show()
        self._tell()

    def leave(self) -> None:
        self.all_runs = False
        self.model.unbind(session=self._later, sessions=self._later, next_speed=self._later, notice=self._tell)
        self.model.notice = ""

    def _later(self, *_args: Any) -> None:
        """Answers of a long session come one by one; the list is drawn anew a few times a second at most."""
        self._show_soon()

    def _tell(self, *_args: Any) -> None:
        self.notice = self.model.notice

    def _show(self, *_args: Any) -> None:
        session = self.model.session
        self.has_bench = session is not None and session.setup is not None
        self.has_runs = session is not None and bool(session.runs)
        self.invented = session is not None and session.invented
        self.session_title = session.title if session else _("No session yet")
        unsaid = _("Say what stands on your bench first.")
        self.bench_words = bench_line(session.setup) if self.has_bench else unsaid
        speed = self.model.next_speed
        self.next_words = speed and _("A good next speed: about {speed} m/s.").format(speed=speed)
        self._list_runs(session)
        self._list_sessions()

    def _list_runs(self, session: Any) -> None:
        box = self.ids.runs
        runs = list(reversed(session.runs)) if self.has_runs else []
        earlier = 0 if self.all_runs else max(0, len(runs) - NEWEST)
        self.ids.earlier.text = _("Earlier runs: {count}").format(count=earlier)
        self.ids.more.shown = earlier > 0
        rows = rows_for(runs[: len(runs) - earlier])
        shown = [child for child in reversed(box.children) if isinstance(child, RunRow)]
        if rows and [row.run for row in rows] == [row.run for row in shown]:
            for old, fresh in zip(shown, rows, strict=True):
                old.take_over(fresh)
            return
        box.clear_widgets()
        if not rows:
            return
        box.add_widget(RunListHead())
        for row in rows:
            row.bind(on_release=lambda pressed: self.open_run(pressed.run))
            box.add_widget(row)

    def _list_sessions(self) -> None:
        box = self.ids.sessions
        box.clear_widgets()
        current = self.model.session.session if self.model.session else ""
        others = [s for s in self.model.sessions if s.session != current]
        if others:
            box.add_widget(SmallWords(text=_("Other sessions")))
        for session in others:
            mark = _("invented") + " · " if session.invented else ""
            small = int(0.8 * self.ids.bench.font_size)
            button = PlainPress(text=f"{session.title}\n[size={small}]{mark}{session.started[:10]}[/size]")
            button.bind(on_release=lambda _button, key=session.session: self.model.open_session(key))
            box.add_widget(button)

    def show_all(self) -> None:
        """List the earlier runs too."""
        self.all_runs = True
        self._show()

    def open_run(self, run: str) -> None:
        self.go("answer", run=run)

    def start(self) -> None:
        """The next run, by way of the bench where there is none."""
        self.go("before" if self.has_bench else "bench")
