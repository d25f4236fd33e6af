"""The parameters of one window: a robust Gauss–Newton search, then the posterior around its point."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from core.cooling.clock import clock_log_likelihood, find_clock
from core.cooling.likelihood import Evidence, as_normal, log_likelihood
from core.cooling.optimiser import gauss_newton
from core.cooling.posterior import adapt
from core.cooling.prior import Prior

Array = NDArray[np.float64]

MOST_ROUNDS = 60
CONVERGED = 0.03  # of a standard deviation
POINTS = 256
CLOCK_POINTS = 512
CLOCK_ROUNDS = 3


@dataclass(frozen=True, slots=True)
class Solution:
    """Parameters of the model with covariance, and the weighted points behind them."""

    parameters: Array
    covariance: Array
    points: Array
    weights: Array
    effective: float
    rounds: int
    clock: tuple[float, float] | None  # phase and refresh of the display [s], where the taps tell them


def search(evidence: Evidence, guess: Array, prior: Prior, rounds: int = MOST_ROUNDS) -> tuple[Array, Array, int]:
    """Parameters (3,), covariance of the free ones, and rounds, with each reading taken as a robust normal one.

    Raises
    ------
    NoAnswer : the search does not settle.
    """
    free = list(prior.free)
    start = guess.copy()
    if 2 not in free:
        start[2] = 0.0

    def whole(part: Array) -> Array:
        point = start.copy()
        point[free] = part
        return point

    def normal_equations(part: Array) -> tuple[Array, Array]:
        point = whole(part)
        features = evidence.features(point)
        one = as_normal(evidence, features)
        weight = one.good / one.sd**2 * evidence.counts[evidence.rows]
        place = features.start_slope / evidence.start_u_K
        matrix = (one.slope * weight[:, None]).T @ one.slope + np.outer(place, place)
        gradient = one.slope.T @ (weight * one.miss)
        gradient += place * (evidence.start_C - features.start_C) / evidence.start_u_K
        matrix += np.diag(prior.weight)
        gradient -= point * prior.weight
        return matrix[np.ix_(free, free)], gradient[free]

    settled = gauss_newton(normal_equations, start[free], prior.largest_step[free], CONVERGED, rounds)
    return whole(settled.point), settled.covariance, settled.rounds


def solve(evidence: Evidence, guess: Array, prior: Prior) -> Solution:
    """Posterior mean and covariance of the parameters of a window."""
    point, covariance, rounds = search(evidence, guess, prior)
    free = list(prior.free)
    features = evidence.features(point)

    def widened(shift: Array) -> Array:
        whole: Array = np.zeros((len(shift), 3))
        whole[:, free] = shift
        return whole

    def apart(shift: Array) -> Array:
        whole = widened(shift)
        logs: Array = log_likelihood(evidence, features, whole) - 0.5 * (point + whole) ** 2 @ prior.weight
        return logs

    p = len(free)
    clock = find_clock(evidence)

    def on_clock(shift: Array) -> Array:
        if clock is None:
            return apart(shift)
        whole = widened(shift[:, :p])
        logs = clock_log_likelihood(evidence, features, clock, whole, shift[:, p], shift[:, p + 1])
        return logs - 0.5 * (point + whole) ** 2 @ prior.weight

    if clock is None:
        posterior = adapt(apart, np.zeros(p), covariance, POINTS)
    else:
        first = np.zeros((p + 2, p + 2))
        first[:p, :p], first[p:, p:] = covariance, clock.covariance
        middle = np.concatenate([np.zeros(p), [clock.phase_s, clock.refresh_s]])
        posterior = adapt(on_clock, middle, first, CLOCK_POINTS, CLOCK_ROUNDS)
    whole = np.zeros((3, 3))
    whole[np.ix_(free, free)] = posterior.covariance[:p, :p]
    return Solution(
        parameters=point + widened(posterior.mean[None, :p])[0],
        covariance=whole,
        points=point + widened(posterior.points[:, :p]),
        weights=posterior.weights,
        effective=posterior.effective,
        rounds=rounds,
        clock=None if clock is None else (float(posterior.mean[p]), float(posterior.mean[p + 1])),
    )
