"""The posterior of the parameters by adaptive importance sampling with fixed, quasi-random points.

The likelihood of interval data is flat inside and steep at its edges, so that its maximum and curvature say
little; its mean and spread say all. Points are normal, from an R-sequence, and the same at each call: the same
readings give the same answer to the last bit. Proposals adapt over a few rounds (population Monte Carlo: Cappé
et al., J. Comput. Graph. Stat. 13 (2004) 907–929)."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import cache
from math import log, pi

import numpy as np
from numpy.typing import NDArray

from core.cooling.normal import quantile

Array = NDArray[np.float64]

INFLATION = 1.3
MOST_ROUNDS = 8
ENOUGH = 0.3  # share of the points that are effective once the proposal fits
FEWEST_EACH = 8.0  # effective points for each parameter below which weights are tempered
HALVINGS = 12


@dataclass(frozen=True, slots=True)
class Posterior:
    """Mean shift from the point of linearisation, covariance, effective number of points, the weighted points, and
    the logarithm of the density's integral."""

    mean: Array
    covariance: Array
    effective: float
    points: Array
    weights: Array
    log_evidence: float


@cache
def _normals(count: int, dimension: int) -> Array:
    """Quasi-random standard normal points, shape (count, dimension), mirrored in pairs.

    Additive recurrence with the powers of the generalised golden ratio: the root of x^(d+1) = x + 1."""
    ratio = 1.0
    for _ in range(60):
        ratio = (1.0 + ratio) ** (1.0 / (dimension + 1))
    alpha = ratio ** -np.arange(1.0, dimension + 1)
    uniform = (0.5 + np.arange(1, count // 2 + 1)[:, None] * alpha) % 1.0
    half = quantile(uniform)
    return np.concatenate([half, -half])


def adapt(
    log_density: Callable[[Array], Array], mean: Array, covariance: Array, count: int, rounds: int = MOST_ROUNDS
) -> Posterior:
    """Mean and covariance of a density known up to a factor, from a first guess at both.

    `log_density` takes points of shape (count, d) and gives (count,). Rounds go on until the proposal fits; while it
    does not, weights are tempered, so that a few heavy points do not collapse the next proposal."""
    points = weights = np.empty(0)
    effective = evidence = 0.0
    for _ in range(rounds):
        root = _root(covariance) * INFLATION
        raw = _normals(count, len(mean))
        points = mean + raw @ root.T
        logs = log_density(points) + 0.5 * np.sum(raw * raw, axis=1)
        size = float(np.sum(np.log(np.diag(root)))) + 0.5 * len(mean) * log(2.0 * pi)
        evidence = float(np.max(logs) + np.log(np.mean(np.exp(logs - np.max(logs))))) + size
        weights = _tempered(logs, FEWEST_EACH * len(mean))
        mean, covariance, effective = moments(points, weights)
        if effective > ENOUGH * count:
            break
    return Posterior(mean, covariance, effective, points, weights, evidence)


def _root(covariance: Array) -> Array:
    firm = covariance + np.diag(1e-12 * np.diag(covariance) + 1e-300)
    return np.asarray(np.linalg.cholesky(firm), dtype=np.float64)


def _tempered(logs: Array, fewest: float) -> Array:
    """Weights of points, flattened as far as it takes to have so many effective ones."""
    weights = _weights(logs)
    if np.sum(weights**2) * fewest <= 1.0:
        return weights
    low, high = 0.0, 1.0
    for _ in range(HALVINGS):
        power = (low + high) / 2.0
        weights = _weights(power * logs)
        low, high = (power, high) if np.sum(weights**2) * fewest <= 1.0 else (low, power)
    return _weights(low * logs)


def _weights(logs: Array) -> Array:
    weights = np.exp(logs - np.max(logs))
    result: Array = weights / np.sum(weights)
    return result


def moments(points: Array, weights: Array) -> tuple[Array, Array, float]:
    """Mean, covariance and effective number of weighted points."""
    effective = float(1.0 / np.sum(weights**2))
    mean = weights @ points
    centred = points - mean
    return mean, (centred * weights[:, None]).T @ centred, effective
