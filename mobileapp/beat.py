"""The beat: heard, felt and seen, at the moments that the tally expects. It keeps no time of its own: each beat is
placed on the clock from the first one, so that none drifts."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from mobileapp.device.ports import Clock, Haptics, Sounds
from mobileapp.views import BeatView

COUNT_IN = 3
COUNT_IN_S = 1.0


class BeatPlayer:
    """Sounds a short count-in and then every beat; `told` gets each one as it sounds."""

    def __init__(
        self,
        clock: Clock,
        sounds: Sounds,
        haptics: Haptics,
        schedule: Callable[[Callable[[Any], None], float], Any],
        told: Callable[[BeatView], None],
    ) -> None:
        self._clock, self._sounds, self._haptics = clock, sounds, haptics
        self._schedule, self._told = schedule, told
        self._event: Any = None
        self.sound_on = True
        self.vibration_on = True

    def start(self, period_s: float, first_at_s: float | None = None) -> float:
        """Begin the count-in; returns the moment of beat 0. With `first_at_s` an interrupted beat goes on."""
        self.period_s = period_s
        count_in_s = min(COUNT_IN_S, period_s)
        now_s = self._clock.now_s()
        if first_at_s is None:
            self._first_s, self._count_in_s = now_s + COUNT_IN * count_in_s, count_in_s
            self._index = -COUNT_IN
        else:
            self._first_s, self._count_in_s = first_at_s, count_in_s
            self._index = max(0, int((now_s - first_at_s) // period_s) + 1)
        self._wait()
        return self._first_s

    def stop(self) -> None:
        if self._event is not None:
            self._event.cancel()
            self._event = None

    def at_s(self, index: int) -> float:
        """The moment of a beat; below 0 it is one of the count-in."""
        step_s = self.period_s if index >= 0 else self._count_in_s
        return self._first_s + index * step_s

    def _wait(self) -> None:
        self._event = self._schedule(self._sound, max(0.0, self.at_s(self._index) - self._clock.now_s()))

    def _sound(self, _dt: float) -> None:
        index = self._index
        if self.sound_on:
            self._sounds.play("beat" if index >= 0 else "count_in")
        if self.vibration_on and index >= 0:
            self._haptics.beat()
        self._index += 1
        self._wait()
        self._told(BeatView(index, self.at_s(index), self.period_s))
