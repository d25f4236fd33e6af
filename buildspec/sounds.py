"""Makes the app's sounds: `python buildspec/sounds.py` writes them anew into mobileapp/sounds."""

from __future__ import annotations

import math
import struct
import wave
from pathlib import Path

FOLDER = Path(__file__).resolve().parent.parent / "mobileapp" / "sounds"
RATE_HZ = 44100
PEAK = 22000

# name: (segments of (frequency Hz, duration s), share of the second partial)
SOUNDS: dict[str, tuple[tuple[tuple[float, float], ...], float]] = {
    "confirm": (((1480.0, 0.035),), 0.3),
    "refuse": (((196.0, 0.09), (0.0, 0.03), (147.0, 0.12)), 0.6),
    "count_in": (((660.0, 0.06),), 0.2),
    "beat": (((990.0, 0.09),), 0.2),
    "done": (((587.0, 0.10), (740.0, 0.10), (880.0, 0.18)), 0.2),
}


def samples(segments: tuple[tuple[float, float], ...], partial: float) -> list[int]:
    """Each segment fades in over 2 ms and out over its second half, so that nothing clicks by itself."""
    made: list[int] = []
    for frequency, duration in segments:
        count = round(duration * RATE_HZ)
        for i in range(count):
            t = i / RATE_HZ
            envelope = min(1.0, t / 0.002) * min(1.0, 2.0 * (1.0 - i / count))
            tone = math.sin(2 * math.pi * frequency * t) + partial * math.sin(4 * math.pi * frequency * t)
            made.append(round(PEAK * envelope * tone / (1 + partial)))
    return made


def write_all(folder: Path = FOLDER) -> None:
    folder.mkdir(parents=True, exist_ok=True)
    for name, (segments, partial) in SOUNDS.items():
        values = samples(segments, partial)
        with wave.open(str(folder / f"{name}.wav"), "wb") as file:
            file.setnchannels(1)
            file.setsampwidth(2)
            file.setframerate(RATE_HZ)
            file.writeframes(struct.pack(f"<{len(values)}h", *values))


if __name__ == "__main__":
    write_all()
