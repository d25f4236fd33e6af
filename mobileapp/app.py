"""The app: puts the theme, the model and the screens together and answers to the device's own events."""

from __future__ import annotations

import threading
from importlib import import_module
from pathlib import Path
from typing import Any

from kivy.app import App
from kivy.clock import Clock
from kivy.core.window import Window
from kivy.uix.boxlayout import BoxLayout

from mobileapp import preferences, words
from mobileapp.device.find import find_device
from mobileapp.model import Model
from mobileapp.navigation import Navigator
from mobileapp.theme import look, register_fonts
from mobileapp.trace import trace

BACK_KEY = 27


class CooltallyApp(App):
    """One window, one model, one trail of screens."""

    title = "Cooltally"

    def __init__(self, data: Path | None = None, demo: bool = False, **options: Any) -> None:
        super().__init__(**options)
        self._data = data
        self._demo = demo
        self.navigator: Navigator | None = None

    def get_application_config(self, *_args: Any, **__: Any) -> str:
        return ""

    def build(self) -> BoxLayout:
        register_fonts()
        folder = self._data or Path(self.user_data_dir)
        folder.mkdir(parents=True, exist_ok=True)
        liked = preferences.read(folder)
        words.use(liked.language)
        look.wear(liked.palette, liked.text_scale)
        Window.clearcolor = look.ground
        look.bind(ground=lambda _, ground: setattr(Window, "clearcolor", ground))
        self.model = Model(find_device(folder), liked)
        if self._demo:
            self.model.open_demo()
        self.frame = BoxLayout(orientation="vertical")
        self._put_up()
        self.model.bind(preferences=self._prefer)
        return self.frame

    def _put_up(self) -> None:
        """Make the screens anew, in the language in use."""
        trail = self.navigator.trail if self.navigator else []
        self.frame.clear_widgets()
        self.navigator = Navigator(self.model)
        self.frame.add_widget(self.navigator)
        if trail:
            self.navigator.trail = trail[:-1]
            self.navigator.go(trail[-1][0], **trail[-1][1])
        else:
            self.navigator.go("home")
            if self.model.tally is not None:
                self.navigator.go("record")

    def _prefer(self, _model: Model, liked: preferences.Preferences) -> None:
        look.wear(liked.palette, liked.text_scale)
        if words.language() != liked.language:
            words.use(liked.language)
            Clock.schedule_once(lambda _: self._put_up(), 0)

    def on_start(self) -> None:
        Window.bind(on_keyboard=self._keyboard)
        Clock.schedule_once(lambda _: trace("ready", stamps=self.model.device.stamps.name), 0)
        Clock.schedule_once(lambda _: threading.Thread(target=_preload, daemon=True).start(), 0.5)

    def _keyboard(self, _window: Any, key: int, *_args: Any) -> bool:
        return key == BACK_KEY and self.navigator is not None and self.navigator.back()

    def open_settings(self, *_args: Any) -> bool:
        """Kivy's own panel stays shut; the app has its own screen."""
        return False

    def on_pause(self) -> bool:
        self.model.pause()
        return True

    def on_resume(self) -> None:
        self.model.resume()

    def on_stop(self) -> None:
        self.model.close()


def _preload() -> None:
    """Load in the background what only later screens need."""
    for name in ("scipy.optimize", "scipy.special"):
        try:
            import_module(name)
        except ImportError:
            return
