"""Which screen stands in front, and the way back.

A screen is made when it is first wanted: its module and its .kv of the same name in `mobileapp/screens/`."""

from __future__ import annotations

from importlib import import_module
from pathlib import Path
from typing import Any

from kivy.lang import Builder
from kivy.properties import BooleanProperty, ObjectProperty
from kivy.uix.screenmanager import NoTransition, Screen, ScreenManager

from mobileapp.trace import trace

SCREENS_FOLDER = Path(__file__).parent / "screens"
SCREENS: dict[str, str] = {
    "home": "HomeScreen",
    "bench": "BenchScreen",
    "before": "BeforeScreen",
    "record": "RecordScreen",
    "after": "AfterScreen",
    "answer": "AnswerScreen",
    "rehearsal": "RehearsalScreen",
    "detail": "DetailScreen",
    "series": "SeriesScreen",
    "handover": "HandoverScreen",
    "settings": "SettingsScreen",
    "intake": "IntakeScreen",
}
_loaded: set[str] = set()


class Page(Screen):
    """Base of every screen. `wide` says that there is room for two columns side by side."""

    model = ObjectProperty(None)
    wide = BooleanProperty(True)

    def __init__(self, **options: Any) -> None:
        super().__init__(**options)
        self.bind(size=self._see_room)

    def _see_room(self, *_args: Any) -> None:
        self.wide = self.width > self.height

    def arrive(self, **aim: Any) -> None:
        """Called each time the screen comes to the front, with what it was asked to show."""

    def leave(self) -> None:
        """Called when another screen comes to the front."""

    def hold_back(self) -> bool:
        """True where the back key must not leave this screen."""
        return False

    def go(self, name: str, **aim: Any) -> None:
        self.manager.go(name, **aim)

    def back(self) -> None:
        self.manager.back()


class Navigator(ScreenManager):
    """The screens with the trail that led to the one in front."""

    def __init__(self, model: Any, **options: Any) -> None:
        super().__init__(transition=NoTransition(), **options)
        self.model = model
        self.trail: list[tuple[str, dict[str, Any]]] = []

    def _made(self, name: str) -> Page:
        if self.has_screen(name):
            return self.get_screen(name)
        module = import_module(f"mobileapp.screens.{name}")
        if name not in _loaded:
            Builder.load_file(str(SCREENS_FOLDER / f"{name}.kv"))
            _loaded.add(name)
        page = getattr(module, SCREENS[name])(name=name, model=self.model)
        self.add_widget(page)
        return page

    def go(self, name: str, **aim: Any) -> None:
        """Bring a screen to the front; one that is already on the trail cuts the trail back to it."""
        names = [step for step, _ in self.trail]
        if name in names:
            del self.trail[names.index(name) :]
        self.trail.append((name, aim))
        self._show(name, aim)

    def back(self) -> bool:
        """One step back along the trail; False where there is none."""
        if self.trail and self.get_screen(self.trail[-1][0]).hold_back():
            return True
        if len(self.trail) < 2:
            return False
        self.trail.pop()
        self._show(*self.trail[-1])
        return True

    def _show(self, name: str, aim: dict[str, Any]) -> None:
        page = self._made(name)
        if self.current and self.current != name and self.has_screen(self.current):
            self.get_screen(self.current).leave()
        self.current = name
        page.arrive(**aim)
        trace("screen", name=name)
