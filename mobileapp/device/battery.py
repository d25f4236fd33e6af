"""The charge of the device's battery."""

from __future__ import annotations

from typing import Any


class NoBattery:
    """A device that says nothing of its charge, or needs none."""

    def percent_left(self) -> float | None:
        return None


class PlyerBattery:
    """The tablet's battery, through plyer."""

    def __init__(self, battery: Any) -> None:
        self._battery = battery

    def percent_left(self) -> float | None:
        """Charge in per cent; None while it is being charged, or where it cannot be read."""
        try:
            status = self._battery.status
            return None if status["isCharging"] else float(status["percentage"])
        except Exception:  # plyer raises whatever the platform raised; a run goes on without this
            return None


def find_battery(on_android: bool) -> NoBattery | PlyerBattery:
    """The battery where there is one; plyer is only asked on the tablet, where it has an answer."""
    if not on_android:
        return NoBattery()
    try:
        from plyer import battery

        return PlyerBattery(battery)
    except Exception:
        return NoBattery()
