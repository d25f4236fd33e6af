"""The display's clock, heard through the taps of change mode.

A display renews itself on a steady beat, φ + k R. Taken one by one, a tap tells its renewal only within one
refresh, blurred by the scatter of the hand. But all taps of a run follow renewals of the same clock: where the hand
scatters less than about a third of a refresh, 50 taps give φ and R within a few milliseconds, and with them the
moment of each renewal. The edges of the intervals in which the temperature crossed are sharp then, and the rate of
cooling follows about twice as closely. R is not taken from the set-up but found near it; where the taps keep
no common time (a meter without a steady beat), no clock is found and each tap stands alone, as before."""

from __future__ import annotations

from dataclasses import dataclass, replace
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
NEVER_s = 1e6
REACH = 6.0  # deviations from the edges of its interval at which a renewal is beyond doubt inside
QUIET = 3.0  # scatters of the hand within which a tap is beyond doubt good
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


def could_be_heard(blur: Blur) -> bool:
    """Whether the hand scatters little enough for the taps to keep the display's clock."""
    return blur.tap_s <= WIDEST_SCATTER * blur.refresh_s


def find_clock(evidence: Evidence) -> Clock | None:
    """The clock that the taps keep in common, or None where they keep none, or where it would tell nothing."""
    blur = evidence.blur
    taps = evidence.bins.time_s[1:] - blur.tap_lag_s
    if evidence.mode != "change" or len(taps) < FEWEST_TAPS or not could_be_heard(blur):
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


def later_taps(clock: Clock, taps: Array) -> Clock:
    """The same clock for taps [s, person's lag taken off] that came after it was found."""
    return _with_candidates(clock.phase_s, clock.refresh_s, clock.covariance, taps, (clock.hand_s, clock.edge_s))


@dataclass(frozen=True, slots=True)
class Heard:
    """The taps of a run on a clock, made ready for many sets of parameters.

    A tap whose renewal lies far inside its interval tells of the clock alone, as one square of its miss: all such
    taps are summed beforehand into a square of the clock's two parameters (`quiet`: constant, pull and square).
    The rest is gone through one by one; `tap`, `count`, `first` are their renewals as in `Clock`."""

    clock: Clock
    features: Features
    time_s: Array
    fault: Array
    faulty: Array
    edge_s: Array
    meter: bool
    tap: NDArray[np.intp]
    count: Array
    first: NDArray[np.intp]
    quiet: tuple[float, Array, Array]
    start_C: float
    start_u_K: float

    def log_likelihood(self, shift: Array, phase_s: Array, refresh_s: Array) -> Array:
        """Log-likelihood, shape (sets,), of the taps that count.

        Parameters
        ----------
        shift : parameter shifts from the point of linearisation, shape (sets, 3)
        phase_s, refresh_s : of the clock [s], shape (sets,)
        """
        features, tap = self.features, self.tap
        into, out_old, out_new = features.at(shift)
        renewal = phase_s + self.count[:, None] * refresh_s
        edge = self.edge_s[tap][:, None]
        out = np.minimum(out_old + refresh_s, out_new)[tap]
        hand = _normal(self.time_s[tap][:, None] - renewal, self.clock.hand_s)
        if self.meter:
            inside = np.maximum(cdf((renewal - into[tap]) / edge) - cdf((renewal - out) / edge), 0.0)
        else:
            within = np.minimum(renewal - into[tap], out - renewal) / (2.0 * sqrt(3.0) * edge)
            inside = np.minimum(np.maximum(within + 0.5, 0.0), 1.0)
        good = np.add.reduceat(hand * inside, self.first, axis=0) if len(self.first) else hand
        logs = np.log((1.0 - self.faulty[:, None]) * good + (self.faulty * self.fault)[:, None] + 1e-300)
        place = (features.start_C + shift @ features.start_slope - self.start_C) / self.start_u_K
        constant, pull, square = self.quiet
        away = np.stack([phase_s - self.clock.phase_s, refresh_s - self.clock.refresh_s])
        quiet = constant + pull @ away - 0.5 * np.sum(away * (square @ away), axis=0)
        result: Array = np.sum(logs, axis=0) + quiet - 0.5 * place**2
        return result


def _said_before(count: Array, sound: NDArray[np.bool_]) -> NDArray[np.bool_]:
    """Taps of which the tap before followed the very renewal before: that the old number still stood then, that tap
    has said already. Said twice, an edge that is not quite sharp would count for more than it knows."""
    before: NDArray[np.bool_] = (np.diff(count, prepend=count[:1]) == 1.0) & np.concatenate([[False], sound[:-1]])
    return before


def heard(evidence: Evidence, features: Features, clock: Clock, covariance: Array) -> Heard:
    """The taps that count on a clock, around a point of linearisation; `covariance` of the parameters, (3, 3)."""
    blur, rows = evidence.blur, evidence.rows
    time = evidence.bins.time_s[rows] - blur.tap_lag_s
    meter = blur.meter_K / np.maximum(np.abs(features.rate_K_s), 1e-6)
    edge = np.sqrt(clock.edge_s**2 + meter**2)
    nearest = np.round((time - clock.phase_s) / clock.refresh_s)
    renewal = clock.phase_s + nearest * clock.refresh_s
    miss = time - renewal
    counts = evidence.counts[rows]
    said = _said_before(nearest, counts & (np.abs(miss) < QUIET * clock.hand_s))
    features = replace(features, value=features.value + np.stack([0.0 * said, NEVER_s * said, 0.0 * said]))
    inner = np.minimum(features.value[1] + clock.refresh_s, features.value[2])
    margin = np.minimum(renewal - features.value[0], inner - renewal)
    spread = np.max(np.sum((features.slope @ covariance) * features.slope, axis=2), axis=0)
    own = clock.covariance
    spread = np.sqrt(spread + own[0, 0] + nearest**2 * own[1, 1] + 2.0 * nearest * own[0, 1])
    faulty = evidence.faulty()
    alone = np.bincount(clock.tap, minlength=len(time)) == 1
    quiet = counts & alone & (margin > REACH * spread + 3.0 * edge) & (np.abs(miss) < QUIET * clock.hand_s)
    listened = counts & ~quiet
    active = np.flatnonzero(listened)
    k, m = nearest[quiet], miss[quiet] / clock.hand_s**2
    square = np.array([[len(k), k.sum()], [k.sum(), k @ k]]) / clock.hand_s**2
    constant = float(np.sum(np.log((1.0 - faulty[quiet]) * _normal(miss[quiet], clock.hand_s))))
    keep = listened[clock.tap]
    tap = np.searchsorted(active, clock.tap[keep])
    return Heard(
        clock=clock,
        features=replace(
            features,
            value=features.value[:, active],
            slope=features.slope[:, active],
            rate_K_s=features.rate_K_s[active],
        ),
        time_s=time[active],
        fault=faulty_density(evidence.bins.time_s[rows], features.value[0], blur)[active],
        faulty=faulty[active],
        edge_s=edge[active],
        meter=blur.meter_K > 0.0,
        tap=tap,
        count=clock.count[keep],
        first=np.searchsorted(tap, np.arange(len(active))),
        quiet=(constant, np.array([m.sum(), m @ k]), square),
        start_C=evidence.start_C,
        start_u_K=evidence.start_u_K,
    )
