"""What a run not yet made will tell of h: Fisher information of change taps and of readings on a beat."""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache
from math import hypot, log, pi, sqrt

import numpy as np

from core.bench.setup import Recording, Thermometer
from core.cooling.normal import cdf
from core.judgement.propagation import Vector

_HEARD = 0.3  # of a refresh: a hand steadier than this lets the fit hear the display's clock, and then tells no edge
_NARROWEST = 0.02  # blur below this share of the width is not believed: no edge is sharper


SPAN_RATIO = 6.7  # of first and last excess over the air; common practice: 90 down to 33 °C in air of 23 °C


def usual_end_C(first_C: float, air_C: float) -> float:
    """Where a run from a first temperature [°C] usually ends, in air of a temperature [°C]."""
    return air_C + (first_C - air_C) / SPAN_RATIO


@dataclass(frozen=True, slots=True)
class Planned:
    """A cooling still to come: decay rate 1/s, first and last excess over the air [K]."""

    rate_s: float
    first_K: float
    last_K: float

    @property
    def length_s(self) -> float:
        """Time from the first to the last excess [s]."""
        return log(self.first_K / self.last_K) / self.rate_s


@dataclass(frozen=True, slots=True)
class Promise:
    """Relative standard uncertainty of the decay rate from readings alone, its relative change for 1 K in the
    measured air temperature, and the number of readings."""

    rate_u_rel: float
    rate_per_air_rel_K: float
    readings: int


@lru_cache(maxsize=1)
def _edge_table() -> tuple[Vector, Vector]:
    """Ratio of width to blur, and the information times blur², on 60 ratios."""
    ratios = np.geomspace(0.05, 100.0, 60)
    values = []
    for r in ratios:
        x = np.linspace(-0.5 * r - 8.0, 0.5 * r + 8.0, 2001)
        density = (cdf(x + 0.5 * r) - cdf(x - 0.5 * r)) / r
        slope = (np.exp(-0.5 * (x + 0.5 * r) ** 2) - np.exp(-0.5 * (x - 0.5 * r) ** 2)) / (r * sqrt(2.0 * pi))
        keep = density > 1e-14
        values.append(float(np.sum(slope[keep] ** 2 / density[keep]) * (x[1] - x[0])))
    return ratios, np.array(values)


def location_information(width: float, blur: float) -> float:
    """Fisher information on the place of a uniform window of `width` smoothed by a normal of `blur`.

    Parameters
    ----------
    width : full width of the window [s]
    blur : standard deviation of the normal [s]

    Returns
    -------
    float, information [1/s²]

    Notes
    -----
    J = ∫ f'²/f. For blur ≫ width 1/(blur² + width²/12); for blur ≪ width 2·0.903/(width·blur), from the two edges.
    Blur is taken as no less than a fiftieth of the width.

    References
    ----------
    Cramér, Mathematical Methods of Statistics (1946), 32.3 (the bound that 1/J is).
    """
    return float(_locations(np.array([width]), np.array([blur]))[0])


def _locations(width: Vector, blur: Vector) -> Vector:
    blur = np.maximum(np.maximum(blur, _NARROWEST * width), 1e-6)
    ratio = width / blur
    ratios, values = _edge_table()
    seen = np.interp(np.log(np.maximum(ratio, ratios[0])), np.log(ratios), values) / blur**2
    result: Vector = np.where(ratio < ratios[0], 1.0 / (blur**2 + width**2 / 12.0), seen)
    return result


def readings_to_come(
    planned: Planned,
    thermometer: Thermometer,
    recording: Recording,
    mode: str,
    from_K: float,
    sharp: bool = True,
) -> tuple[Vector, int]:
    """Fisher information of ln rate, first excess and air temperature, shape (3, 3), in the readings from an excess
    of `from_K` to the last, and their number.

    With `sharp` false a window counts by its standard deviation: a handful of readings seldom meets its edges.

    Notes
    -----
    T = T∞ + θ₀ e^(−βt), t from the first excess. In mode change each tap places the curve in time within one
    refresh, or within one step of the display where that is passed sooner; on a beat each reading places it within
    one step. A steady hand lets the fit hear the display's clock (`core.cooling.clock`), and then blurs no edge;
    else hand, meter noise and, on a beat that is no multiple of the refresh, the unknown phase are the blur.
    """
    step, refresh, jitter = thermometer.resolution_K, thermometer.refresh_s, recording.tap_jitter_s
    rate = planned.rate_s
    if mode == "change":
        excess = _at_changes(rate, from_K, planned.last_K, step, refresh)
    else:
        whole = log(from_K / planned.last_K) / rate
        excess = from_K * np.exp(-rate * np.arange(0.0, whole + 1e-9, recording.beat_s))
    slope, time = rate * excess, np.log(planned.first_K / excess) / rate
    noise = thermometer.noise_K / slope
    if mode == "change":
        hand = 0.0 if refresh > 0.0 and jitter <= _HEARD * refresh else jitter
        width, blur = np.minimum(refresh, step / slope), np.hypot(hand, noise)
    else:
        beats = recording.beat_s / refresh if refresh > 0.0 else 1.0
        phase = 0.0 if abs(beats - round(beats)) < 0.01 * beats else refresh / sqrt(12.0)
        width, blur = step / slope, np.hypot(hypot(jitter, phase), noise)
    told = _locations(width, blur) if sharp else 1.0 / (width**2 / 12.0 + blur**2)
    gradient = np.stack([-time, excess / planned.first_K / slope, (1.0 - excess / planned.first_K) / slope])
    return (gradient * told) @ gradient.T, len(excess)


def _at_changes(rate_s: float, from_K: float, last_K: float, step_K: float, refresh_s: float) -> Vector:
    """The excess at each change of the display: at each renewal while steps are skipped, then at each step."""
    skipping_to = max(last_K, min(from_K, step_K / (rate_s * refresh_s) if refresh_s > 0.0 else from_K))
    fast = from_K * np.exp(-rate_s * refresh_s * np.arange(log(from_K / skipping_to) / max(rate_s * refresh_s, 1e-12)))
    return np.concatenate([fast, np.arange(skipping_to, last_K, -step_K)])


def promise(
    planned: Planned, thermometer: Thermometer, recording: Recording, mode: str, air_u_K: float
) -> Promise:
    """What a planned run in one recording mode will tell of the decay rate.

    Parameters
    ----------
    planned : rate and excess temperatures of the run [1/s, K]
    thermometer, recording : the display and the hand [any]
    mode : `change` or `beat`
    air_u_K : standard uncertainty of the measured air temperature [K]

    Returns
    -------
    Promise

    Notes
    -----
    The rate, the first excess and the air temperature are unknown, the air temperature with the measured one as
    prior. The inverse of the summed information (`readings_to_come`) is the Cramér–Rao bound, which the fit comes
    within a few per cent of.
    """
    information, count = readings_to_come(planned, thermometer, recording, mode, planned.first_K)
    if count < 3:
        return Promise(float("inf"), 0.0, count)
    prior = max(air_u_K, 1e-4) ** -2
    information[2, 2] += prior
    spread = np.linalg.inv(information)
    per_air = float(spread[0, 2]) * prior
    return Promise(sqrt(max(float(spread[0, 0]) - (per_air * air_u_K) ** 2, 0.0)), per_air, count)
