"""A button that must be held: nothing ends by a slip of the thumb."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from kivy.clock import Clock
from kivy.lang import Builder
from kivy.properties import NumericProperty

from mobileapp.widgets.basics import Press

HOLD_S = 0.9


class HoldPress(Press):
    """Fires `on_held` once it has been held for `hold_s`; lifting sooner does nothing."""

    __events__ = ("on_held",)
    hold_s = NumericProperty(HOLD_S)
    share = NumericProperty(0.0)

    def __init__(self, **options: Any) -> None:
        super().__init__(**options)
        self._event: Any = None

    def on_press(self) -> None:
        self.share = 0.0
        self._event = Clock.schedule_interval(self._grow, 1 / 40)

    def on_release(self) -> None:
        self._stop()

    def on_touch_up(self, touch: Any) -> bool:
        if touch.grab_current is self:
            self._stop()
        return bool(super().on_touch_up(touch))

    def on_touch_move(self, touch: Any) -> bool:
        if touch.grab_current is self and not self.collide_point(*touch.pos):
            self._stop()
        return bool(super().on_touch_move(touch))

    def _grow(self, passed_s: float) -> bool:
        self.share = min(1.0, self.share + passed_s / self.hold_s)
        if self.share < 1.0:
            return True
        self._event = None
        self.dispatch("on_held")
        self.share = 0.0
        return False

    def _stop(self) -> None:
        if self._event is not None:
            self._event.cancel()
            self._event = None
        self.share = 0.0

    def on_held(self) -> None:
        """It was held long enough."""


Builder.load_file(str(Path(__file__).with_suffix(".kv")))
