"""Lines that tell what was found: a check, a bar of the budget, a reading in doubt, a pair of name and value."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from kivy.lang import Builder
from kivy.properties import BooleanProperty, NumericProperty, StringProperty
from kivy.uix.behaviors import ButtonBehavior
from kivy.uix.boxlayout import BoxLayout
from kivy.uix.gridlayout import GridLayout

from core.judgement.answer import BudgetLine, Check
from mobileapp.figures import percent
from mobileapp.judged import check_label, check_values, input_label, input_value, outcome_shape
from mobileapp.widgets import badge  # noqa: F401  the .kv uses its shape
from mobileapp.words import _, say


class CheckLine(ButtonBehavior, BoxLayout):
    """One check: shape, name, value against limit, advice; a touch shows where the limit comes from."""

    outcome = StringProperty("none")
    name = StringProperty("")
    values = StringProperty("")
    advice = StringProperty("")
    source = StringProperty("")
    opened = BooleanProperty(False)
    rim = BooleanProperty(True)

    def __init__(self, check: Check, **options: Any) -> None:
        super().__init__(
            outcome=outcome_shape(check.outcome),
            name=check_label(check.name),
            values=check_values(check),
            advice=say(check.advice),
            source=_("Limit from: {source}").format(source=say(check.source)),
            **options,
        )

    def on_release(self) -> None:
        self.opened = not self.opened


class BudgetBar(BoxLayout):
    """One input of the budget as a bar as long as its share of the variance."""

    name = StringProperty("")
    value = StringProperty("")
    share = NumericProperty(0.0)
    longest = NumericProperty(1.0)
    share_text = StringProperty("")

    def __init__(self, line: BudgetLine, longest: float, **options: Any) -> None:
        super().__init__(
            name=input_label(line.input),
            value=input_value(line),
            share=line.share,
            longest=longest,
            share_text=percent(line.share, 1 if line.share < 0.1 else 0),
            **options,
        )


class DoubtLine(GridLayout):
    """One reading in doubt, with the two words that a person can say about it."""

    row = NumericProperty(0)
    sentence = StringProperty("")
    ruled = StringProperty("")  # keep | drop | ""
    __events__ = ("on_ruling",)

    def on_ruling(self, keep: bool) -> None:
        """The person wants this reading kept, or dropped."""


class ValueLine(BoxLayout):
    """A name, and its value set against the right edge."""

    name = StringProperty("")
    value = StringProperty("")


Builder.load_file(str(Path(__file__).with_suffix(".kv")))
