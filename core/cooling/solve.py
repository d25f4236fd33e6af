"""The parameters of one window: a robust Gauss–Newton search, then the posterior around its point."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from core.cooling.clock import Clock
from core.cooling.features import Features, derivatives
from core.cooling.joint import joint_posterior
from core.cooling.likelihood import Evidence, Normal, as_normal
from core.cooling.optimiser import gauss_newton
from core.cooling.prior import Prior

Array = NDArray[np.float64]

MOST_ROUNDS = 60
CONVERGED = 0.03  # of a standard deviation
STRAIGHT = 1.0  # deviations of a reading over which its prediction is a straight line in the parameters


@dataclass(frozen=True, slots=True)
class Tangent:
    """The features at a point, and near it along their straight lines."""

    point: Array
    features: Features

    def at(self, point: Array) -> Features:
        """The features at a point nearby."""
        return self.features.moved(point - self.point)

    def shown_C(self, point: Array, time_s: Array) -> Array:
        """The sensor's temperature [°C] at a point nearby, at times [s]."""
        bundle = self.features.curve.at(time_s)
        result: Array = bundle[:, 0] + derivatives(bundle) @ (point - self.point)
        return result


@dataclass(frozen=True, slots=True)
class Solution:
    """Parameters of the model with covariance, and the weighted points behind them.

    `renewals` is phase and refresh of the display [s] where the readings tell them; where taps keep a `clock`,
    `clock_points` holds the phase and refresh of each point, shape (sets, 2)."""

    parameters: Array
    covariance: Array
    points: Array
    weights: Array
    effective: float
    rounds: int
    tangent: Tangent
    renewals: tuple[float, float] | None
    clock: Clock | None
    clock_points: Array


@dataclass(frozen=True, slots=True)
class Found:
    """Parameters (3,), covariance of the free ones, rounds, and a tangent that reaches the parameters."""

    point: Array
    covariance: Array
    rounds: int
    tangent: Tangent


def search(evidence: Evidence, guess: Array, prior: Prior, tangent: Tangent | None = None) -> Found:
    """The parameters with each reading taken as a robust normal one.

    The course of cooling is worked out anew only where the search has moved a prediction by more than `STRAIGHT`
    deviations of its reading; nearer, it follows the tangent, so that a search that starts from an earlier fit of the
    same run needs one course.

    Parameters
    ----------
    evidence : of the run
    guess : first parameters, shape (3,)
    prior : of the parameters
    tangent : from an earlier search of the same readings

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
        nonlocal tangent
        point = whole(part)
        tangent, one = _taken(evidence, point, tangent)
        features = tangent.at(point)
        weight = one.good / one.sd**2 * evidence.counts[evidence.rows]
        place = features.start_slope / evidence.start_u_K
        matrix = (one.slope * weight[:, None]).T @ one.slope + np.outer(place, place)
        gradient = one.slope.T @ (weight * one.miss)
        gradient += place * (evidence.start_C - features.start_C) / evidence.start_u_K
        matrix += np.diag(prior.weight)
        gradient -= point * prior.weight
        return matrix[np.ix_(free, free)], gradient[free]

    settled = gauss_newton(normal_equations, start[free], prior.largest_step[free], CONVERGED, MOST_ROUNDS)
    point = whole(settled.point)
    return Found(point, settled.covariance, settled.rounds, _taken(evidence, point, tangent)[0])


def _taken(evidence: Evidence, point: Array, tangent: Tangent | None) -> tuple[Tangent, Normal]:
    """A tangent that reaches a point, and the readings there as normal ones."""
    if tangent is not None:
        one = as_normal(evidence, tangent.at(point))
        moved = np.abs(one.slope @ (point - tangent.point)) / one.sd
        if np.max(moved) <= STRAIGHT:
            return tangent, one
    tangent = Tangent(point, evidence.features(point))
    return tangent, as_normal(evidence, tangent.features)


def solve(evidence: Evidence, guess: Array, prior: Prior, tangent: Tangent | None = None) -> Solution:
    """Posterior mean and covariance of the parameters of a window."""
    found = search(evidence, guess, prior, tangent)
    point, covariance = found.point, found.covariance
    free = list(prior.free)
    features = found.tangent.at(point)

    def widened(shift: Array) -> Array:
        whole: Array = np.zeros((len(shift), 3))
        whole[:, free] = shift
        return whole

    def log_prior(whole: Array) -> Array:
        logs: Array = -0.5 * (point + whole) ** 2 @ prior.weight
        return logs

    joint = joint_posterior(evidence, features, covariance, widened, log_prior)
    posterior, count = joint.posterior, len(free)
    whole = np.zeros((3, 3))
    whole[np.ix_(free, free)] = posterior.covariance[:count, :count]
    return Solution(
        parameters=point + widened(posterior.mean[None, :count])[0],
        covariance=whole,
        points=point + widened(posterior.points[:, :count]),
        weights=posterior.weights,
        effective=posterior.effective,
        rounds=found.rounds,
        tangent=found.tangent,
        renewals=joint.renewals,
        clock=joint.clock,
        clock_points=posterior.points[:, count:],
    )
