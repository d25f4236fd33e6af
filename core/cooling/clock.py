"""The display's clock, heard through the taps of change mode.

A display renews itself on a steady beat, φ + k R. Taken one by one, a tap tells its renewal only within one
refresh, blurred by the scatter of the hand. But all taps of a run follow renewals of the same clock: where the hand
scatters less than about a third of a refresh, 50 taps give φ and R within a few milliseconds, and with them the
moment of each renewal. The edges of the intervals in which the temperature crossed are sharp then, and the rate of
cooling follows about twice as closely. R is not taken from the set-up but found near it; where the taps keep
no common time (a meter without a steady beat), no clock is found and each tap stands alone, as before."""

from __future__ import annotations

from dataclasses import dataclass
from math import log, pi, sqrt

import numpy as np
from numpy.typing import NDArray

from core.cooling.features import Features
from core.cooling.likelihood import Evidence
from core.cooling.normal import cdf
from core.cooling.observation import Blur, faulty_density

Array = NDArray[np.float64]

FEWEST_TAPS = 12
WIDEST_SCATTER = 0.3  # of a refresh: beyond it the clock tells next to nothing
SEARCH_REL = 0.04  # either side of the refresh in the set-up
CELLS = 4  # grid steps in the time in which clocks drift apart by one refresh
SURE = 8.0  # log-likelihood by which a clock must beat its absence, beyond the number of clocks tried
ROUNDS = 3
FAINT = 1e-7
ODD = 0.05  # share of taps that may lie anywhere
EDGE_s = 2e-3  # how far from steady a renewal may come
EDGE_REL = 0.003  # the same, of a refresh
DOUBT = 2.5  # standard deviations by which scatter must exceed the set-up's before it counts


@dataclass(frozen=True, slots=True)
class Clock:
    """Renewals at `phase_s + k·refresh_s`, with the covariance of the two.

    `hand_s` is the scatter of the taps around it, `edge_s` how far from steady a renewal may come. `tap` and
    `count` list which renewals each tap may have followed: place of the tap, and k; in order of taps, of which
    `first` says where each one begins."""

    phase_s: float
    refresh_s: float
    covariance: Array
    hand_s: float
    edge_s: float
    tap: NDArray[np.intp]
    count: Array
    first: NDArray[np.intp]


def find_clock(evidence: Evidence) -> Clock | None:
    """The clock that the taps keep in common, or None where they keep none, or where it would tell nothing."""
    blur = evidence.blur
    taps = evidence.bins.time_s[1:] - blur.tap_lag_s
    if evidence.mode != "change" or len(taps) < FEWEST_TAPS or blur.tap_s > WIDEST_SCATTER * blur.refresh_s:
        return None
    middle = float(np.mean(taps))
    since = taps - middle
    tried = _periods(blur.refresh_s, float(since[-1] - since[0]))
    turns = np.exp(2j * pi * since[:, None] / tried)
    heard = np.abs(turns.sum(axis=0))
    refresh = float(tried[np.argmax(heard)])
    phase = float(np.angle(turns[:, np.argmax(heard)].sum()) / (2.0 * pi) * refresh)
    covariance: Array = np.zeros((2, 2))
    for _ in range(ROUNDS):
        count = np.round((since - phase) / refresh)
        miss = since - phase - count * refresh
        weight = _on_beat(miss, refresh, blur) / blur.tap_s**2
        total, first, second = weight.sum(), weight @ count, weight @ (count * count)
        determinant = max(total * second - first * first, 1e-300)
        covariance = np.array([[second, -first], [-first, total]]) / determinant
        step = covariance @ np.array([weight @ miss, weight @ (count * miss)])
        phase, refresh = phase + float(step[0]), refresh + float(step[1])
    count = np.round((since - phase) / refresh)
    miss = since - phase - count * refresh
    likelihood = np.sum(np.log((1.0 - ODD) * refresh * _normal(miss, blur.tap_s) + ODD))
    if likelihood < SURE + log(len(tried)):
        return None
    hand, edge = _scatter(miss, weight * blur.tap_s**2, blur)
    return _with_candidates(middle + phase, refresh, covariance * (hand / blur.tap_s) ** 2, taps, (hand, edge))


