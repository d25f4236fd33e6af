"""From readings to a coefficient: the entry `fit_cooling`."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from core.bench.readings import Readings, Ruling
from core.bench.setup import Setup
from core.cooling.fit import CoolingFit
from core.cooling.follow import Trail, followed
from core.cooling.gather import FEWEST, check, first_guess, gather, warm_guess
from core.cooling.model import cooling_model
from core.cooling.optimiser import NOT_SETTLED
from core.cooling.outcome import outcome
from core.cooling.prior import prior_of
from core.cooling.solve import Solution, solve
from core.cooling.start import find_start, latest_start
from core.errors import NoAnswer

LARGEST_LOG = 12.0  # of h [W/(m²·K)]: no air stream comes near
LARGEST_DEVIATION = 1.0  # of ln h
START_EVERY = 8  # rows from one search for the start to the next while a run goes on


def fit_cooling(
    readings: Readings,
    setup: Setup,
    *,
    start_s: float | None = None,
    rulings: Sequence[Ruling] = (),
    warm: CoolingFit | None = None,
    profile: bool = False,
) -> CoolingFit:
    """The coefficient of a run with its uncertainty, from what the display showed.

    Parameters
    ----------
    readings : what the display showed and when
    setup : the bench; `recording.mode` says how to read the rows
    start_s : start of the fit [s] as a person set it; chosen from the data if None
    rulings : a person's word on single rows
    warm : an earlier fit of the same run, to begin the search with; where rows have come since, its start is kept
        until the next row that `START_EVERY` divides
    profile : give the 95 % interval of h from its marginal posterior as well

    Raises
    ------
    NoAnswer : the readings are too few, do not cool, or do not rise above the air.
    """
    check(readings, setup)
    if warm is not None and start_s is None and not profile and _keeps_start(warm, len(readings)):
        following = _follow(readings, setup, rulings, warm)
        if following is not None:
            return following
    model = cooling_model(setup, readings.time_s[-1])
    prior = prior_of(setup)
    whole = gather(readings, setup, model, 0, rulings)
    guess = first_guess(whole) if warm is None else warm_guess(warm, model)
    late = None
    try:
        if start_s is not None:
            start_row, by = int(np.searchsorted(np.array(readings.time_s), start_s - 1e-9)), "person"
        elif warm is not None and _keeps_start(warm, len(readings)):
            start_row, by = int(np.searchsorted(np.array(readings.time_s), warm.window_s[0] - 1e-9)), "program"
        else:
            later = gather(readings, setup, model, latest_start(len(readings)), rulings)
            start_row, late = find_start(whole, later, guess, prior)
            by = "program"
        evidence = gather(readings, setup, model, start_row, rulings)
        if np.count_nonzero(evidence.counts) < FEWEST:
            raise NoAnswer(
                f"Only {np.count_nonzero(evidence.counts)} readings are left in the fit, and it needs {FEWEST}: "
                "move its start earlier, or keep more readings."
            )
        solution = solve(evidence, guess if late is None else late.point, prior, None if late is None else late.tangent)
        _refuse_senseless(solution)
        share = model.conduction_share(solution.parameters)
        trail = Trail(readings, setup, tuple(rulings), start_row, evidence, solution, share)
        fit = outcome(trail, prior, by, profile)
    except np.linalg.LinAlgError as fault:
        raise NoAnswer(NOT_SETTLED) from fault
    if sum(fit.used) < FEWEST:
        raise NoAnswer(
            f"Only {sum(fit.used)} of {len(readings)} readings lie on one cooling curve, and {FEWEST} are needed; "
            "check the readings, the recording mode and the display's settings."
        )
    return fit


def _follow(readings: Readings, setup: Setup, rulings: Sequence[Ruling], warm: CoolingFit) -> CoolingFit | None:
    """The fit that stood, with the taps that came since; None where it must be made anew."""
    trail = warm.trail
    if not isinstance(trail, Trail) or not trail.reaches(readings, setup, rulings):
        return None
    evidence = gather(readings, setup, trail.evidence.model, trail.start_row, rulings)
    solution = followed(trail, evidence)
    if solution is None:
        return None
    return outcome(
        replace(trail, readings=readings, evidence=evidence, solution=solution), prior_of(setup), "program", False
    )


def _keeps_start(warm: CoolingFit, rows: int) -> bool:
    return warm.start_by == "program" and rows > len(warm.used) and rows % START_EVERY != 0


def _refuse_senseless(solution: Solution) -> None:
    """Refuse what no readings of a cooling body could have led to."""
    deviation = np.sqrt(np.diag(solution.covariance))
    if not np.all(np.isfinite(solution.parameters)) or not np.all(np.isfinite(deviation)):
        raise NoAnswer(NOT_SETTLED)
    if abs(solution.parameters[0]) > LARGEST_LOG or deviation[0] > LARGEST_DEVIATION:
        raise NoAnswer("These readings hardly tell how fast the body cools; go on recording, or check them.")
