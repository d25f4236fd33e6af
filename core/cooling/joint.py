"""The posterior of the cooling parameters, together with that of the display's clock where the readings tell it."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from math import exp, sqrt

import numpy as np
from numpy.typing import NDArray

from core.cooling.beat_clock import middle_phase, phase_log_likelihood, wanders
from core.cooling.clock import Clock, find_clock, heard
from core.cooling.features import Features
from core.cooling.likelihood import Evidence, log_likelihood
from core.cooling.posterior import Posterior, adapt, moments

Array = NDArray[np.float64]
Widen = Callable[[Array], Array]
LogPrior = Callable[[Array], Array]

TAP_POINTS = 256
BEAT_POINTS = 512
CLOCK_POINTS = 256
PHASE_POINTS = 512
WORTH = 1e-3  # posterior share below which an explanation is left out


@dataclass(frozen=True, slots=True)
class Joint:
    """Posterior of the shift of the free parameters and of what the readings tell of the display's clock.

    `renewals` is phase and refresh [s] where they tell them. Where taps keep a `clock`, the posterior's points have
    two more columns, phase and refresh."""

    posterior: Posterior
    renewals: tuple[float, float] | None = None
    clock: Clock | None = None


def joint_posterior(
    evidence: Evidence, features: Features, covariance: Array, widen: Widen, log_prior: LogPrior
) -> Joint:
    """Posterior of the shift of the free parameters, with the display's clock where one was found.

    Parameters
    ----------
    evidence, features : of the run, around a point of linearisation
    covariance : of the free parameters, as a first guess
    widen : free parameters' shifts (sets, free) → shifts (sets, 3)
    log_prior : shifts (sets, 3) → (sets,)
    """

    def alone(shift: Array) -> Array:
        whole = widen(shift)
        return log_likelihood(evidence, features, whole) + log_prior(whole)

    free = len(covariance)
    clock = find_clock(evidence)
    if clock is not None:
        return _on_clock(evidence, features, covariance, widen, log_prior, clock)
    if evidence.mode != "beat":
        return Joint(adapt(alone, np.zeros(free), covariance, TAP_POINTS))
    found = adapt(alone, np.zeros(free), covariance, BEAT_POINTS)
    if not wanders(evidence):
        return Joint(found)
    return _with_phase(evidence, features, found, widen, log_prior)


def _on_clock(
    evidence: Evidence, features: Features, covariance: Array, widen: Widen, log_prior: LogPrior, clock: Clock
) -> Joint:
    """Taps on a clock, of which phase and refresh are two more parameters."""
    free = len(covariance)
    basis = widen(np.eye(free))
    taps = heard(evidence, features, clock, basis.T @ covariance @ basis)

    def together(shift: Array) -> Array:
        whole = widen(shift[:, :free])
        return taps.log_likelihood(whole, shift[:, free], shift[:, free + 1]) + log_prior(whole)

    first = np.zeros((free + 2, free + 2))
    first[:free, :free], first[free:, free:] = covariance, clock.covariance
    middle = np.concatenate([np.zeros(free), [clock.phase_s, clock.refresh_s]])
    found = adapt(together, middle, first, CLOCK_POINTS)
    return Joint(found, (float(found.mean[free]), float(found.mean[free + 1])), clock)


def _with_phase(evidence: Evidence, features: Features, apart: Posterior, widen: Widen, log_prior: LogPrior) -> Joint:
    """Beats with one phase, mixed with beats that each have their own by how well either foretold the readings."""
    free, refresh = len(apart.mean), evidence.blur.refresh_s
    first = np.zeros((free + 1, free + 1))
    first[:free, :free], first[free, free] = apart.covariance, refresh**2 / 12.0
    middle = np.append(apart.mean, refresh / 2.0)

    def with_window(window_s: float) -> Callable[[Array], Array]:
        def together(shift: Array) -> Array:
            whole = widen(shift[:, :free])
            logs = phase_log_likelihood(evidence, features, whole, shift[:, free], window_s)
            return logs + log_prior(whole)

        return together

    rough = adapt(with_window(refresh / 2.0), middle, first, 2 * PHASE_POINTS, 1)
    phase, variance = middle_phase(rough.points[:, free], rough.weights, refresh)
    first[:free, :free] = rough.covariance[:free, :free]
    first[free, free] = min(variance + (0.03 * refresh) ** 2, refresh**2 / 12.0)
    middle = np.append(rough.mean[:free], phase)
    found = adapt(with_window(phase), middle, first, PHASE_POINTS)
    share = 1.0 / (1.0 + exp(min(apart.log_evidence - found.log_evidence, 700.0)))
    if share < WORTH:
        return Joint(apart)
    points = np.concatenate([found.points[:, :free], apart.points])
    weights = np.concatenate([share * found.weights, (1.0 - share) * apart.weights])
    mean, covariance, effective = moments(points, weights)
    told = sqrt(found.covariance[free, free]) < 0.5 * refresh / sqrt(12.0) and share > 0.5
    clock = (float(found.mean[free]) % refresh, refresh) if told else None
    return Joint(Posterior(mean, covariance, effective, points, weights, found.log_evidence), clock)
