"""One run as a line of a list: number, speed, h with its uncertainty, verdict."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

from kivy.lang import Builder
from kivy.properties import BooleanProperty, StringProperty
from kivy.uix.behaviors import ButtonBehavior
from kivy.uix.boxlayout import BoxLayout

from mobileapp.figures import NO_VALUE, aligned, number, with_uncertainty
from mobileapp.views import RunView
from mobileapp.widgets.badge import verdict_word
from mobileapp.words import _


class RunRow(ButtonBehavior, BoxLayout):
    """Pressed, it opens the run."""

    run = StringProperty("")
    number_text = StringProperty("")
    speed_text = StringProperty("")
    h_text = StringProperty("")
    u_text = StringProperty("")
    verdict = StringProperty("none")
    word = StringProperty("")
    narrow = BooleanProperty(False)


    def take_over(self, other: RunRow) -> None:
        """Show what another row of the same run shows; a finger that is on this one stays on it."""
        for name in ("number_text", "speed_text", "h_text", "u_text", "verdict", "word"):
            setattr(self, name, getattr(other, name))


class RunListHead(BoxLayout):
    """The names and units over the columns."""

    narrow = BooleanProperty(False)


def shown_verdict(run: RunView) -> str:
    """The person's decision where there is one, else the answer's verdict."""
    kept = {"keep": "keep", "look": "look", "discard": "again", "again": "again"}
    return kept.get(run.decision) or run.verdict or "none"


def run_word(run: RunView) -> str:
    """The word beside the shape."""
    if run.open:
        return _("Still open")
    if run.decision == "discard":
        return _("Set aside")
    if run.kind == "rehearsal":
        return _("Rehearsal")
    return verdict_word(shown_verdict(run))


def rows_for(runs: Sequence[RunView]) -> list[RunRow]:
    """A row a run, the numbers of each column aligned on their decimal marks."""
    figures = [with_uncertainty(run.h_W_m2K, run.h_U95_W_m2K) for run in runs]
    speeds = aligned([number(run.velocity_m_s, 2) if run.velocity_m_s is not None else NO_VALUE for run in runs])
    values = aligned([value for value, _u in figures])
    spreads = aligned([u for _value, u in figures])
    return [
        RunRow(
            run=run.run,
            number_text=str(run.number),
            speed_text=speed,
            h_text=value,
            u_text="" if spread.strip() == NO_VALUE else f"± {spread}",
            verdict="none" if run.kind == "rehearsal" and not run.verdict else shown_verdict(run),
            word=run_word(run),
        )
        for run, speed, value, spread in zip(runs, speeds, values, spreads, strict=True)
    ]


Builder.load_file(str(Path(__file__).with_suffix(".kv")))
