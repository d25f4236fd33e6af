"""One value of a set-up on the screen: name, entry, unit, help in place, and what is wrong with it."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import Any

from kivy.lang import Builder
from kivy.properties import BooleanProperty, ObjectProperty, StringProperty
from kivy.uix.boxlayout import BoxLayout
from kivy.uix.textinput import TextInput

from core.bench.fields import Description
from core.bench.units import FACTORS, in_digits, parse_entry, split_entry
from core.errors import BadSetup
from mobileapp.labels import choice_label, field_label
from mobileapp.widgets.basics import ChoicePress
from mobileapp.words import _, say

# SI unit of a field -> the units offered in turn, the everyday one first
OFFERED: dict[str, tuple[str, ...]] = {
    "m": ("mm", "cm", "m", "in"),
    "s": ("s", "ms", "min"),
    "K": ("°C", "°F"),
    "°C": ("°C", "°F"),
    "kg": ("g", "kg", "lb"),
    "m/s": ("m/s", "km/h", "fpm"),
    "m³/s": ("m³/h", "L/s", "m³/s", "cfm"),
    "Pa": ("Pa", "hPa", "mmH2O", "inH2O"),
    "": ("%", ""),
}
BOLD_WIDTH = 0.7  # mean width of a bold letter, in sizes of the type
EVERYDAY = {
    "pressure_Pa": ("hPa", "Pa", "mmHg", "inHg"),
    "pressure_u_Pa": ("hPa", "Pa", "mmHg", "inHg"),
    "emissivity": ("", "%"),
    "emissivity_u": ("", "%"),
    "richardson": ("",),
    "span_ratio_min": ("",),
}


def offered_units(key: str, si_unit: str) -> tuple[str, ...]:
    """The units that the entry of a field offers."""
    return EVERYDAY.get(key) or OFFERED.get(si_unit) or (si_unit,)


def from_si(value: float, si_unit: str, unit: str) -> float:
    """The SI value in the unit on the screen."""
    if si_unit == "°C":
        return value * 1.8 + 32.0 if unit == "°F" else value
    return value / FACTORS.get(si_unit, {}).get(unit, 1.0)


def columns_for(width: float, body: float, buttons: Sequence[Any]) -> int:
    """How many of these buttons stand beside each other without a word of theirs being split."""
    longest = max((len(word) for button in buttons for word in button.text.split()), default=8)
    return max(1, min(3, len(buttons), int(width // ((longest + 1.5) * body * BOLD_WIDTH))))


class LineInput(TextInput):
    """A line to write on, as tall as a finger's target."""

    faulty = BooleanProperty(False)


class ValueEntry(BoxLayout):
    """A number, whole number, list or text. The value is kept in SI; an empty entry is None."""

    key = StringProperty("")
    label = StringProperty("")
    text = StringProperty("")
    unit = StringProperty("")
    unit_word = StringProperty("")
    fault = StringProperty("")
    help_text = StringProperty("")
    help_open = BooleanProperty(False)
    numeric = BooleanProperty(True)
    __events__ = ("on_entered",)

    def __init__(
        self, section: str, key: str, description: Description, value: Any = None, **options: Any
    ) -> None:
        self.section = section
        self.description = description
        self.units = offered_units(key, description.unit)
        numeric = description.kind != "text"
        super().__init__(key=key, label=field_label(section, key), numeric=numeric, **options)
        self.unit = self.units[0] if numeric and description.kind != "integer" else ""
        self.unit_word = self.unit
        self.help_text = _help(description)
        self.set_value(value)

    fitting = staticmethod(columns_for)

    def set_value(self, value: Any) -> None:
        """Show an SI value in the unit at hand."""
        self.fault = ""
        if value is None or value == ():
            self.text = ""
        elif self.description.kind == "numbers":
            self.text = "; ".join(_shown(v, self.description.unit, self.unit) for v in value)
        elif self.description.kind == "number":
            self.text = _shown(value, self.description.unit, self.unit)
        else:
            self.text = str(value)

    def next_unit(self) -> None:
        """Show the same quantity in the next unit."""
        try:
            value = self.value()
        except BadSetup:
            value = None
        following = self.units[(self.units.index(self.unit) + 1) % len(self.units)]
        self.unit = self.unit_word = following
        if value is not None:
            self.set_value(value)

    def value(self) -> Any:
        """The value in SI; raises BadSetup with a sentence for what cannot be read."""
        text = self.text.strip()
        kind = self.description.kind
        if not text:
            return () if kind == "numbers" else None
        if kind == "text":
            return text
        if kind == "integer":
            number, unit = split_entry(text)
            if unit or number != int(number):
                raise BadSetup(_("Type a whole number."))
            return int(number)
        if kind == "numbers":
            parts = [part for part in text.split(";") if part.strip()]
            return tuple(parse_entry(part, self.description.unit, self.unit) for part in parts)
        return parse_entry(text, self.description.unit, self.unit)

    def on_entered(self) -> None:
        """The person left the line."""


def _shown(value: float, si_unit: str, unit: str) -> str:
    converted = from_si(value, si_unit, unit)
    return f"{float(f'{converted:.10g}'):.10g}"


def _help(description: Description) -> str:
    parts = [say(description.meaning)]
    if description.typical and description.kind != "text":
        unit = f" {description.unit}" if description.unit else ""
        parts.append(_("Typical: {values}{unit}.").format(values=description.typical, unit=unit))
    if description.kind == "number" and description.low is not None and description.high is not None:
        low, high = in_digits(description.low), in_digits(description.high)
        unit = f" {description.unit}" if description.unit else ""
        parts.append(_("Allowed: {low} to {high}{unit}.").format(low=low, high=high, unit=unit))
    if description.kind == "numbers":
        parts.append(_("Put a semicolon between two."))
    return " ".join(parts)


class ChoiceEntry(BoxLayout):
    """One word out of a few, as buttons beside each other."""

    key = StringProperty("")
    label = StringProperty("")
    chosen = ObjectProperty(None, allownone=True)
    fault = StringProperty("")
    help_text = StringProperty("")
    help_open = BooleanProperty(False)

    def __init__(self, section: str, key: str, description: Description, value: Any, **options: Any) -> None:
        super().__init__(key=key, label=field_label(section, key), help_text=say(description.meaning), **options)
        self.section = section
        for word in description.choices:
            button = ChoicePress(text=choice_label(word))
            button.word = word
            button.bind(on_release=lambda pressed: setattr(self, "chosen", pressed.word))
            self.ids.choices.add_widget(button)
        self.bind(chosen=self._mark)
        self.chosen = value
        self._mark()

    fitting = staticmethod(columns_for)

    def _mark(self, *_args: Any) -> None:
        for button in self.ids.choices.children:
            button.chosen = button.word == self.chosen

    def value(self) -> Any:
        return self.chosen


Builder.load_file(str(Path(__file__).with_suffix(".kv")))
