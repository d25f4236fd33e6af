"""The clocks. Stamps are on the monotonic clock, which stands still while the device is suspended; the boot-time
clock goes on. Their difference says whether, and for how long, the device slept during a run."""

from __future__ import annotations

import time
from datetime import datetime


class SystemClock:
    """The clocks of the operating system."""

    def now_s(self) -> float:
        return time.monotonic()

    def slept_s(self) -> float:
        if hasattr(time, "CLOCK_BOOTTIME"):
            return time.clock_gettime(time.CLOCK_BOOTTIME) - time.clock_gettime(time.CLOCK_MONOTONIC)
        return 0.0

    def wall_iso(self) -> str:
        return datetime.now().astimezone().isoformat(timespec="seconds")
