"""The app: puts the theme, the model and the screens together and answers to the device's own events."""

from __future__ import annotations

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
from mobileapp.trace import TARGETS_EVERY_S, trace

BACK_KEY = 27


class CooltallyApp(App):
    """One window, one model, one trail of screens."""

    title = "Cooltally"

    def __init__(self, data: Path | None = None, demo: bool = False, **options: Any) -> None:
        super().__init__(**options)
        self._data = data
        self._demo = demo
        self.navigator: Navigator | None = None
        self._held: set[int] = set()

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
            if self.model.recorder.pad is not None:
                self.navigator.go("record")

    def _prefer(self, _model: Model, liked: preferences.Preferences) -> None:
        look.wear(liked.palette, liked.text_scale)
        if words.language() != liked.language:
            words.use(liked.language)
            Clock.schedule_once(lambda _: self._put_up(), 0)

    def on_start(self) -> None:
        Window.bind(on_keyboard=self._keyboard, on_key_down=self._key_down, on_key_up=self._key_up)
        Window.bind(on_touch_down=self._stamp_touch, focus=lambda *_args: self._held.clear())
        if trace.on:
            Clock.schedule_interval(lambda _dt: trace.targets(self.navigator, Window.height), TARGETS_EVERY_S)
        Clock.schedule_once(lambda _: trace("ready", stamps=self.model.device.stamps.name), 0)

    def _stamp_touch(self, _window: Any, touch: Any) -> bool:
        """Every touch gets its stamp as it is dispatched, whatever it lands on: none is taken for another."""
        if getattr(touch, "button", None) not in ("scrollup", "scrolldown", "scrollleft", "scrollright"):
            touch.ud["stamp"] = self.model.device.stamps.touch(touch)
        return False

    def _key_down(self, _window: Any, key: int, _scan: int, character: str | None, modifiers: list[str]) -> bool:
        """Once a press: repeats of a held key are swallowed where the screen takes keys."""
        stamp = self.model.device.stamps.key()
        page = self.navigator.current_screen if self.navigator else None
        if not hasattr(page, "key") or set(modifiers) - {"numlock", "capslock"}:
            return False
        if key in self._held:
            return True
        if page.key(key, character or "", stamp):
            self._held.add(key)
            return True
        return False

    def _key_up(self, _window: Any, key: int, *_args: Any) -> None:
        self._held.discard(key)

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
