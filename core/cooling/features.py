"""The few numbers through which the parameters act on the likelihood, with their derivatives.

Change mode: for each tap the crossings into the new bin, out of the old one, out of the new one [s]. Beat mode:
the temperature at each beat and one refresh before it [°C]. Over the width of a posterior they are straight lines
in the parameters, so that one linearisation serves many sets of parameters at once."""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cache

import numpy as np
from numpy.typing import NDArray

from core.cooling import chebyshev
from core.cooling.model import STEPS, CoolingModel, Curve
from core.cooling.observation import Bins, Blur

Array = NDArray[np.float64]

FINE = 160
NEWTON_ROUNDS = 1  # from the fine grid: crossings within 1e-6 s
EARLY_NEWTON_ROUNDS = 2  # where early modes bend the curve
LEAST_RATE = 0.2  # of the mean rate: how steeply the curve goes on before the record at the least


@dataclass(frozen=True, slots=True)
class Features:
    """`value` has shape (kinds, n), `slope` (kinds, n, parameters), `rate_K_s` (n,).

    `start_C` is the sensor's temperature at time 0 and `start_slope` its derivatives, shape (parameters,)."""

    value: Array
    slope: Array
    rate_K_s: Array
    start_C: float
    start_slope: Array
    curve: Curve

    def at(self, shift: Array) -> Array:
        """The features for parameter shifts of shape (sets, parameters), shape (kinds, n, sets)."""
        result: Array = self.value[:, :, None] + self.slope @ shift.T
        return result

    def of_taps(self, bins: Bins) -> Features:
        """The features of other taps on the same curve; `bins` starts with the reading before the first of them."""
        value, slope, rate_K_s = _taps(self.curve, bins)
        return replace(self, value=value, slope=slope, rate_K_s=rate_K_s)

    def followed_by(self, more: Features) -> Features:
        """These features, then those of later taps on the same curve."""
        return replace(
            self,
            value=np.concatenate([self.value, more.value], axis=1),
            slope=np.concatenate([self.slope, more.slope], axis=1),
            rate_K_s=np.concatenate([self.rate_K_s, more.rate_K_s]),
        )

    def moved(self, shift: Array) -> Features:
        """The features one shift of shape (parameters,) away, on their straight lines."""
        start_C = self.start_C + float(self.start_slope @ shift)
        return replace(self, value=self.value + self.slope @ shift, start_C=start_C)


def _bundle(parameters: Array) -> Array:
    """The parameters, then each one stepped up and down for central differences; shape (1 + 2p, p)."""
    steps = np.diag(STEPS)
    return np.vstack([parameters, parameters + steps, parameters - steps])


def derivatives(values: Array) -> Array:
    """dT/dparameters from the bundle's columns, shape (n, p)."""
    p = len(STEPS)
    result: Array = (values[:, 1 : p + 1] - values[:, p + 1 :]) / (2.0 * STEPS)
    return result


def beat_features(model: CoolingModel, parameters: Array, bins: Bins, record_s: float, blur: Blur) -> Features:
    """Temperatures at each beat, and one refresh before it where beat and refresh are not commensurate."""
    curve = model.curve(_bundle(parameters), record_s)
    newest, rate = curve.with_rate(bins.time_s)
    values, slopes = [newest[:, 0]], [derivatives(newest)]
    if not blur.commensurate:
        oldest = curve.at(bins.time_s - blur.refresh_s)
        values.append(oldest[:, 0])
        slopes.append(derivatives(oldest))
    return Features(np.array(values), np.array(slopes), rate, *_start(curve), curve)


def change_features(model: CoolingModel, parameters: Array, bins: Bins, record_s: float) -> Features:
    """Crossings of the edges of each tap: into the new bin, out of the old one, out of the new one.

    `bins` starts with the reading before the first tap; the features are those of the taps after it."""
    curve = model.curve(_bundle(parameters), record_s)
    return Features(*_taps(curve, bins), *_start(curve), curve)


def _taps(curve: Curve, bins: Bins) -> tuple[Array, Array, Array]:
    edges = np.concatenate([bins.upper_C[1:], bins.left_C[1:], bins.lower_C[1:]])
    time, shown, rate = _crossings(curve, edges)
    slope = -derivatives(shown) / rate[:, None]
    taps = len(bins.time_s) - 1
    return time.reshape(3, taps), slope.reshape(3, taps, -1), rate[:taps]


def _start(curve: Curve) -> tuple[float, Array]:
    shown = curve.at(np.zeros(1))
    return float(shown[0, 0]), derivatives(shown)[0]


@cache
def _fine() -> tuple[Array, Array]:
    """Shares of the record, denser at its hot end, and the interpolation matrix for them."""
    share = np.linspace(0.0, 1.0, FINE) ** 1.5
    return share, chebyshev.interpolation(2.0 * share - 1.0)


def _crossings(curve: Curve, edges_C: Array) -> tuple[Array, Array, Array]:
    """When the first set's sensor temperature passes the edges [s]; beyond the record on a straight line.

    Also the temperatures of all sets and the rate of the first one at those times."""
    share, basis = _fine()
    grid = curve.length_s * share
    shown, rates = curve.on_basis(basis, grid)
    first = shown[:, 0]
    time: Array = np.interp(-edges_C, -first, grid)
    below, above = edges_C < first[-1], edges_C > first[0]
    time = np.where(below, grid[-1] + (edges_C - first[-1]) / min(float(rates[-1]), -1e-9), time)
    least = LEAST_RATE * (first[-1] - first[0]) / curve.length_s
    time = np.where(above, grid[0] + (edges_C - first[0]) / min(float(rates[0]), float(least), -1e-9), time)
    inside = ~(below | above)
    at, rate = curve.with_rate(time)
    for _ in range(NEWTON_ROUNDS if curve.early is None else EARLY_NEWTON_ROUNDS):
        step = np.where(inside, (at[:, 0] - edges_C) / np.minimum(rate, -1e-9), 0.0)
        time = time - step
        at, rate = curve.with_rate(time)
    return time, at, np.minimum(rate, min(0.1 * float(least), -1e-9))
