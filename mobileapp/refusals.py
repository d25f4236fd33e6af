"""What the core refuses, told to the person wherever it comes up; the app goes on."""

from __future__ import annotations

from collections.abc import Callable
from functools import partial

from kivy.app import App
from kivy.base import ExceptionHandler, ExceptionManager
from kivy.core.window import Window
from kivy.uix.anchorlayout import AnchorLayout
from kivy.uix.modalview import ModalView

from core.errors import BenchError
from mobileapp.theme import look, register_fonts
from mobileapp.trace import trace
from mobileapp.widgets.basics import LeadWords, MainPress, Sheet
from mobileapp.words import _, say


def told_on_screen(sentence: str, pressed: Callable[[], None], press_text: str) -> Sheet:
    """The sentence, and one thing to press."""
    sheet = Sheet(size_hint_x=None, width=min(0.9 * Window.width, 48 * look.lead))
    sheet.add_widget(LeadWords(text=say(sentence)))
    press = MainPress(text=press_text)
    press.bind(on_release=lambda *_args: pressed())
    sheet.add_widget(press)
    return sheet


class Refusals(ExceptionHandler):
    """Put into Kivy's loop: a refusal is shown over whatever stands on the screen; other faults pass through."""

    def handle_exception(self, fault: Exception) -> int:
        if not isinstance(fault, BenchError):
            return ExceptionManager.RAISE
        view = ModalView(auto_dismiss=True, background_color=(*look.ground[:3], 0.8), background="")
        middle = AnchorLayout()
        middle.add_widget(told_on_screen(str(fault), partial(view.dismiss, animation=False), _("Understood")))
        view.add_widget(middle)
        view.bind(on_open=lambda *_args: trace("told", sentence=str(fault)))
        view.bind(on_dismiss=lambda *_args: trace("understood"))
        view.open(animation=False)
        return ExceptionManager.PASS


class RefusalApp(App):
    """All that can be shown where the journal cannot be opened at all."""

    title = "Cooltally"

    def __init__(self, sentence: str) -> None:
        super().__init__()
        self._sentence = sentence

    def build(self) -> AnchorLayout:
        register_fonts()
        Window.clearcolor = look.ground
        middle = AnchorLayout()
        middle.add_widget(told_on_screen(self._sentence, self.stop, _("Close")))
        return middle

    def on_start(self) -> None:
        trace("told", sentence=self._sentence)
        trace("ready")
