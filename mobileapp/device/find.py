"""What this device has, found once at start."""

from __future__ import annotations

import os
from pathlib import Path

from mobileapp.device.battery import find_battery
from mobileapp.device.clock import SystemClock
from mobileapp.device.haptics import find_haptics
from mobileapp.device.ports import Device
from mobileapp.device.screen import WindowScreen
from mobileapp.device.sound import find_sounds
from mobileapp.device.stamps import best_source
from mobileapp.words import later


def on_android() -> bool:
    return "ANDROID_ARGUMENT" in os.environ


def find_device(data: Path) -> Device:
    """Choose the adapters, and say once what is absent."""
    haptics = find_haptics(on_android())
    sounds = find_sounds()
    missing = []
    if not haptics.available:
        missing.append(later("This device does not vibrate: taps are confirmed by light and sound."))
    if not sounds.available:
        missing.append(later("No sound device was found: taps and beats are shown by light only."))
    return Device(
        clock=SystemClock(),
        stamps=best_source(on_android()),
        haptics=haptics,
        sounds=sounds,
        screen=WindowScreen(),
        data=data,
        battery=find_battery(on_android()),
        missing=tuple(missing),
    )
