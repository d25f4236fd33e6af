"""Keep, look again, set aside with a reason: a person's word on a run."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from kivy.lang import Builder
from kivy.properties import BooleanProperty, StringProperty
from kivy.uix.boxlayout import BoxLayout

from mobileapp.widgets import entry  # noqa: F401  the .kv uses its line
from mobileapp.widgets.basics import PlainPress
from mobileapp.words import _, later

REASONS = (
    later("A slip of mine"),
    later("The bench was disturbed"),
    later("The display misbehaved"),
    later("Only a trial"),
)


class DecisionBar(BoxLayout):
    """Three buttons; setting aside asks why first."""

    decision = StringProperty("")
    asking = BooleanProperty(False)
    wide = BooleanProperty(True)
    __events__ = ("on_decided",)

    def on_decided(self, decision: str, reason: str) -> None:
        """The person has decided."""

    def ask(self) -> None:
        """Show the reasons to choose from."""
        self.asking = True
        box = self.ids.reasons
        box.clear_widgets()
        for reason in REASONS:
            button = PlainPress(text=_(reason))
            button.bind(on_release=lambda _button, why=reason: self.decide("discard", why))
            box.add_widget(button)

    def decide(self, decision: str, reason: str = "") -> None:
        self.asking = False
        self.dispatch("on_decided", decision, reason)

    def own_reason(self, *_args: Any) -> None:
        """Set aside for a reason in the person's own words."""
        words = self.ids.own.text.strip()
        if words:
            self.ids.own.text = ""
            self.decide("discard", words)


Builder.load_file(str(Path(__file__).with_suffix(".kv")))
