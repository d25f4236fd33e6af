"""The parameters of one window: a robust Gauss–Newton search, then the posterior around its point."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from core.cooling.joint import joint_posterior
from core.cooling.likelihood import Evidence, as_normal
from core.cooling.optimiser import gauss_newton
from core.cooling.prior import Prior

Array = NDArray[np.float64]

MOST_ROUNDS = 60
CONVERGED = 0.03  # of a standard deviation


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

    def log_prior(whole: Array) -> Array:
        logs: Array = -0.5 * (point + whole) ** 2 @ prior.weight
        return logs

    posterior, clock = joint_posterior(evidence, features, covariance, widened, log_prior)
    whole = np.zeros((3, 3))
    whole[np.ix_(free, free)] = posterior.covariance
    return Solution(
        parameters=point + widened(posterior.mean[None, :])[0],
        covariance=whole,
        points=point + widened(posterior.points),
        weights=posterior.weights,
        effective=posterior.effective,
        rounds=rounds,
        clock=clock,
    )
