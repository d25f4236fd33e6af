"""The pad: nearly the whole screen, touched without looking.

`PadTouch` is what a finger does, without looks: every touch that goes down on it is handed on at once, with the
touch itself so that its stamp can be found. What counts and what does not is the tally's business."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from kivy.clock import Clock
from kivy.graphics import Color, InstructionGroup, Rectangle
from kivy.graphics.texture import Texture
from kivy.lang import Builder
from kivy.metrics import dp
from kivy.properties import BooleanProperty, ListProperty, NumericProperty, ObjectProperty, StringProperty
from kivy.uix.floatlayout import FloatLayout
from kivy.uix.label import Label

from mobileapp.theme import heat_colour, look
from mobileapp.widgets import basics  # noqa: F401  the .kv of this widget uses them

FLASH_S = 0.11
REFUSED_S = 0.45
TOLD_S = 8.0
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
    heat = ObjectProperty(None, allownone=True)

    def __init__(self, **options: Any) -> None:
        super().__init__(**options)
        self._scale = InstructionGroup()
        self.canvas.add(self._scale)
        self._paint_heat()
        redraw = Clock.create_trigger(self._draw_scale)
        self.bind(marks=redraw, pos=redraw, size=redraw)
        self._redraw = redraw
        look.bind(palette_name=self.restyle, text_scale=self.restyle)
        self._end_flash = Clock.create_trigger(self._dark, FLASH_S)
        self._end_refusal = Clock.create_trigger(self._forget_refusal, REFUSED_S)
        self._end_notice = Clock.create_trigger(self._forget_refusal, TOLD_S)

    def _paint_heat(self, *_args: Any) -> None:
        """The colour of each level: from cool at the bottom through warm to hot at the top."""
        rows = 128
        texture = Texture.create(size=(1, rows), colorfmt="rgb")
        pixels = bytearray()
        for row in range(rows):
            pixels += bytes(round(255 * channel) for channel in heat_colour(row / (rows - 1))[:3])
        texture.blit_buffer(bytes(pixels), colorfmt="rgb", bufferfmt="ubyte")
        self.heat = texture

    def restyle(self, *_args: Any) -> None:
        """The theme has changed. Bound as a method, which the theme holds weakly: a trigger would keep the widget."""
        self._paint_heat()
        self._redraw()

    def confirm(self) -> None:
        """Light for a tap that the journal holds."""
        self.refusal = ""
        self.flash = self.flash_wanted
        self._end_flash()

    def refuse(self, why: str) -> None:
        """Grey, with the reason, for a touch that does not count."""
        self._end_notice.cancel()
        self.refusal = why
        self._end_refusal.cancel()
        self._end_refusal()

    def tell(self, notice: str) -> None:
        """The same look for something to be read; the next tap that counts takes it away."""
        self.refuse(notice)
        self._end_refusal.cancel()
        self._end_notice()

    def _dark(self, *_args: Any) -> None:
        self.flash = False

    def _forget_refusal(self, *_args: Any) -> None:
        self.refusal = ""

    def _draw_scale(self, *_args: Any) -> None:
        scale = self._scale
        scale.clear()
        for level, text in self.marks:
            y = self.y + dp(6) + level * (self.height - dp(12))
            label = Label(text=text, font_size=look.small, font_name=look.plain)
            label.texture_update()
            width, height = label.texture_size
            if not self.y + height < y < self.top - height:
                continue
            scale.add(Color(*look.pad_ink))
            scale.add(Rectangle(pos=(self.x + look.grid, y), size=(look.grid * 2, 1.5)))
            if self.width > dp(520):
                at = (self.x + look.grid * 3.5, y - height / 2)
                scale.add(Rectangle(texture=label.texture, pos=at, size=(width, height)))


Builder.load_file(str(Path(__file__).with_suffix(".kv")))
