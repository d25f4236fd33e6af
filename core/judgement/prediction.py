"""What a run not yet made will tell of h: Fisher information of change taps and of readings on a beat."""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache
from math import erf, exp, hypot, log, pi, sqrt

import numpy as np

from core.bench.setup import Recording, Thermometer
from core.judgement.propagation import Vector

_HEARD = 0.3  # of a refresh: a hand steadier than this lets the fit hear the display's clock, and then tells no edge
_NARROWEST = 0.02  # blur below this share of the width is not believed: no edge is sharper


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
        upper, lower = (np.array([erf(z / sqrt(2.0)) for z in x + side]) for side in (0.5 * r, -0.5 * r))
        density = (upper - lower) / (2.0 * r)
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
    blur = max(blur, _NARROWEST * width, 1e-6)
    ratio = width / blur
    ratios, values = _edge_table()
    if ratio < ratios[0]:
        return 1.0 / (blur**2 + width**2 / 12.0)
    return float(np.interp(log(ratio), np.log(ratios), values)) / blur**2


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
    T = T∞ + θ₀ e^(−βt) with ln β, ln θ₀ and T∞ unknown, T∞ with the measured air as prior. In mode change each
    tap places the curve in time within one refresh, or within one step of the display where that is passed
    sooner; on a beat each reading places it within one step. A steady hand lets the fit hear the display's clock
    (`core.cooling.clock`), and then blurs no edge; else hand, meter noise and, on a beat that is no multiple
    of the refresh, the unknown phase are the blur. The inverse of the summed information is the Cramér–Rao bound,
    which the fit comes within a few per cent of.
    """
    step, refresh, jitter = thermometer.resolution_K, thermometer.refresh_s, recording.tap_jitter_s
    beats = recording.beat_s / refresh if refresh > 0.0 else 1.0
    phase = 0.0 if abs(beats - round(beats)) < 0.01 * beats else refresh / sqrt(12.0)
    heard = refresh > 0.0 and jitter <= _HEARD * refresh
    hand = 0.0 if heard else jitter
    information = np.zeros((3, 3))
    time, count = 0.0, 0
    while True:
        excess = planned.first_K * exp(-planned.rate_s * time)
        slope = planned.rate_s * excess
        if mode == "change":
            width, blur, gap = min(refresh, step / slope), hypot(hand, thermometer.noise_K / slope), step / slope
            gap = max(refresh, gap)
        else:
            width, gap = step / slope, recording.beat_s
            blur = sqrt(jitter**2 + phase**2 + (thermometer.noise_K / slope) ** 2)
        if excess < planned.last_K:
            break
        gradient = np.array([-planned.rate_s * time * excess, excess, 1.0]) / slope
        information += location_information(width, blur) * np.outer(gradient, gradient)
        time, count = time + gap, count + 1
    prior = max(air_u_K, 1e-4) ** -2
    information[2, 2] += prior
    if count < 3:
        return Promise(float("inf"), 0.0, count)
    spread = np.linalg.inv(information)
    per_air = float(spread[0, 2]) * prior
    return Promise(sqrt(max(float(spread[0, 0]) - (per_air * air_u_K) ** 2, 0.0)), per_air, count)
