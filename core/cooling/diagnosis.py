"""Which readings disagree with the curve, and how: each named with its row and the likely cause."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from core.bench.readings import Readings
from core.cooling.features import Features
from core.cooling.fit import LeftOut
from core.cooling.likelihood import Evidence, densities
from core.cooling.normal import cdf, quantile

Array = NDArray[np.float64]

DOUBLED_s = 0.35  # a second tap sooner than this after another, where the display had no time to change
DOUBTFUL = 0.5  # a reading is named where the fault is likelier than the good reading


def share_good(evidence: Evidence, features: Features) -> Array:
    """Probability of each feature row that it is a good reading, given the fitted curve."""
    good, fault = densities(evidence, features.value[:, :, None], features.rate_K_s)
    faulty = evidence.faulty()
    result: Array = (1.0 - faulty) * good[:, 0] / ((1.0 - faulty) * good[:, 0] + faulty * fault[:, 0] + 1e-300)
    return result


def scores(evidence: Evidence, features: Features) -> tuple[Array, Array, Array]:
    """Per feature row: miss in time [s], miss in temperature [K], and the standard score of the reading.

    The score is the normal quantile of the reading's place within what the curve allows."""
    rows, blur = evidence.rows, evidence.blur
    if evidence.mode == "beat":
        shown = np.mean(features.value, axis=0)
        lower, upper = evidence.bins.lower_C[rows], evidence.bins.upper_C[rows]
        miss_K = (lower + upper) / 2.0 - shown
        spread = max(blur.meter_K, 0.02 * float(upper[0] - lower[0]))
        place = (shown - lower) / (upper - lower)
        outside = np.where(place < 0.0, shown - lower, np.where(place > 1.0, shown - upper, 0.0)) / spread
        inside = quantile(np.clip(place, 1e-3, 1.0 - 1e-3))
        return miss_K / np.maximum(np.abs(features.rate_K_s), 1e-9), miss_K, inside + outside
    into, out_old, out_new = features.value
    tap = evidence.bins.time_s[rows] - blur.tap_lag_s
    width = np.sqrt(blur.tap_s**2 + (blur.meter_K / np.maximum(np.abs(features.rate_K_s), 1e-6)) ** 2)
    if blur.refresh_s == 0.0:
        miss = tap - into
        return miss, miss * features.rate_K_s, miss / width
    high = np.maximum(np.minimum(out_old + blur.refresh_s, out_new), into + 1e-6)
    below, above = (tap - into) / width, (tap - high) / width
    ramp = _ramp(below) - _ramp(above)
    place = np.clip(ramp * width / (high - into), 0.0, 1.0)
    edge = np.where(below < -3.0, below, np.where(above > 3.0, above, 0.0))
    score = np.where(edge != 0.0, edge, quantile(np.clip(place, 1e-4, 1.0 - 1e-4)))
    miss = tap - (into + high) / 2.0
    return miss, miss * features.rate_K_s, score


def _ramp(u: Array) -> Array:
    result: Array = u * cdf(u) + np.exp(-0.5 * u * u) / np.sqrt(2.0 * np.pi)
    return result


def doubtful(evidence: Evidence, features: Features, readings: Readings) -> list[LeftOut]:
    """The rows that are likelier a person's fault than a good reading."""
    share = share_good(evidence, features)
    miss_s, miss_K, _ = scores(evidence, features)
    named = []
    for place, row in enumerate(evidence.rows):
        if share[place] < DOUBTFUL and evidence.counts[row] and not evidence.certain[row]:
            named.append(_named(int(row), float(miss_s[place]), float(miss_K[place]), readings, evidence))
    return named


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
