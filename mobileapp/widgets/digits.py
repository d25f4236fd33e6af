"""Big digit keys: two blocks for two thumbs, and a panel for a whole number."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from kivy.lang import Builder
from kivy.properties import BooleanProperty, ListProperty, NumericProperty, StringProperty
from kivy.uix.boxlayout import BoxLayout
from kivy.uix.gridlayout import GridLayout

from mobileapp.theme import look
from mobileapp.widgets.basics import Press

ERASE, SKIP = "⌫", "↷"


class DigitKey(Press):
    """One key; it acts as the finger comes down."""

    strong = BooleanProperty(True)


class DigitBlock(GridLayout):
    """Keys in two columns, as `names` lists them; `on_digit` tells which and the touch that did it."""

    __events__ = ("on_digit",)
    names = ListProperty()

    def __init__(self, **options: Any) -> None:
        super().__init__(**options)
        self.bind(names=self._make)
        self._make()

    def _make(self, *_args: Any) -> None:
        self.clear_widgets()
        for name in self.names:
            key = DigitKey(text=name, strong=name.isdigit())
            key.bind(on_press=lambda pressed: self.dispatch("on_digit", pressed.text, pressed.last_touch))
            self.add_widget(key)

    def on_digit(self, name: str, touch: Any) -> None:
        """A key came down."""


class NumberPanel(BoxLayout):
    """Types a whole number, as for a display that has jumped."""

    __events__ = ("on_done", "on_cancel")
    heading = StringProperty("")
    entered = StringProperty("")
    trouble = StringProperty("")

    def press(self, name: str) -> None:
        self.trouble = ""
        if name == ERASE:
            self.entered = self.entered[:-1]
        elif name == "." and "." in self.entered:
            return
        elif len(self.entered) < 6:
            self.entered += name

    def done(self) -> None:
        try:
            value = float(self.entered)
        except ValueError:
            return
        self.dispatch("on_done", value)

    def on_touch_down(self, touch: Any) -> bool:
        """Nothing behind the panel may be touched while it stands open."""
        return bool(super().on_touch_down(touch)) or self.collide_point(*touch.pos)

    def on_done(self, value: float) -> None:
        """The number is complete."""

    def on_cancel(self) -> None:
        """Nothing is to be entered."""


class ThumbDeck(BoxLayout):
    """The two blocks side by side, with room between them for what is going on."""

    __events__ = ("on_digit",)
    shown = BooleanProperty(True)
    roomy = BooleanProperty(True)
    room = NumericProperty(10_000.0)
    key_height = NumericProperty(0.0)
    key_size = NumericProperty(0.0)
    words = StringProperty("")
    entry = StringProperty("")

    def on_digit(self, name: str, touch: Any) -> None:
        """A key of either block came down."""

    def fitting_height(self, key_size: float, room: float, *_bound: Any) -> float:
        """As tall as wide, but on a low screen the pad above keeps a strip."""
        return max(look.target, min(key_size, (room - look.target - 4 * look.grid) / 3))

    def key_width(self, width: float, *_bound: Any) -> float:
        """Glove-sized keys where they fit, smaller ones on a phone."""
        return min(look.glove, max(look.target, (width - 5 * look.grid) / 4))


Builder.load_file(str(Path(__file__).with_suffix(".kv")))