def _periods(refresh_s: float, span_s: float) -> Array:
    cells = int(np.ceil(2.0 * SEARCH_REL * span_s / refresh_s * CELLS)) + 1
    rates = np.linspace(1.0 - SEARCH_REL, 1.0 + SEARCH_REL, max(cells, 3)) / refresh_s
    result: Array = 1.0 / rates
    return result


def _normal(miss: Array, sd: float) -> Array:
    result: Array = np.exp(-0.5 * (miss / sd) ** 2) / (sd * sqrt(2.0 * pi))
    return result


def _on_beat(miss: Array, refresh_s: float, blur: Blur) -> Array:
    good = (1.0 - ODD) * refresh_s * _normal(miss, blur.tap_s)
    result: Array = good / (good + ODD)
    return result


def _scatter(miss: Array, on_beat: Array, blur: Blur) -> tuple[float, float]:
    """Scatter of the taps [s], and of the renewals themselves [s].

    Taps that scatter beyond doubt more than the set-up has it may do so because renewals come unsteadily."""
    steady = EDGE_s**2 + (EDGE_REL * blur.refresh_s) ** 2
    found = float(np.sum(on_beat * miss**2) / np.sum(on_beat))
    if found <= blur.tap_s**2 * (1.0 + DOUBT * sqrt(2.0 / len(miss))):
        return blur.tap_s, sqrt(steady)
    return sqrt(found), sqrt(steady + found - blur.tap_s**2)


def _with_candidates(
    phase_s: float, refresh_s: float, covariance: Array, taps: Array, scatter: tuple[float, float]
) -> Clock:
    """The clock with, for each tap, the renewals near enough to have been the one."""
    hand, edge = scatter
    nearest = np.round((taps - phase_s) / refresh_s)
    around = nearest[:, None] + np.array([-1.0, 0.0, 1.0])
    miss = (taps[:, None] - phase_s - around * refresh_s) / (1.3 * hand)
    near = np.exp(-0.5 * miss**2) > FAINT
    near[:, 1] = True
    tap, column = np.nonzero(near)
    first = np.searchsorted(tap, np.arange(len(taps)))
    return Clock(phase_s, refresh_s, covariance, hand, edge, tap, around[tap, column], first)


def clock_log_likelihood(
    evidence: Evidence, features: Features, clock: Clock, shift: Array, phase_s: Array, refresh_s: Array
) -> Array:
    """Log-likelihood of the taps that count, all on one clock.

    Parameters
    ----------
    evidence, features : of the run, around a point of linearisation
    clock : as found
    shift : parameter shifts from that point, shape (sets, 3)
    phase_s, refresh_s : of the clock [s], shape (sets,)
    """
    blur, rows = evidence.blur, evidence.rows
    into, out_old, out_new = features.at(shift)
    tap = clock.tap
    renewal = phase_s + clock.count[:, None] * refresh_s
    meter = blur.meter_K / np.maximum(np.abs(features.rate_K_s), 1e-6)
    edge = np.sqrt(clock.edge_s**2 + meter**2)[tap][:, None]
    out = np.minimum(out_old + refresh_s, out_new)[tap]
    time = evidence.bins.time_s[rows]
    hand = _normal(time[tap][:, None] - blur.tap_lag_s - renewal, clock.hand_s)
    if blur.meter_K > 0.0:
        inside = np.maximum(cdf((renewal - into[tap]) / edge) - cdf((renewal - out) / edge), 0.0)
    else:
        within = np.minimum(renewal - into[tap], out - renewal) / (2.0 * sqrt(3.0) * edge)
        inside = np.minimum(np.maximum(within + 0.5, 0.0), 1.0)
    good = np.add.reduceat(hand * inside, clock.first, axis=0)
    fault = faulty_density(time, features.value[0], blur)[:, None]
    faulty = evidence.faulty()[:, None]
    logs = np.log((1.0 - faulty) * good + faulty * fault + 1e-300)
    place = (features.start_C + shift @ features.start_slope - evidence.start_C) / evidence.start_u_K
    result: Array = np.sum(logs[evidence.counts[rows]], axis=0) - 0.5 * place**2
    return result
