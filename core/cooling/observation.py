"""What each reading says of the temperature: intervals, smoothed by what blurs them.

Change mode: a new number appears at the first renewal of the display after the temperature has crossed into its
bin. With lo the crossing into the new bin, and hi the earlier of (crossing out of the old bin + one refresh) and
(crossing out of the new bin), the renewal lies in [lo, hi) with density 1/refresh, and the tap follows after the
person's delay, normal around its mean. Skipped steps, several in one refresh, are in that rule.

Beat mode: the number shown says that the temperature lay in its bin at the last renewal before the beat. Where
beat and refresh are commensurate, that renewal lies the same time before each beat, which only shifts the
origin of time; elsewhere it lies anywhere within one refresh.

Either way a reading is good with probability 1 − FAULTY; else it is a fault of the person with a broad density."""

from __future__ import annotations

from dataclasses import dataclass
from math import hypot, sqrt

import numpy as np
from numpy.typing import NDArray

from core.bench.readings import Readings
from core.bench.setup import Setup
from core.cooling.normal import cdf

Array = NDArray[np.float64]

FAULTY = 0.02
LATE_s = 4.0  # scale of the exponential that stands for late taps
STRAY_s = 60.0  # width of the flat density that stands for anything else
STRAY_BINS = 40.0
COMMENSURATE = 1e-3
SLACK_JITTERS = 4.0
STILL_AIR_K = 0.03
"""How far a curve by any one law of natural convection lies off another along a run, and a room's air off even:
the published laws differ from θ^(1/4) by up to 0.03 K once scale and stem loss are fitted."""
LEAST_BLUR_s = 2e-3
LEAST_BLUR_BINS = 0.005


@dataclass(frozen=True, slots=True)
class Bins:
    """Readings as intervals [°C]: `lower` and `upper` edge of each, shape (n,).

    `left_C` is the edge at which the temperature left the number that the display showed before: that of the row
    before, or of the next number up where a change in between was not tapped."""

    time_s: Array
    lower_C: Array
    upper_C: Array
    left_C: Array


def bins_of(readings: Readings, setup: Setup) -> Bins:
    """The interval of temperature that each displayed number stands for."""
    shown = np.array(readings.reading_C)
    step = setup.thermometer.resolution_K
    lower = shown - step / 2 if setup.thermometer.rounding == "nearest" else shown
    left = np.concatenate([lower[:1] + step, lower[:-1]])
    return Bins(np.array(readings.time_s), lower, lower + step, np.where(_missed(readings, setup), lower + step, left))


def _missed(readings: Readings, setup: Setup) -> NDArray[np.bool_]:
    """Taps two steps down or more for which the display cannot have skipped: a number before a skip stands for two
    refreshes at the most, as each refresh takes more than one step then."""
    time, shown = np.array(readings.time_s), np.array(readings.reading_C)
    jumps = -np.diff(shown, prepend=shown[0]) > 1.5 * setup.thermometer.resolution_K
    longest = 2.0 * setup.thermometer.refresh_s + SLACK_JITTERS * setup.recording.tap_jitter_s
    result: NDArray[np.bool_] = jumps & (np.diff(time, prepend=time[0]) > longest)
    return result


@dataclass(frozen=True, slots=True)
class Blur:
    """What blurs the edges. `tap_s` and `refresh_s` [s], `meter_K` [K]."""

    refresh_s: float
    tap_lag_s: float
    tap_s: float
    meter_K: float
    commensurate: bool


def blur_of(readings: Readings, setup: Setup) -> Blur:
    """The blur of a bench: refresh, tap delay and its scatter, the stamp's half-width (u = a/√3), meter noise."""
    recording, meter = setup.recording, setup.thermometer
    stamp = readings.stamp_halfwidth_s / sqrt(3.0)
    commensurate = False
    if recording.mode == "beat" and meter.refresh_s > 0.0 and len(readings) > 2:
        gaps = np.diff(np.array(readings.time_s)) / meter.refresh_s
        commensurate = bool(np.max(np.abs(gaps - np.round(gaps))) < COMMENSURATE)
    return Blur(
        refresh_s=meter.refresh_s,
        tap_lag_s=recording.tap_lag_s,
        tap_s=max(sqrt(recording.tap_jitter_s**2 + stamp**2), LEAST_BLUR_s),
        meter_K=hypot(meter.noise_K, STILL_AIR_K) if recording.kind == "still-air" else meter.noise_K,
        commensurate=commensurate,
    )


