"""How long the body has been heated, beside how long it took the last time."""

from __future__ import annotations

from mobileapp.device.ports import Clock
from mobileapp.figures import clock_time
from mobileapp.words import _


class Heating:
    """A clock from the moment at which a person says that the body is in the water, to its first reading.

    It tells time, no temperature: whether the body is hot is read off its thermometer."""

    def __init__(self, clock: Clock) -> None:
        self._clock = clock
        self._begun_s: float | None = None
        self._usual_s: float | None = None
        self._told = False

    @property
    def goes_on(self) -> bool:
        return self._begun_s is not None

    def begin(self) -> None:
        """The body has been put into the water."""
        self._begun_s = self._clock.now_s()
        self._told = False

    def end(self, first_reading_s: float | None) -> None:
        """The body has been taken out; its first reading was at a stamp, or there was none."""
        if self._begun_s is not None and first_reading_s is not None and first_reading_s > self._begun_s:
            self._usual_s = first_reading_s - self._begun_s
        self._begun_s = None

    def is_due(self) -> bool:
        """True once, when it has taken as long as the last time."""
        if self._begun_s is None or self._usual_s is None or self._told:
            return False
        self._told = self._clock.now_s() - self._begun_s >= self._usual_s
        return self._told

    def words(self) -> str:
        """What stands on the screen."""
        usual = "" if self._usual_s is None else clock_time(self._usual_s)
        if self._begun_s is None:
            return _("Last time it took {usual}.").format(usual=usual) if usual else ""
        gone_s = self._clock.now_s() - self._begun_s
        words = _("In the water for {time}.").format(time=clock_time(gone_s))
        if self._usual_s is None:
            return words
        left_s = self._usual_s - gone_s
        if left_s > 0:
            return f"{words} " + _("As long as last time in {left}.").format(left=clock_time(left_s))
        return f"{words} " + _("That is as long as last time.")
