"""Words, sheets and buttons in the app's own look. They hold no knowledge of cooling."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from kivy.clock import Clock
from kivy.core.text import Label as CoreLabel
from kivy.graphics.texture import Texture
from kivy.lang import Builder
from kivy.properties import BooleanProperty, ColorProperty, NumericProperty, ObjectProperty, StringProperty
from kivy.uix.behaviors import ButtonBehavior
from kivy.uix.boxlayout import BoxLayout
from kivy.uix.label import Label
from kivy.uix.scrollview import ScrollView
from kivy.uix.widget import Widget

from mobileapp.contrast import mixed
from mobileapp.theme import look
from mobileapp.wrapping import broken


class Words(Label):
    """Text that wraps within its width and is as tall as it needs. It takes no touch, not even disabled."""

    def on_touch_down(self, touch: Any) -> bool:
        return False


class SoftWords(Words):
    """Text of the second rank."""


class SmallWords(Words):
    """Help and footnotes."""


class LeadWords(Words):
    """The first sentence of a screen."""


class PathWords(Words):
    """Words that may hold the path of a folder (`said`), broken where it would not fit in one line."""

    said = StringProperty("")

    def __init__(self, **options: Any) -> None:
        super().__init__(**options)
        fit = Clock.create_trigger(self._fit, -1)
        self.bind(said=fit, width=fit, font_size=fit, font_name=fit)
        fit()

    def _fit(self, *_args: Any) -> None:
        ruler = CoreLabel(font_name=self.font_name, font_size=self.font_size)
        room = self.width - self.padding[0] - self.padding[2]
        self.text = broken(self.said, room, lambda words: float(ruler.get_extents(words)[0]))


class TitleWords(Words):
    """A heading."""


class HeadWords(Words):
    """The name of a part of a screen."""


class FitWords(Label):
    """One line, as large as its box allows up to `largest`: for what must be read from afar."""

    largest = NumericProperty(100)

    def __init__(self, **options: Any) -> None:
        super().__init__(**options)
        fit = Clock.create_trigger(self._fit, -1)
        self.bind(size=fit, text=fit, largest=fit, font_name=fit)
        fit()

    def _fit(self, *_args: Any) -> None:
        if self.width <= 1 or self.height <= 1 or not self.text:
            return
        self.font_size = self.largest
        self.texture_update()
        wide, tall = self.texture_size
        factor = min(self.width / max(wide, 1), self.height / max(tall, 1), 1.0)
        if factor < 1.0:
            self.font_size = max(8.0, self.largest * factor * 0.97)


class Sheet(BoxLayout):
    """A plate with a thin edge that holds what belongs together."""

    ground = ColorProperty(look.panel)


class Fold(BoxLayout):
    """A stack that is folded away unless `shown`: no height, not seen, deaf to touches."""

    shown = BooleanProperty(True)

    def on_touch_down(self, touch: Any) -> bool:
        return bool(self.shown and super().on_touch_down(touch))


class Press(ButtonBehavior, Label):
    """What can be pressed; at least as tall as a finger's target. Disabled it lets a touch through, as it may be
    folded away over something else."""

    rim = ColorProperty((0, 0, 0, 0))
    fill = ColorProperty((0, 0, 0, 0))

    def on_touch_down(self, touch: Any) -> bool:
        return False if self.disabled else bool(super().on_touch_down(touch))


class PlainPress(Press):
    """An outlined button."""


class MainPress(Press):
    """The one thing to do next."""


class QuietPress(Press):
    """A button that keeps in the background."""


class ChoicePress(Press):
    """One of several choices; filled when chosen."""

    chosen = BooleanProperty(False)


class Tick(ButtonBehavior, BoxLayout):
    """A sentence to be ticked; the whole line is the target."""

    text = StringProperty("")
    ticked = BooleanProperty(False)

    def on_release(self) -> None:
        self.ticked = not self.ticked


class CoolingStrip(Widget):
    """The mark of the app: a strip from ember to cool."""

    texture = ObjectProperty(None, allownone=True)

    def __init__(self, **options: Any) -> None:
        super().__init__(**options)
        self._paint()
        look.bind(ember=self._paint, cool=self._paint)

    def _paint(self, *_args: Any) -> None:
        width = 128
        texture = Texture.create(size=(width, 1), colorfmt="rgb")
        row = bytearray()
        for i in range(width):
            # the colour follows an excess temperature that falls exponentially along the strip
            share = 1.0 - 2.718281828 ** (-3.2 * i / (width - 1))
            row += bytes(round(255 * channel) for channel in mixed(tuple(look.ember), tuple(look.cool), share)[:3])
        texture.blit_buffer(bytes(row), colorfmt="rgb", bufferfmt="ubyte")
        self.texture = texture


class TopBand(BoxLayout):
    """Title of a screen, with the way back."""

    title = StringProperty("")
    with_back = BooleanProperty(True)
    __events__ = ("on_back",)

    def on_back(self) -> None:
        """Someone wants to go back."""


class Scroll(ScrollView):
    """A page that is longer than the screen."""


Builder.load_file(str(Path(__file__).with_suffix(".kv")))
