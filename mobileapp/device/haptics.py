"""Vibration: one short pulse for a tap that counts, two for one that was refused."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

CONFIRM_S = 0.03
REFUSE_PATTERN_S = (0.0, 0.06, 0.07, 0.06)
BEAT_S = 0.05


class NoHaptics:
    """A device without a motor."""

    available = False

    def confirm(self) -> None:
        return None

    def refuse(self) -> None:
        return None

    def beat(self) -> None:
        return None


class Vibration:
    """The device's motor, through plyer."""

    available = True

    def __init__(self, vibrator: Any) -> None:
        self._vibrator = vibrator

    def _try(self, action: Callable[[], Any]) -> None:
        try:
            action()
        except Exception:  # a motor that fails must never cost a tap
            self.available = False

    def confirm(self) -> None:
        if self.available:
            self._try(lambda: self._vibrator.vibrate(time=CONFIRM_S))

    def refuse(self) -> None:
        if self.available:
            self._try(lambda: self._vibrator.pattern(pattern=REFUSE_PATTERN_S))

    def beat(self) -> None:
        if self.available:
            self._try(lambda: self._vibrator.vibrate(time=BEAT_S))


def find_haptics(on_android: bool) -> NoHaptics | Vibration:
    """The motor where there is one; plyer is only asked on the tablet, where it has an answer."""
    if not on_android:
        return NoHaptics()
    try:
        from plyer import vibrator

        return Vibration(vibrator) if vibrator.exists() else NoHaptics()
    except Exception:  # plyer raises whatever the platform raised
        return NoHaptics()
