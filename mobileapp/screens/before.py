"""Before the run: airspeed and air now, what to expect, and the cautions to be ticked."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

from kivy.clock import Clock
from kivy.properties import BooleanProperty, StringProperty

from core.bench.setup import Setup
from core.bench.setup_check import VELOCITIES, descriptions, problems, value_fault
from core.errors import BadSetup
from mobileapp.cautions import CAUTIONS, NO_REPLACEMENT
from mobileapp.figures import clock_time, percent, significant
from mobileapp.labels import body_line, choice_label, field_label
from mobileapp.navigation import Page
from mobileapp.widgets.basics import ChoicePress, Tick
from mobileapp.widgets.entry import ValueEntry
from mobileapp.words import _, say

WAYS = VELOCITIES
ASKED_AGAIN_S = 0.4
HEATING_EVERY_S = 0.5


class BeforeScreen(Page):
    """Values that change from run to run are asked here; the rest is carried on from the bench."""

    body_text = StringProperty("")
    expectation = StringProperty("")
    advice = StringProperty("")
    trouble = StringProperty("")
    advised_mode = StringProperty("")
    mode = StringProperty("change")
    ticked_all = BooleanProperty(False)
    choosing_way = BooleanProperty(False)
    heating_words = StringProperty("")
    heating = BooleanProperty(False)

    def __init__(self, **options: Any) -> None:
        super().__init__(**options)
        self._way = "velocity_m_s"
        self._ask_soon = Clock.create_trigger(self._ask, ASKED_AGAIN_S)

    def arrive(self, **_aim: Any) -> None:
        self.setup: Setup = self.model.session.setup
        self.mode = self.setup.recording.mode
        self.body_text = body_line(self.setup)
        self._way = next((way for way in WAYS if getattr(self.setup.flow, way) not in (None, ())), "velocity_m_s")
        self._build_entries()
        self._build_cautions()
        self._ask()
        self._heat()
        self._heating_clock = Clock.schedule_interval(self._heat, HEATING_EVERY_S)

    def leave(self) -> None:
        self._heating_clock.cancel()

    # ------------------------------------------------------------------ the body in the water

    def begin_heating(self) -> None:
        self.model.heating.begin()
        self._heat()

    def _heat(self, *_args: Any) -> None:
        clock = self.model.heating
        self.heating, self.heating_words = clock.goes_on, clock.words()
        if clock.is_due() and self.model.preferences.click:
            self.model.device.sounds.play("done")

    # ------------------------------------------------------------------ what changes from run to run

    def _build_entries(self) -> None:
        box = self.ids.entries
        box.clear_widgets()
        flow = descriptions("flow")
        self.ids.ways.clear_widgets()
        for way in WAYS:
            button = ChoicePress(text=field_label("flow", way), chosen=way == self._way)
            button.bind(on_release=lambda _button, chosen=way: self._take_way(chosen))
            self.ids.ways.add_widget(button)
        self.speed = ValueEntry("flow", self._way, flow[self._way], getattr(self.setup.flow, self._way))
        self.air = ValueEntry(
            "air", "temperature_C", descriptions("air")["temperature_C"], self.setup.air.temperature_C
        )
        for entry in (self.speed, self.air):
            entry.bind(text=lambda *_args: self._ask_soon())
            box.add_widget(entry)

    def _take_way(self, way: str) -> None:
        self._way = way
        self.choosing_way = False
        self._build_entries()

    def take_mode(self, mode: str) -> None:
        self.mode = mode
        self._ask_soon()

    def _made(self) -> Setup | None:
        """The set-up of this run, or None with the fault beside its entry."""
        values = {}
        for entry in (self.speed, self.air):
            entry.fault = ""
            try:
                value = entry.value()
                fault = _("is needed") if value in (None, ()) else value_fault(entry.description, value)
            except BadSetup as problem:
                entry.fault = say(str(problem))
                return None
            if fault:
                entry.fault = f"{entry.label} {say(fault)}"
                return None
            values[entry.key] = value
        flow = replace(
            self.setup.flow,
            velocity_m_s=None,
            velocity_readings_m_s=(),
            dynamic_pressure_Pa=None,
            flow_m3_s=None,
            velocity_end_m_s=None,
        )
        made = replace(
            self.setup,
            flow=replace(flow, **{self._way: values[self._way]}),
            air=replace(self.setup.air, temperature_C=values["temperature_C"], temperature_end_C=None),
            recording=replace(self.setup.recording, mode=self.mode),
        )
        found = problems(made)
        if found:
            first = found[0]
            self.trouble = f"{field_label(first.section, first.key)} {say(first.fault)}"
            return None
        self.trouble = ""
        return made

    # ------------------------------------------------------------------ what to expect

    def _ask(self, *_args: Any) -> None:
        made = self._made()
        if made is not None:
            self.model.ask_expectation(made, self._expected, self._unexpected)

    def _expected(self, expected: Any) -> None:
        self.advised_mode = expected.mode
        lines = [
            _("h about {h} W/(m²·K), τ about {tau} s.").format(
                h=significant(expected.h_W_m2K, 2), tau=significant(expected.time_constant_s, 2)
            ),
            _("The run takes about {time} min; at first the display changes {rate} times a second.").format(
                time=clock_time(expected.run_length_s), rate=significant(expected.changes_per_s_start, 2)
            ),
        ]
        if expected.h_U95_rel is not None:
            lines.append(_("h will be sure to about ± {share}.").format(share=percent(expected.h_U95_rel, 1)))
        self.expectation = "\n".join(lines)
        self.advice = _("Advised: {mode}. {reason}").format(
            mode=choice_label(expected.mode), reason=say(expected.mode_reason)
        )

    def _unexpected(self, sentence: str) -> None:
        self.expectation, self.advice = say(sentence), ""

    # ------------------------------------------------------------------ cautions

    def _build_cautions(self) -> None:
        box = self.ids.cautions
        box.clear_widgets()
        ticked = self.model.ticked
        for caution in CAUTIONS:
            tick = Tick(text=f"[b]{_(caution.name)}[/b]  {_(caution.advice)}", ticked=caution.name in ticked)
            tick.bind(ticked=lambda _tick, on, name=caution.name: self._tick(name, on))
            box.add_widget(tick)
        self._count()

    def _tick(self, name: str, on: bool) -> None:
        self.model.tick(name, on)
        self._count()

    def _count(self) -> None:
        self.ticked_all = all(caution.name in self.model.ticked for caution in CAUTIONS)

    def no_replacement(self) -> str:
        return _(NO_REPLACEMENT)

    def begin(self) -> None:
        """To the pad."""
        made = self._made()
        if made is None:
            self.ids.page.scroll_y = 1
            return
        self.model.save_setup(made)
        self.model.begin_run(made)
        self.go("record")
