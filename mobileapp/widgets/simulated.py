"""The simulated thermometer of a rehearsal: a display that is renewed as a real one is."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from kivy.clock import Clock
from kivy.lang import Builder
from kivy.properties import ObjectProperty, StringProperty
from kivy.uix.boxlayout import BoxLayout

from mobileapp.trace import trace
from mobileapp.widgets import basics  # noqa: F401  the .kv of this widget uses them

LOOKED_AT_S = 1 / 100


class SimulatedDisplay(BoxLayout):
    """`source` tells the text of the display at this moment; None leaves the widget dark and small."""

    source = ObjectProperty(None, allownone=True)
    text = StringProperty("")

    def __init__(self, **options: Any) -> None:
        super().__init__(**options)
        self._event: Any = None
        self.bind(source=self._switch)

    def _switch(self, *_args: Any) -> None:
        if self._event is not None:
            self._event.cancel()
            self._event = None
        self.text = ""
        if self.source is not None:
            self._event = Clock.schedule_interval(self._look, LOOKED_AT_S)

    def _look(self, _dt: float) -> None:
        text = self.source() if self.source else ""
        if text != self.text:
            self.text = text
            trace("display", text=text)


Builder.load_file(str(Path(__file__).with_suffix(".kv")))
