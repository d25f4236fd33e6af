"""From readings and bench to what the likelihood needs, and where to begin looking."""

from __future__ import annotations

from collections.abc import Sequence
from math import exp, log, sqrt

import numpy as np
from numpy.typing import NDArray

from core.bench.readings import Readings, Ruling
from core.bench.setup import Setup
from core.cooling.fit import CoolingFit
from core.cooling.likelihood import Evidence
from core.cooling.model import CoolingModel
from core.cooling.observation import bins_of, blur_of
from core.errors import NoAnswer

Array = NDArray[np.float64]

FEWEST = 4
AHEAD = 1.25  # length of the curve over that of the record, so that the next taps lie on it too
CONDUCTION_ROUNDS = 6
NO_WORD_K = 1e3  # standard deviation of a start temperature of which nothing is known


def check(readings: Readings, setup: Setup) -> None:
    """Refuse readings that cannot be those of a cooling body.

    Raises
    ------
    NoAnswer : too few rows, no cooling, or a body no warmer than the air.
    """
    if len(readings) < FEWEST:
        raise NoAnswer(f"There are {len(readings)} readings; a fit needs at least {FEWEST}: go on recording.")
    step = setup.thermometer.resolution_K
    first, last = readings.reading_C[0], readings.reading_C[-1]
    air = setup.air.temperature_C
    if first - last < 2.0 * step:
        raise NoAnswer(
            f"The readings go from {first:g} to {last:g} °C, less than two steps of the display down: "
            "the body does not cool; check the readings, or go on recording."
        )
    if first - air < 3.0 * step:
        raise NoAnswer(
            f"The first reading, {first:g} °C, is hardly above the air of {air:g} °C; heat the body further, "
            "or correct the air temperature."
        )
    if last < air - 3.0 * max(step, setup.thermometer.accuracy_K):
        raise NoAnswer(
            f"The readings go down to {last:g} °C, below the air of {air:g} °C; correct the air temperature."
        )


def gather(
    readings: Readings, setup: Setup, model: CoolingModel, start_row: int = 0, rulings: Sequence[Ruling] = ()
) -> Evidence:
    """The evidence of a record, of which the rows from `start_row` on count."""
    bins = bins_of(readings, setup)
    blur = blur_of(readings, setup)
    counts = np.arange(len(readings)) >= start_row
    placed = setup.recording.mode == "change" and bool(counts[0])
    if setup.recording.mode == "beat":
        counts &= bins.time_s >= min(blur.refresh_s, bins.time_s[-1] / 4)
    certain = np.zeros(len(readings), dtype=bool)
    for ruling in rulings:
        if start_row <= ruling.row < len(readings):
            counts[ruling.row] = certain[ruling.row] = ruling.keep
    span = float(bins.time_s[-1])
    step = setup.thermometer.resolution_K
    steepest = 3.0 * (readings.reading_C[0] - readings.reading_C[-1]) / max(span, 1e-9)
    start_u = sqrt(step**2 / 12.0 + (steepest * blur.refresh_s) ** 2 / 3.0 + blur.meter_K**2)
    return Evidence(
        model=model,
        bins=bins,
        blur=blur,
        mode=setup.recording.mode,
        record_s=AHEAD * span,
        counts=counts,
        certain=certain,
        start_C=float((bins.lower_C[0] + bins.upper_C[0]) / 2.0),
        start_u_K=start_u if placed else NO_WORD_K,
    )


def first_guess(evidence: Evidence) -> Array:
    """Parameters from a straight line through ln(T − T∞), weighted for the rounding."""
    model, bins = evidence.model, evidence.bins
    middle = (bins.lower_C + bins.upper_C) / 2.0
    air = model.air_C + model.air_rate_K_s * bins.time_s
    theta = middle - air
    usable = (theta > 2.0 * (bins.upper_C - bins.lower_C)) & evidence.counts
    if np.count_nonzero(usable) < 3:
        usable = theta > 0.0
    if np.count_nonzero(usable) < 3:
        raise NoAnswer(
            "Fewer than three readings lie above the air temperature; correct it, or heat the body further."
        )
    time, y, w = bins.time_s[usable] - bins.time_s[0], np.log(theta[usable]), theta[usable] ** 2
    centre = np.average(time, weights=w)
    slope = np.average((time - centre) * y, weights=w) / np.average((time - centre) ** 2, weights=w)
    rate = max(-float(slope), 1e-7)
    start = air[0] + exp(float(np.average(y, weights=w)) + rate * centre)
    body = model.body
    if model.natural_W_m2K > 0.0:
        watts = rate * body.capacity_J_K(float(np.mean(middle)))
        excess = float(np.mean(theta[usable]))
        known = model.radiation_W_m2K(float(np.mean(middle[usable]))) + model.natural_W_m2K * excess**0.25
        return np.array([0.0, start, max(watts - known * body.area_m2, 0.0)])
    total = rate * body.capacity_J_K(float(np.mean(middle))) / body.area_m2
    losses = model.stem_loss_W_K / body.area_m2 + model.radiation_W_m2K(float(np.mean(middle[usable])))
    h = max(total - losses, 0.05 * total)
    for _ in range(CONDUCTION_ROUNDS):
        modes = model.modes(np.array([h]), np.array([start]), air[:1])
        if modes is None:
            break
        h = max(total / float(modes.share[0]) - losses, 0.05 * total)
    return np.array([log(h), start, 0.0])


def warm_guess(fit: CoolingFit, model: CoolingModel) -> Array:
    """Parameters of an earlier fit of the same run."""
    if model.natural_W_m2K > 0.0:
        scale = fit.h_W_m2K / (model.natural_W_m2K * (fit.body_mean_C - fit.asymptote_C) ** 0.25)
        return np.array([log(scale), fit.start_C, fit.stem_loss_W_K or 0.0])
    return np.array([log(fit.h_W_m2K), fit.start_C, fit.asymptote_shift_K])
