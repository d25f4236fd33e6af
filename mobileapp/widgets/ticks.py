"""Where the marks of an axis go: at round numbers."""

from __future__ import annotations

import math

from mobileapp.figures import localised


def round_ticks(low: float, high: float, wanted: int = 6) -> tuple[list[float], int]:
    """Ticks at multiples of 1, 2 or 5 times a power of ten within [low, high], and the decimals they need."""
    span = high - low
    if not (math.isfinite(span) and span > 0):
        return [], 0
    rough = span / max(wanted, 1)
    power = math.floor(math.log10(rough))
    # the step is kept as an integer multiple of a power of ten, so that 0.1 + 0.2 never shows
    factor = next(f for f in (1, 2, 5, 10) if f * 10.0**power >= rough * (1 - 1e-9))
    step = factor * 10.0**power
    first, last = math.ceil(low / step - 1e-9), math.floor(high / step + 1e-9)
    decimals = max(0, -power if factor < 10 else -power - 1)
    return [k * factor * 10.0**power for k in range(first, last + 1)], decimals


def decade_ticks(low: float, high: float, wanted: int = 6) -> list[float]:
    """Ticks for a logarithmic axis over the values [low, high]: powers of ten with 2 and 5 between where there is
    room, or round numbers where the axis spans less than a decade."""
    if not 0 < low < high:
        return []
    if high / low < 4.0:
        return [tick for tick in round_ticks(low, high, wanted)[0] if tick > 0]
    powers = range(math.floor(math.log10(low)), math.ceil(math.log10(high)) + 1)
    for factors in ((1, 2, 3, 4, 5, 6, 8), (1, 2, 5), (1, 3), (1,)):
        marks = (f * 10.0**p for p in powers for f in factors)
        ticks = [mark for mark in marks if low * (1 - 1e-9) <= mark <= high * (1 + 1e-9)]
        if len(ticks) <= wanted + 2 or factors == (1,):
            return ticks
    return []


def tick_text(value: float, decimals: int) -> str:
    """The number beside a tick."""
    text = f"{value:.{decimals}f}"
    return localised("0" if float(text) == 0 and decimals == 0 else text)


def decade_text(value: float) -> str:
    """The number beside a tick of a logarithmic axis."""
    return localised(f"{value:.12g}")
