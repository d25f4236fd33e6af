"""The few numbers through which the parameters act on the likelihood, with their derivatives.

Change mode: for each tap the crossings into the new bin, out of the old one, out of the new one [s]. Beat mode:
the temperature at each beat and one refresh before it [°C]. Over the width of a posterior they are straight lines
in the parameters, so that one linearisation serves many sets of parameters at once."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from core.cooling.lumped import STEPS, Curve, LumpedModel
from core.cooling.observation import Bins, Blur

Array = NDArray[np.float64]

FINE = 160
NEWTON_ROUNDS = 3


@dataclass(frozen=True, slots=True)
class Features:
    """`value` has shape (kinds, n), `slope` (kinds, n, parameters), `rate_K_s` (n,)."""

    value: Array
    slope: Array
    rate_K_s: Array
    start_C: float
    curve: Curve

    def at(self, shift: Array) -> Array:
        """The features for parameter shifts of shape (sets, parameters), shape (kinds, n, sets)."""
        result: Array = self.value[:, :, None] + self.slope @ shift.T
        return result


def _bundle(parameters: Array) -> Array:
    """The parameters, then each one stepped up and down for central differences; shape (1 + 2p, p)."""
    steps = np.diag(STEPS)
    return np.vstack([parameters, parameters + steps, parameters - steps])


def _derivatives(values: Array) -> Array:
    """dT/dparameters from the bundle's columns, shape (n, p)."""
    p = len(STEPS)
    result: Array = (values[:, 1 : p + 1] - values[:, p + 1 :]) / (2.0 * STEPS)
    return result


def beat_features(model: LumpedModel, parameters: Array, bins: Bins, record_s: float, blur: Blur) -> Features:
    """Temperatures at each beat, and one refresh before it where beat and refresh are not commensurate."""
    curve = model.curve(_bundle(parameters), record_s)
    newest = curve.at(bins.time_s)
    rate = curve.rate_at(bins.time_s)
    values, slopes = [newest[:, 0]], [_derivatives(newest)]
    if not blur.commensurate:
        oldest = curve.at(bins.time_s - blur.refresh_s)
        values.append(oldest[:, 0])
        slopes.append(_derivatives(oldest))
    return Features(np.array(values), np.array(slopes), rate, float(parameters[1]), curve)


def change_features(model: LumpedModel, parameters: Array, bins: Bins, record_s: float) -> Features:
    """Crossings of the edges of each tap: into the new bin, out of the old one, out of the new one.

    `bins` starts with the reading before the first tap; the features are those of the taps after it."""
    curve = model.curve(_bundle(parameters), record_s)
    edges = np.concatenate([bins.upper_C[1:], bins.lower_C[:-1], bins.lower_C[1:]])
    time = _crossings(curve, edges)
    rate = np.minimum(curve.rate_at(time), -1e-9)
    slope = -_derivatives(curve.at(time)) / rate[:, None]
    taps = len(bins.time_s) - 1
    return Features(time.reshape(3, taps), slope.reshape(3, taps, -1), rate[:taps], float(parameters[1]), curve)


def _crossings(curve: Curve, edges_C: Array) -> Array:
    """When the first set's sensor temperature passes the edges [s]; beyond the window on a straight line."""
    grid = curve.length_s * np.linspace(0.0, 1.0, FINE) ** 1.5
    shown = curve.at(grid)[:, 0]
    time: Array = np.interp(-edges_C, -shown, grid)
    below = edges_C < shown[-1]
    above = edges_C > shown[0]
    time = np.where(below, grid[-1] + (edges_C - shown[-1]) / curve.rate_K_s[-1, 0], time)
    time = np.where(above, grid[0] + (edges_C - shown[0]) / min(float(curve.rate_at(grid[:1])[0]), -1e-9), time)
    inside = ~(below | above)
    for _ in range(NEWTON_ROUNDS):
        miss = curve.at(time)[:, 0] - edges_C
        step = miss / np.minimum(curve.rate_at(time), -1e-9)
        time = np.where(inside, np.clip(time - step, grid[0], grid[-1]), time)
    return time
