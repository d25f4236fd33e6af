"""Readings from elsewhere: a logger's table becomes a run by a small mapping, an exported folder a session."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from pathlib import Path
from typing import Any

from kivy.clock import Clock
from kivy.properties import BooleanProperty, NumericProperty, StringProperty

from core.errors import BadReadings, BenchError
from core.handover.csv_text import read_bytes
from core.handover.export import is_export, read_session
from core.handover.import_log import DELIMITERS, TIME_FORMS, UNITS, Mapping, guess_mapping, log_text, preview
from core.handover.session import ExportRun, ExportSession
from mobileapp.device.find import on_android
from mobileapp.device.places import find_places
from mobileapp.figures import number
from mobileapp.navigation import Page
from mobileapp.trace import trace
from mobileapp.widgets import basics, folder_list, plot  # noqa: F401  the .kv of this screen uses them
from mobileapp.widgets.basics import ChoicePress
from mobileapp.widgets.grid_table import Column
from mobileapp.widgets.plot import Marks
from mobileapp.words import _, say

SUFFIXES = [".csv", ".txt", ".tsv", ".log", ".dat"]
SHOWN_ROWS = 6
SHOWN_COLUMNS = 12
LARGEST = 8_000_000  # bytes: some hundred thousand readings; more is for the laptop


class IntakeScreen(Page):
    """Choose a file, look at what is made of it, mend the mapping, take it in."""

    file_name = StringProperty("")
    table_told = StringProperty("")
    fault = StringProperty("")
    told = StringProperty("")
    done_text = StringProperty("")
    has_file = BooleanProperty(False)
    ready = BooleanProperty(False)
    has_bench = BooleanProperty(False)
    export_here = BooleanProperty(False)
    clock = BooleanProperty(False)
    mode = StringProperty("change")
    shown_columns = NumericProperty(1)

    def __init__(self, **options: Any) -> None:
        super().__init__(**options)
        self.mapping = Mapping()
        self.text = ""
        self._readings: Any = None
        self._look_soon = Clock.create_trigger(self._look, 0)

    def arrive(self, **_aim: Any) -> None:
        self.has_bench = bool(self.model.session and self.model.session.setup)
        self.has_file = self.ready = False
        self.done_text = self.fault = ""
        if self.has_bench:
            self.mode = self.model.session.setup.recording.mode
        folders = self.ids.folders
        folders.suffixes = SUFFIXES
        folders.bind(folder=self._came_to)
        if not folders.folder:
            folders.open(find_places(on_android())[0].path.parent)
        self._came_to(folders, folders.folder)

    def hold_back(self) -> bool:
        """Back from the mapping leads to the choice of a file first."""
        if self.has_file:
            self.has_file = False
            return True
        return False

    def _came_to(self, _folders: Any, folder: str) -> None:
        self.export_here = bool(folder) and is_export(Path(folder))

    # ------------------------------------------------------------------ an exported session

    def take_session(self) -> None:
        """Take the exported folder in as a session of its own."""
        try:
            session = read_session(Path(self.ids.folders.folder))
        except BenchError as refusal:
            self.fault = say(str(refusal))
            return
        self.model.take_in(session)
        trace("taken in", runs=len(session.runs))
        self.go("home")

    # ------------------------------------------------------------------ a logger's table

    def open_file(self, path: str) -> None:
        """Read a table and propose a mapping."""
        self.fault = self.done_text = ""
        name = Path(path).name
        try:
            self.text = log_text(read_bytes(Path(path), LARGEST), name)
        except BadReadings as refusal:
            self.fault = say(str(refusal))
            return
        self.file_name = name
        self.mapping = guess_mapping(self.text)
        self.has_file = True
        self.ids.page.scroll_y = 1
        self._build_choices()
        self._look()
        trace("table", file=name, readable=self._readings is not None)

    def change(self, **parts: Any) -> None:
        """Read the table in another way."""
        self.mapping = replace(self.mapping, **parts)
        self._build_choices()
        self._look_soon()

    def step_first_line(self, by: int) -> None:
        self.change(first_line=max(1, self.mapping.first_line + by))

    def take_mode(self, mode: str) -> None:
        self.mode = mode
        self._look_soon()

    def _build_choices(self) -> None:
        mapping = self.mapping
        self.clock = mapping.time == "clock"
        delimiters = {name: _delimiter_label(name) for name in DELIMITERS}
        self._choices("delimiters", delimiters, mapping.delimiter, "delimiter")
        self._choices("decimals", {".": "3.14", ",": "3,14"}, mapping.decimal, "decimal")
        forms = {**{form: form for form in TIME_FORMS}, "clock": _("Time of day")}
        self._choices("times", forms, mapping.time, "time")
        orders = {"ymd": _("year month day"), "dmy": _("day month year"), "mdy": _("month day year")}
        self._choices("orders", orders if self.clock else {}, mapping.date_order, "date_order")
        units = {unit: "K" if unit == "K" else f"°{unit}" for unit in UNITS}
        self._choices("units", units, mapping.unit, "unit")

    def _choices(self, box_name: str, words: dict[Any, str], chosen: Any, key: str) -> None:
        box = self.ids[box_name]
        box.clear_widgets()
        for value, word in words.items():
            button = ChoicePress(text=word, chosen=value == chosen)
            button.bind(on_release=lambda _button, v=value: self.change(**{key: v}))
            box.add_widget(button)

    # ------------------------------------------------------------------ what the mapping makes of it

    def _look(self, *_args: Any) -> None:
        seen = preview(self.text, self.mapping, self.mode, self.file_name, SHOWN_ROWS)
        self._show_table(seen.names, seen.rows)
        self._readings = seen.readings
        self.ready = seen.readings is not None and self.has_bench
        self.table_told = _("The first reading stands in line {line}.").format(line=self.mapping.first_line)
        if seen.readings is None:
            self.fault, self.told = say(seen.fault), ""
            self.ids.picture.show()
            return
        self.fault = ""
        times, shown = seen.readings.time_s, seen.readings.reading_C
        self.told = _("{count} readings over {time} s, from {first} to {last} °C.").format(
            count=len(times), time=number(times[-1], 0), first=number(shown[0], 1), last=number(shown[-1], 1)
        )
        self.ids.picture.view = None
        self.ids.picture.show(Marks(list(zip(times, shown, strict=True)), radius_dp=2.5))

    def _show_table(self, names: Sequence[str], rows: Sequence[Sequence[str]]) -> None:
        width = min(max((len(row) for row in rows), default=len(names)), SHOWN_COLUMNS)
        self.shown_columns = width
        self._roles(width)
        columns = [
            Column(
                names[i] if i < len(names) else "",
                [row[i] if i < len(row) else "" for row in rows],
                numeric=False,
            )
            for i in range(width)
        ]
        if columns:
            self.ids.table.show(columns)
        else:
            self.ids.table.clear_widgets()

    def _roles(self, width: int) -> None:
        """Over each column a button with what it is taken for; a touch gives it the next role."""
        box = self.ids.roles
        box.clear_widgets()
        for column in range(1, width + 1):
            role = self._role(column)
            button = ChoicePress(text=_role_label(role), chosen=bool(role))
            button.bind(on_release=lambda _button, c=column, r=role: self._next_role(c, r))
            box.add_widget(button)

    def _role(self, column: int) -> str:
        mapping = self.mapping
        roles = {mapping.time_column: "time", mapping.date_column: "date", mapping.reading_column: "reading"}
        return roles.get(column, "")

    def _next_role(self, column: int, role: str) -> None:
        """Time, reading, date where there are times of day; each role has one column and goes over to this one."""
        order = ["time", "reading", "date"] if self.clock else ["time", "reading"]
        following = order[(order.index(role) + 1) % len(order)] if role in order else order[0]
        parts: dict[str, int] = {f"{following}_column": column}
        if role:
            # the role that this column gives up goes to the column that held the new one
            held = getattr(self.mapping, f"{following}_column")
            parts[f"{role}_column"] = held if held or role == "date" else column % 2 + 1
        self.change(**parts)

    def take_in(self) -> None:
        """Make a run of it, judged with the bench of the session at hand."""
        setup = self.model.session.setup
        setup = replace(setup, recording=replace(setup.recording, mode=self.mode))
        run = ExportRun(
            run="1",
            kind="imported",
            setup=setup,
            readings=self._readings,
            name=self.file_name,
            recorded_at="",
            stamp_source=_("taken in from {file}").format(file=self.file_name),
        )
        self.model.take_in(ExportSession(self.file_name, (run,)))
        trace("taken in", runs=1)
        self.go("home")


def _delimiter_label(name: str) -> str:
    return {",": _("Comma"), ";": _("Semicolon"), "tab": _("Tab"), "|": "|"}[name]


def _role_label(role: str) -> str:
    return {"time": _("Time"), "date": _("Date"), "reading": _("Reading")}.get(role, "–")
