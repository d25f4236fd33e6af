"""The parameters of one window: a robust Gauss–Newton search, then the posterior around its point."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from core.cooling.asymptote import Prior
from core.cooling.likelihood import Evidence, as_normal, log_likelihood
from core.cooling.posterior import adapt
from core.errors import NoAnswer

Array = NDArray[np.float64]

MOST_ROUNDS = 60
CONVERGED = 0.03  # of a standard deviation
LARGEST_STEP = np.array([0.4, 10.0, 3.0])
POINTS = 256


@dataclass(frozen=True, slots=True)
class Solution:
    """Parameters (ln h, T at the start, asymptote offset) with covariance, and the weighted points behind them."""

    parameters: Array
    covariance: Array
    points: Array
    weights: Array
    effective: float
    rounds: int


def search(evidence: Evidence, guess: Array, prior: Prior, rounds: int = MOST_ROUNDS) -> tuple[Array, Array, int]:
    """Parameters and covariance with each reading as a robust normal one; Gauss–Newton with bounded steps.

    Raises
    ------
    NoAnswer : the search does not settle.
    """
    free = prior.free
    point = guess.copy()
    point[2] = point[2] if prior.sd_K > 0.0 else 0.0
    covariance = np.eye(3)
    for done in range(1, rounds + 1):
        features = evidence.features(point)
        one = as_normal(evidence, features)
        weight = one.good / one.sd**2 * evidence.counts[evidence.rows]
        hessian = (one.slope * weight[:, None]).T @ one.slope
        gradient = one.slope.T @ (weight * one.miss)
        hessian[1, 1] += 1.0 / evidence.start_u_K**2
        gradient[1] += (evidence.start_C - point[1]) / evidence.start_u_K**2
        hessian[2, 2] += prior.weight
        gradient[2] -= point[2] * prior.weight
        inner = hessian[np.ix_(free, free)]
        scale = np.sqrt(np.diag(inner))
        if not np.all(np.isfinite(inner)) or np.any(scale == 0.0):
            break
        inverse = np.linalg.pinv(inner / np.outer(scale, scale)) / np.outer(scale, scale)
        step = inverse @ gradient[free]
        sd = np.sqrt(np.maximum(np.diag(inverse), 1e-300))
        step *= min(1.0, float(np.min(LARGEST_STEP[free] / np.maximum(np.abs(step), 1e-300))))
        point[free] += step
        covariance = inverse
        if np.max(np.abs(step) / sd) < CONVERGED:
            return point, covariance, done
    if not np.all(np.isfinite(point)):
        raise NoAnswer("The fit does not settle on these readings; check them, the mode and the air temperature.")
    return point, covariance, rounds


def solve(evidence: Evidence, guess: Array, prior: Prior) -> Solution:
    """Posterior mean and covariance of the parameters of a window."""
    point, covariance, rounds = search(evidence, guess, prior)
    free = prior.free
    features = evidence.features(point)

    def widened(shift: Array) -> Array:
        whole: Array = np.zeros((len(shift), 3))
        whole[:, free] = shift
        return whole

    def log_density(shift: Array) -> Array:
        whole = widened(shift)
        offset = point[2] + whole[:, 2]
        logs: Array = log_likelihood(evidence, features, whole) - 0.5 * prior.weight * offset**2
        return logs

    posterior = adapt(log_density, np.zeros(len(free)), covariance, POINTS)
    whole = np.zeros((3, 3))
    whole[np.ix_(free, free)] = posterior.covariance
    return Solution(
        parameters=point + widened(posterior.mean[None, :])[0],
        covariance=whole,
        points=point + widened(posterior.points),
        weights=posterior.weights,
        effective=posterior.effective,
        rounds=rounds,
    )
