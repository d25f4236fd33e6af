"""The log-likelihood of a run around a point of linearisation, and the normal approximation that leads there."""

from __future__ import annotations

from dataclasses import dataclass
from math import sqrt

import numpy as np
from numpy.typing import NDArray

from core.cooling.features import Features, beat_features, change_features
from core.cooling.model import CoolingModel
from core.cooling.observation import (
    FAULTY,
    STRAY_BINS,
    Bins,
    Blur,
    beat_probability,
    change_density,
    faulty_density,
    latest_s,
    tap_width_s,
)

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class Evidence:
    """The readings of one record, as the likelihood takes them.

    `counts` (n,) is true for rows that enter; in change mode row 0 only places the start, by `start_C` and
    `start_u_K`. `certain` (n,) is true for rows that a person keeps, which are good beyond doubt. The curve runs
    over `record_s` from the first row on."""

    model: CoolingModel
    bins: Bins
    blur: Blur
    mode: str
    record_s: float
    counts: NDArray[np.bool_]
    certain: NDArray[np.bool_]
    start_C: float
    start_u_K: float

    def features(self, parameters: Array) -> Features:
        """The features at a point."""
        if self.mode == "beat":
            return beat_features(self.model, parameters, self.bins, self.record_s, self.blur)
        return change_features(self.model, parameters, self.bins, self.record_s)

    @property
    def rows(self) -> NDArray[np.intp]:
        """Rows that the features stand for."""
        return np.arange(0 if self.mode == "beat" else 1, len(self.bins.time_s))

    def faulty(self) -> Array:
        """Probability, per feature row, that a reading is a person's fault."""
        return np.where(self.certain[self.rows], 1e-12, FAULTY)


@dataclass(frozen=True, slots=True)
class Normal:
    """A reading as a normal one: miss and its standard deviation (s or K), slope of the prediction, share good."""

    miss: Array
    sd: Array
    slope: Array
    good: Array


def as_normal(evidence: Evidence, features: Features) -> Normal:
    """Each reading replaced by a normal one with the mean and spread of its interval."""
    return (_beat_as_normal if evidence.mode == "beat" else _change_as_normal)(evidence, features)


def _change_as_normal(evidence: Evidence, features: Features) -> Normal:
    blur, rows = evidence.blur, evidence.rows
    into, out_old, out_new = features.value
    by_new = out_new < out_old + blur.refresh_s
    high = latest_s(into, out_old, out_new, blur)
    high_slope = np.where(by_new[:, None], features.slope[2], features.slope[1])
    width = tap_width_s(features.rate_K_s, blur)
    sd = np.sqrt((high - into) ** 2 / 12.0 + width**2)
    middle, slope = (into + high) / 2.0, (features.slope[0] + high_slope) / 2.0
    if blur.refresh_s == 0.0:
        middle, slope, sd = into, features.slope[0], width
    time = evidence.bins.time_s[rows]
    miss = time - blur.tap_lag_s - middle
    sd = sd * _widening(miss, sd)
    good = np.exp(-0.5 * (miss / sd) ** 2) / (sd * sqrt(2.0 * np.pi))
    return Normal(miss, sd, slope, share_of(good, faulty_density(time, into, blur), evidence.faulty()))


def _beat_as_normal(evidence: Evidence, features: Features) -> Normal:
    blur, rows = evidence.blur, evidence.rows
    lower, upper = evidence.bins.lower_C[rows], evidence.bins.upper_C[rows]
    step = upper - lower
    fall = 0.0 if blur.commensurate else np.abs(features.rate_K_s) * blur.refresh_s
    sd = np.sqrt(step**2 / 12.0 + fall**2 / 12.0 + blur.meter_K**2)
    middle = np.mean(features.value, axis=0)
    miss = (lower + upper) / 2.0 - middle
    sd = sd * _widening(miss, sd)
    good = np.exp(-0.5 * (miss / sd) ** 2) / (sd * sqrt(2.0 * np.pi)) * step
    return Normal(miss, sd, np.mean(features.slope, axis=0), share_of(good, 1.0 / STRAY_BINS, evidence.faulty()))


def _widening(miss: Array, sd: Array) -> float:
    """How much wider the misses lie than their deviations have it; 1 near the solution, large far from it."""
    middle = len(miss) // 2
    return max(1.0, float(np.partition(np.abs(miss) / sd, middle)[middle]))


def share_of(good: Array, fault: Array | float, faulty: Array) -> Array:
    """Probability that a reading is a good one, given its density if it is good and if it is a fault."""
    result: Array = (1.0 - faulty) * good / ((1.0 - faulty) * good + faulty * fault + 1e-300)
    return result


def log_likelihood(evidence: Evidence, features: Features, shift: Array) -> Array:
    """Log-likelihood of the rows that count for parameter shifts of shape (sets, 3), shape (sets,)."""
    good, fault = densities(evidence, features.at(shift), features.rate_K_s)
    faulty = evidence.faulty()[:, None]
    logs = np.log((1.0 - faulty) * good + faulty * fault + 1e-300)
    place = (features.start_C + shift @ features.start_slope - evidence.start_C) / evidence.start_u_K
    result: Array = np.sum(logs[evidence.counts[evidence.rows]], axis=0) - 0.5 * place**2
    return result


def densities(evidence: Evidence, values: Array, rate_K_s: Array) -> tuple[Array, Array]:
    """Density of each reading if it is good, and if it is a fault; shapes (n, sets)."""
    rows = evidence.rows
    if evidence.mode == "beat":
        oldest = values[-1] if len(values) > 1 else values[0]
        good = beat_probability(values[0], oldest, evidence.bins, rows, evidence.blur)
        return good, np.full_like(good, 1.0 / STRAY_BINS)
    time = evidence.bins.time_s[rows][:, None]
    good = change_density(time, values[0], values[1], values[2], rate_K_s[:, None], evidence.blur)
    return good, faulty_density(time, values[0], evidence.blur)
