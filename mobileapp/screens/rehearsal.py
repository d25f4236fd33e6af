"""A rehearsal: the job with a simulated display on the same screen, and no hot rod."""

from __future__ import annotations

from typing import Any

from kivy.properties import BooleanProperty, StringProperty

from mobileapp.navigation import Page
from mobileapp.widgets import basics  # noqa: F401  the .kv of this screen uses them
from mobileapp.words import _


class RehearsalScreen(Page):
    """Choose what to rehearse; the true h is drawn by lot and told afterwards."""

    which = StringProperty("short")
    mode = StringProperty("change")
    has_bench = BooleanProperty(False)

    def arrive(self, **_aim: Any) -> None:
        session = self.model.session
        self.has_bench = session is not None and session.setup is not None
        if not self.has_bench:
            self.which = "short"

    def which_words(self, which: str) -> str:
        return {
            "short": _("A thin aluminium rod that cools in about a minute."),
            "own": _("Your own bench, as long as a real run takes."),
        }[which]

    def begin(self) -> None:
        self.model.begin_rehearsal(own_bench=self.which == "own", mode=self.mode)
        self.go("record")
