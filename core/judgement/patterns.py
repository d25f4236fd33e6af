"""What a table of readings gives away about how it was made: the beat, the display's refresh and step, and whether
the residuals of a fit still hold a pattern."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import erfc, exp, log, sqrt

import numpy as np

from core.judgement.propagation import Vector
from core.judgement.student import chi_square_tail

_WAVES = 4  # slow waves over the run that the smooth test looks for
_PERIODS_S = (0.25, 6.0)  # refresh times of meters; a hand blurs shorter ones away
_CHANCE = 1e-5  # probability that free tap times look like a grid of that strength


@dataclass(frozen=True, slots=True)
class Pattern:
    """Probabilities that a sound run shows at least this much structure: slow waves, and neighbours alike;
    `probability` is that of the rarer, doubled for having looked twice (Bonferroni)."""

    waves: float
    neighbours: float

    @property
    def probability(self) -> float:
        return min(1.0, 2.0 * min(self.waves, self.neighbours))


def residual_pattern(scores: Sequence[float], natural: float = 0.0) -> Pattern | None:
    """Whether standardised residuals, in order of time, are free of structure.

    Two tests of N(0, 1) scores: a smooth test, the sum of the squared projections on the first four cosines over
    the run, chi-square with four degrees of freedom (the fit has already taken out part of the slowest ones, so
    the test errs on the quiet side); and the lag-one autocorrelation, normal with variance 1/n. Scores are held to
    ±3, so that one late tap does not pose as a pattern.

    Parameters
    ----------
    scores : standardised residuals of the readings in the fit, shape (n,) [-]
    natural : correlation of neighbours that needs no cause; what exceeds it counts, and slow waves are expected
        to be (1 + r)/(1 − r) times as strong [-]

    Returns
    -------
    Pattern, or None with fewer than 8 scores

    References
    ----------
    Neyman, Skandinavisk Aktuarietidskrift 20 (1937) 149–199 (smooth test).
    Box, Jenkins, Reinsel and Ljung, Time Series Analysis, 5th ed. (2015), 2.1.6 (variance of the autocorrelation).
    """
    z = np.clip(np.asarray(scores, dtype=float), -3.0, 3.0)
    n = len(z)
    if n < 8:
        return None
    order = np.arange(1, _WAVES + 1)[:, np.newaxis]
    waves = sqrt(2.0 / n) * np.cos(np.pi * order * (np.arange(n) + 0.5) / n)
    strength = float(np.sum((waves @ z) ** 2)) * (1.0 - natural) / (1.0 + natural)
    spread = float(z @ z)
    r = abs(float(z[1:] @ z[:-1]) / spread) if spread > 0.0 else 0.0
    return Pattern(chi_square_tail(strength, _WAVES), erfc(max(r - natural, 0.0) * sqrt(n / 2.0)))


def skipping_share(reading_C: Sequence[float], resolution_K: float) -> float:
    """Share of the readings that follow the one before by more than one step of the display."""
    return float(np.mean(np.abs(np.diff(np.asarray(reading_C, dtype=float))) > 1.5 * resolution_K))


def run_chance(doubted: Sequence[int], readings: int, fault_rate: float = 0.05) -> float:
    """Chance that single slips of the hand put as many readings in doubt in a row as were found.

    A run of k among n readings has a chance of at most n·q^k, q being the rate of slips (union bound).

    Parameters
    ----------
    doubted : rows of the readings in doubt, in order [-]
    readings : number of readings [-]
    fault_rate : share of readings at which a hand slips; one in twenty, common practice [-]

    Returns
    -------
    float, chance [-]
    """
    longest = length = 0
    before = -2
    for row in doubted:
        length = length + 1 if row == before + 1 else 1
        longest, before = max(longest, length), row
    return min(1.0, readings * fault_rate**longest)


def beat_share(time_s: Sequence[float]) -> float:
    """Share of the intervals between readings within 10 % of the median interval or a multiple of it: near 1 for
    readings on a beat, far below for changes of a display that slows down."""
    gaps = np.diff(np.asarray(time_s, dtype=float))
    multiples = gaps / np.median(gaps)
    return float(np.mean(np.abs(multiples - np.maximum(np.round(multiples), 1.0)) < 0.1))


def gap_growth(time_s: Sequence[float]) -> float:
    """Mean interval in the last third of the record over that in the first: near 1 on a beat, 2 and more for the
    changes of a display that slows down."""
    gaps = np.diff(np.asarray(time_s, dtype=float))
    third = max(1, len(gaps) // 3)
    return float(gaps[-third:].mean() / gaps[:third].mean())


def repeated_share(reading_C: Sequence[float]) -> float:
    """Share of the readings that repeat the one before: zero where each row is a change of the display."""
    return float(np.mean(np.diff(np.asarray(reading_C, dtype=float)) == 0.0))


def display_step(reading_C: Sequence[float], resolution_K: float) -> float:
    """The step that the shown numbers have in common [K], as a multiple of a hundredth of `resolution_K`."""
    steps = np.round(np.abs(np.diff(np.asarray(reading_C, dtype=float))) / (0.01 * resolution_K)).astype(np.int64)
    return float(np.gcd.reduce(steps)) * 0.01 * resolution_K


def refresh_grid(time_s: Sequence[float], longest: int = 150) -> float | None:
    """Refresh time that tap times betray, or None where they betray none.

    Taps follow a display that changes only when it renews, so their times lie on a grid of the refresh time,
    blurred by the hand. The grid is looked for by Rayleigh's statistic n·R², R = |mean exp(2πi t/P)|; of the
    periods that stand out the longest is the refresh (its fractions stand out as well).

    Parameters
    ----------
    time_s : times of the taps, shape (n,) [s]
    longest : how many taps, from the first on, are looked at [-]

    Returns
    -------
    float, period of the grid [s], or None

    References
    ----------
    Mardia and Jupp, Directional Statistics (2000), 6.3.1 (Rayleigh test).
    """
    t = np.asarray(time_s, dtype=float)[1 : longest + 1]
    n = len(t)
    if n < 10:
        return None
    t = t - t[0]
    step = 0.25 / float(t[-1])
    frequencies = np.arange(1.0 / _PERIODS_S[1], 1.0 / _PERIODS_S[0], step)
    strength = _rayleigh(frequencies, t)
    needed = log(len(frequencies) / _CHANCE)
    peaks = np.flatnonzero(strength > max(needed, 0.3 * n))
    if len(peaks) == 0:
        return None
    strong = peaks[strength[peaks] > 0.6 * float(strength[peaks].max())]
    near = frequencies[strong[0]] + step * np.linspace(-2.0, 2.0, 81)
    return 1.0 / float(near[int(np.argmax(_rayleigh(near, t)))])


def _rayleigh(frequencies: Vector, t: Vector) -> Vector:
    phases = np.exp(2j * np.pi * frequencies[:, np.newaxis] * t)
    return np.asarray(np.abs(phases.mean(axis=1)) ** 2 * len(t), dtype=float)


def grid_visibility(refresh_s: float, jitter_s: float) -> float:
    """Expected R of tap times on a grid of `refresh_s` blurred by a hand of `jitter_s`: exp(−2π²σ²/P²)."""
    return exp(-2.0 * (np.pi * jitter_s / refresh_s) ** 2) if refresh_s > 0.0 else 0.0
