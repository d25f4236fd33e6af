"""What the app asks of a device. Adapters stand beside; a test passes a stand-in."""

from __future__ import annotations

from dataclasses import dataclass, field
from pathlib import Path
from typing import Any, Protocol

from mobileapp.device.battery import NoBattery


@dataclass(frozen=True, slots=True)
class Stamp:
    """A moment [s] on the monotonic clock, the half-width [s] of its error, and the source that gave it."""

    time_s: float
    halfwidth_s: float
    source: str


class Clock(Protocol):
    """Time for stamps, and how long the device has slept."""

    def now_s(self) -> float:
        """Seconds on the monotonic clock, the base of every stamp."""

    def slept_s(self) -> float:
        """Seconds that the device has spent suspended since it was started."""

    def wall_iso(self) -> str:
        """Date and time of day with its offset, for the record only."""


class TapStampSource(Protocol):
    """Says when a touch or a key press really happened."""

    name: str
    halfwidth_s: float

    def start(self) -> None:
        """Begin to listen; raises OSError where this device does not offer the source."""

    def touch(self, touch: Any) -> Stamp:
        """The stamp of a touch that has just been dispatched."""

    def key(self) -> Stamp:
        """The stamp of the key press that is being dispatched."""

    def forget(self) -> None:
        """Drop what was heard and not asked for, as after a pause."""


class Haptics(Protocol):
    """Vibration."""

    available: bool

    def confirm(self) -> None: ...

    def refuse(self) -> None: ...

    def beat(self) -> None: ...


class Sounds(Protocol):
    """Short sounds that start at once."""

    available: bool

    def play(self, name: str) -> None: ...


class Screen(Protocol):
    """The screen as a lamp."""

    def keep_on(self, on: bool) -> None: ...


class Battery(Protocol):
    """The charge that is left."""

    def percent_left(self) -> float | None:
        """Charge in per cent; None while it is being charged, or where it is not known."""


class Downloads(Protocol):
    """The folder that a laptop sees."""

    def save(self, files: dict[str, bytes], folder: str) -> str:
        """Keep the files under one folder name; returns the place in words for the person."""


@dataclass(frozen=True, slots=True)
class Device:
    """Everything of the platform that the app uses. `missing` are sentences, each told once."""

    clock: Clock
    stamps: TapStampSource
    haptics: Haptics
    sounds: Sounds
    screen: Screen
    data: Path
    battery: Battery = field(default_factory=NoBattery)
    missing: tuple[str, ...] = ()
