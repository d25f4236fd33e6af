"""The pad: nearly the whole screen, touched without looking.

`PadTouch` is what a finger does, without looks: every touch that goes down on it is handed on at once, with the
touch itself so that its stamp can be found. What counts and what does not is the tally's business."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from kivy.clock import Clock
from kivy.graphics import Color, InstructionGroup, Rectangle
from kivy.lang import Builder
from kivy.properties import BooleanProperty, ListProperty, NumericProperty, StringProperty
from kivy.uix.floatlayout import FloatLayout
from kivy.uix.label import Label

from mobileapp.contrast import mixed
from mobileapp.theme import look

FLASH_S = 0.11
REFUSED_S = 0.45
USED_BUTTONS = (None, "left")


class PadTouch:
    """Hands every touch that goes down inside on as `on_contact`; moves and lifts mean nothing."""

    def on_touch_down(self, touch: Any) -> bool:
        if self.disabled or not self.collide_point(*touch.pos):
            return False
        if getattr(touch, "button", None) not in USED_BUTTONS:
            return False
        self.dispatch("on_contact", touch)
        return True

    def on_contact(self, touch: Any) -> None:
        """A finger, palm or glove came down."""


class Pad(PadTouch, FloatLayout):
    """A vessel of heat: its level falls as the body cools; the number in it is the last one confirmed.

    `level` is the share of the excess temperature that is left. `marks` are (level, text) at round
    temperatures."""

    __events__ = ("on_contact",)

    figure = StringProperty("")
    caption = StringProperty("")
    hint = StringProperty("")
    level = NumericProperty(1.0)
    marks = ListProperty()
    flash = BooleanProperty(False)
    flash_wanted = BooleanProperty(True)
    refusal = StringProperty("")

    def __init__(self, **options: Any) -> None:
        super().__init__(**options)
        self._scale = InstructionGroup()
        self.canvas.before.add(self._scale)
        redraw = Clock.create_trigger(self._draw_scale)
        self.bind(marks=redraw, pos=redraw, size=redraw)
        look.bind(palette_name=redraw, text_scale=redraw)
        self._end_flash = Clock.create_trigger(self._dark, FLASH_S)
        self._end_refusal = Clock.create_trigger(self._forget_refusal, REFUSED_S)

    def level_colour(self, level: float, *_bound: Any) -> tuple[float, ...]:
        return mixed(tuple(look.pad_cool), tuple(look.pad_hot), min(max(level, 0.0), 1.0))

    def confirm(self) -> None:
        """Light for a tap that the journal holds."""
        self.refusal = ""
        self.flash = self.flash_wanted
        self._end_flash()

    def refuse(self, why: str) -> None:
        """Grey, with the reason, for a touch that does not count."""
        self.refusal = why
        self._end_refusal.cancel()
        self._end_refusal()

    def _dark(self, *_args: Any) -> None:
        self.flash = False

    def _forget_refusal(self, *_args: Any) -> None:
        self.refusal = ""

    def _draw_scale(self, *_args: Any) -> None:
        scale = self._scale
        scale.clear()
        for level, text in self.marks:
            y = self.y + level * self.height
            label = Label(text=text, font_size=look.small, font_name=look.plain)
            label.texture_update()
            width, height = label.texture_size
            if not self.y + height < y < self.top - height:
                continue
            scale.add(Color(*look.pad_ink))
            scale.add(Rectangle(pos=(self.x, y), size=(look.grid * 2, 1.5)))
            scale.add(
                Rectangle(
                    texture=label.texture, pos=(self.x + look.grid * 2.5, y - height / 2), size=(width, height)
                )
            )


Builder.load_file(str(Path(__file__).with_suffix(".kv")))
