"""After the run, at once: airspeed and air again, while the fan still runs."""

from __future__ import annotations

from typing import Any

from kivy.properties import StringProperty

from core.bench.setup_check import descriptions, value_fault
from core.errors import BadSetup
from mobileapp.labels import field_label
from mobileapp.navigation import Page
from mobileapp.widgets import basics  # noqa: F401  the .kv of this screen uses them
from mobileapp.widgets.entry import ValueEntry
from mobileapp.words import _, say

ASKED = (("flow", "velocity_end_m_s"), ("air", "temperature_end_C"))


class AfterScreen(Page):
    """Two values that show whether the bench held still; each may be left out."""

    run = StringProperty("")

    def arrive(self, run: str = "", **_aim: Any) -> None:
        self.run = run
        setup = self.model.setup_of(run)
        box = self.ids.entries
        box.clear_widgets()
        self.entries = []
        for section, key in ASKED:
            if section == "flow" and setup.recording.kind == "still-air":
                continue
            entry = ValueEntry(section, key, descriptions(section)[key], getattr(getattr(setup, section), key))
            before = {"flow": setup.flow.velocity_m_s, "air": setup.air.temperature_C}[section]
            if before is not None:
                entry.help_text = _("Before the run it was {value} {unit}.").format(
                    value=f"{before:g}", unit=descriptions(section)[key].unit
                )
                entry.help_open = True
            self.entries.append(entry)
            box.add_widget(entry)

    def done(self) -> None:
        values: dict[str, Any] = {}
        for entry in self.entries:
            entry.fault = ""
            try:
                value = entry.value()
                fault = None if value is None else value_fault(entry.description, value)
            except BadSetup as problem:
                entry.fault = say(str(problem))
                return
            if fault:
                entry.fault = f"{field_label(entry.section, entry.key)} {say(fault)}"
                return
            values[entry.key] = value
        self.model.note_after(self.run, values.get("velocity_end_m_s"), values.get("temperature_end_C"))
        self.onward()

    def onward(self) -> None:
        """To the answer, with or without the two values."""
        self.manager.trail = [("home", {})]
        self.go("answer", run=self.run)
