"""Which readings disagree with the curve, and how: each named with its row and the likely cause."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from core.bench.readings import Readings
from core.cooling.features import Features
from core.cooling.fit import LeftOut
from core.cooling.likelihood import Evidence, densities, share_of
from core.cooling.normal import cdf, density, quantile
from core.cooling.observation import faulty_density, latest_s, tap_width_s

Array = NDArray[np.float64]

DOUBLED_s = 0.35  # a second tap sooner than this after another, where the display had no time to change
DOUBTFUL = 0.5  # a reading is named where the fault is likelier than the good reading


@dataclass(frozen=True, slots=True)
class Misses:
    """How each feature row lies to the fitted curve, shape (n,): its miss in time [s] and in temperature [K], its
    standard score (the normal quantile of its place within what the curve allows), and the probability that it is
    a good reading."""

    miss_s: Array
    miss_K: Array
    score: Array
    share_good: Array


def misses(evidence: Evidence, features: Features) -> Misses:
    """All rows beside the curve."""
    return (_of_beats if evidence.mode == "beat" else _of_taps)(evidence, features)


def _of_beats(evidence: Evidence, features: Features) -> Misses:
    rows, blur = evidence.rows, evidence.blur
    shown = np.mean(features.value, axis=0)
    lower, upper = evidence.bins.lower_C[rows], evidence.bins.upper_C[rows]
    miss_K = (lower + upper) / 2.0 - shown
    spread = max(blur.meter_K, 0.02 * float(upper[0] - lower[0]))
    place = (shown - lower) / (upper - lower)
    outside = np.where(place < 0.0, shown - lower, np.where(place > 1.0, shown - upper, 0.0)) / spread
    inside = quantile(np.clip(place, 1e-3, 1.0 - 1e-3))
    good, fault = densities(evidence, features.value[:, :, None], features.rate_K_s)
    share = share_of(good[:, 0], fault[:, 0], evidence.faulty())
    return Misses(miss_K / np.maximum(np.abs(features.rate_K_s), 1e-9), miss_K, inside + outside, share)


def _of_taps(evidence: Evidence, features: Features) -> Misses:
    blur, time = evidence.blur, evidence.bins.time_s[evidence.rows]
    into, out_old, out_new = features.value
    tap, width = time - blur.tap_lag_s, tap_width_s(features.rate_K_s, blur)
    fault = faulty_density(time, into, blur)
    if blur.refresh_s == 0.0:
        miss, score = tap - into, (tap - into) / width
        good = density(score) / width
        return Misses(miss, miss * features.rate_K_s, score, share_of(good, fault, evidence.faulty()))
    high = latest_s(into, out_old, out_new, blur)
    below, above = (tap - into) / width, (tap - high) / width
    since, until = cdf(below), cdf(above)
    ramp = below * since + density(below) - above * until - density(above)
    place = np.minimum(np.maximum(ramp * width / (high - into), 1e-4), 1.0 - 1e-4)
    edge = np.where(below < -3.0, below, np.where(above > 3.0, above, 0.0))
    score = np.where(edge != 0.0, edge, quantile(place))
    miss = tap - (into + high) / 2.0
    good = np.maximum(since - until, 0.0) / blur.refresh_s
    return Misses(miss, miss * features.rate_K_s, score, share_of(good, fault, evidence.faulty()))


def doubtful(evidence: Evidence, found: Misses, readings: Readings) -> list[LeftOut]:
    """The rows that are likelier a person's fault than a good reading."""
    rows = evidence.rows
    doubt = (found.share_good < DOUBTFUL) & evidence.counts[rows] & ~evidence.certain[rows]
    return [
        _named(int(rows[place]), float(found.miss_s[place]), float(found.miss_K[place]), readings, evidence)
        for place in np.flatnonzero(doubt)
    ]


def _named(row: int, miss_s: float, miss_K: float, readings: Readings, evidence: Evidence) -> LeftOut:
    shown, time = readings.reading_C[row], readings.time_s[row]
    step = float(evidence.bins.upper_C[0] - evidence.bins.lower_C[0])
    where = f"Row {row + 1} ({shown:g} °C at {time:.1f} s)"
    if evidence.mode == "beat":
        return LeftOut(
            row,
            "slip",
            f"{where} lies {abs(miss_K):.1f} K {_side(miss_K)} the curve: most likely a slip of a digit.",
        )
    if row > 0 and time - readings.time_s[row - 1] < DOUBLED_s and miss_s < 0.0:
        return LeftOut(row, "doubled", f"{where} follows the tap before too soon: most likely one tap made two.")
    if miss_s > 0.0:
        return LeftOut(row, "late", f"{where} comes {miss_s:.1f} s after the curve: most likely a late tap.")
    steps = round(abs(miss_K) / step)
    if steps >= 1:
        return LeftOut(
            row,
            "missed",
            f"{where} comes {-miss_s:.1f} s before the curve: a step of the display may be miscounted.",
        )
    return LeftOut(row, "early", f"{where} comes {-miss_s:.1f} s before the curve: most likely an early tap.")


def _side(miss: float) -> str:
    return "above" if miss > 0.0 else "below"
