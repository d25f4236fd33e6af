"""One more tap on a fit that stands: its weighted points are weighed anew instead of drawn anew.

While a run goes on, a tap adds a little to what fifty others have told. The points that stand for the posterior
then stay where they are and only their weights change, by the likelihood of the new tap (sequential importance
sampling: Liu and Chen, J. Am. Stat. Assoc. 93 (1998) 1032–1044). That costs the same at any length of the run. It
ends where too few points carry the weight, where the tap needs the curve beyond where it was worked out, and while
the display's clock may yet be heard for the first time; then the fit is made anew."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from core.bench.readings import Readings, Ruling
from core.bench.setup import Setup
from core.cooling.clock import could_be_heard, heard, later_taps
from core.cooling.gather import NO_WORD_K
from core.cooling.likelihood import Evidence, log_likelihood
from core.cooling.posterior import moments
from core.cooling.solve import Solution, Tangent

FEWEST_EFFECTIVE = 48.0  # points that carry the weight, below which they are drawn anew; more than tempering leaves


@dataclass(frozen=True, slots=True)
class Trail:
    """What a fit leaves for the one after the next tap."""

    readings: Readings
    setup: Setup
    rulings: tuple[Ruling, ...]
    start_row: int
    evidence: Evidence
    solution: Solution
    conduction_share: float

    def reaches(self, readings: Readings, setup: Setup, rulings: Sequence[Ruling]) -> bool:
        """Whether these are the same readings and a few taps more, within the curve that is known."""
        known = len(self.readings)
        clock_is_settled = self.solution.clock is not None or not could_be_heard(self.evidence.blur)
        return (
            self.evidence.mode == "change"
            and clock_is_settled
            and known < len(readings)
            and readings.time_s[-1] < self.solution.tangent.features.curve.length_s
            and self.evidence.model.air_rate_K_s == 0.0
            and tuple(rulings) == self.rulings
            and readings.time_s[:known] == self.readings.time_s
            and readings.reading_C[:known] == self.readings.reading_C
            and setup == self.setup
        )


def followed(trail: Trail, evidence: Evidence) -> Solution | None:
    """The solution with the taps that `evidence` holds beyond the trail's; None where it must be made anew."""
    before, known = trail.solution, len(trail.readings)
    late = _only_from(evidence, known)
    tangent = before.tangent
    more = tangent.features.of_taps(late.bins)
    shift = before.points - tangent.point
    if before.clock is None:
        logs = log_likelihood(late, more, shift)
    else:
        clock = later_taps(before.clock, late.bins.time_s[1:] - late.blur.tap_lag_s)
        taps = heard(late, more, clock, before.covariance)
        logs = taps.log_likelihood(shift, before.clock_points[:, 0], before.clock_points[:, 1])
    weights = before.weights * np.exp(logs - np.max(logs))
    weights /= np.sum(weights)
    parameters, covariance, effective = moments(before.points, weights)
    if not effective > FEWEST_EFFECTIVE:
        return None
    middle = weights @ before.clock_points
    return replace(
        before,
        parameters=parameters,
        covariance=covariance,
        weights=weights,
        effective=effective,
        tangent=Tangent(tangent.point, tangent.features.followed_by(more)),
        renewals=None if before.clock is None else (float(middle[0]), float(middle[1])),
    )


def _only_from(evidence: Evidence, row: int) -> Evidence:
    """The evidence of the taps from a row on, after the one before it, with no word on the start."""
    bins, since = evidence.bins, slice(row - 1, None)
    counts = evidence.counts[since].copy()
    counts[0] = False
    return replace(
        evidence,
        bins=replace(
            bins,
            time_s=bins.time_s[since],
            lower_C=bins.lower_C[since],
            upper_C=bins.upper_C[since],
            left_C=bins.left_C[since],
        ),
        counts=counts,
        certain=evidence.certain[since],
        start_u_K=NO_WORD_K,
    )