def change_density(
    time_s: Array, into_s: Array, out_old_s: Array, out_new_s: Array, rate: Array, blur: Blur
) -> Array:
    """Density [1/s] of a good tap at `time_s`, given crossings [s] and rate [K/s]; shapes (n,) or (n, sets)."""
    width = tap_width_s(rate, blur)
    tap = time_s - blur.tap_lag_s
    if blur.refresh_s == 0.0:
        u = (tap - into_s) / width
        return np.exp(-0.5 * u * u) / (width * sqrt(2.0 * np.pi))
    high = latest_s(into_s, out_old_s, out_new_s, blur)
    raw = cdf((tap - into_s) / width) - cdf((tap - high) / width)
    result: Array = np.maximum(raw, 0.0) / blur.refresh_s
    return result


def tap_width_s(rate_K_s: Array, blur: Blur) -> Array:
    """Scatter of a tap about its renewal [s]: the hand's, and the meter's noise over the rate of cooling."""
    if blur.meter_K == 0.0:
        return np.full_like(rate_K_s, blur.tap_s)
    return np.asarray(np.sqrt(blur.tap_s**2 + (blur.meter_K / np.maximum(np.abs(rate_K_s), 1e-6)) ** 2))


def latest_s(into_s: Array, out_old_s: Array, out_new_s: Array, blur: Blur) -> Array:
    """The latest moment [s] at which the renewal that brings a number can come."""
    return np.asarray(np.maximum(np.minimum(out_old_s + blur.refresh_s, out_new_s), into_s + 1e-6))


def faulty_density(time_s: Array, into_s: Array, blur: Blur) -> Array:
    """Density [1/s] of a tap that is a person's fault: late by a few seconds, or anything."""
    behind = time_s - blur.tap_lag_s - into_s
    late = np.where(behind > 0.0, np.exp(-np.maximum(behind, 0.0) / LATE_s) / LATE_s, 0.0)
    return 0.8 * late + 0.2 / STRAY_s


def beat_probability(newest_C: Array, oldest_C: Array, bins: Bins, rows: NDArray[np.intp], blur: Blur) -> Array:
    """Probability that the number shown at a beat is the one that was read.

    `newest_C` is the temperature at the beat, `oldest_C` one refresh before it; shapes (n, sets)."""
    if blur.commensurate or blur.refresh_s == 0.0:
        return moment_probability(newest_C, bins, rows, blur)
    lower, upper = bins.lower_C[rows][:, None], bins.upper_C[rows][:, None]
    blur_K = _blur_K(bins, blur)
    span = np.maximum(oldest_C - newest_C, 1e-9)
    raw = (_ramp(upper, newest_C, oldest_C, blur_K) - _ramp(lower, newest_C, oldest_C, blur_K)) / span
    result: Array = np.maximum(raw, 0.0)
    return result


def moment_probability(then_C: Array, bins: Bins, rows: NDArray[np.intp], blur: Blur) -> Array:
    """The same where the temperature at the renewal is known, shape (n, sets)."""
    lower, upper = bins.lower_C[rows][:, None], bins.upper_C[rows][:, None]
    blur_K = _blur_K(bins, blur)
    result: Array = np.maximum(cdf((upper - then_C) / blur_K) - cdf((lower - then_C) / blur_K), 0.0)
    return result


def _blur_K(bins: Bins, blur: Blur) -> float:
    return max(blur.meter_K, LEAST_BLUR_BINS * float(bins.upper_C[0] - bins.lower_C[0]))


def _ramp(edge: Array, newest: Array, oldest: Array, blur_K: float) -> Array:
    """∫ of Φ((edge − T)/blur) over T from newest to oldest."""
    return _integral((edge - newest) / blur_K, blur_K) - _integral((edge - oldest) / blur_K, blur_K)


def _integral(u: Array, blur_K: float) -> Array:
    result: Array = blur_K * (u * cdf(u) + np.exp(-0.5 * u * u) / sqrt(2.0 * np.pi))
    return result
