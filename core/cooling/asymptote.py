"""What is known beforehand of the asymptote: the measured air temperature, and how far it may be off.

Either the thermometer in the air and the one in the body agree, to within the stated uncertainty of the air
temperature; or they differ by their calibration. Both are held equally likely: a mixture of a narrow and a wide
normal prior on the offset between the fitted and the measured air temperature. Readings that agree with the
measured air gain from it; readings that contradict it find their own asymptote."""

from __future__ import annotations

from dataclasses import dataclass
from math import hypot, log

import numpy as np
from numpy.typing import NDArray

from core.bench.setup import Setup

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class Prior:
    """Standard deviations [K] of the offset; a narrow one of 0 with a wide one of 0 means a fixed asymptote."""

    narrow_K: float
    wide_K: float

    @property
    def free(self) -> list[int]:
        """The parameters that are searched for: the offset only where it may differ from zero."""
        return [0, 1, 2] if self.wide_K > 0.0 else [0, 1]

    @property
    def mixed(self) -> bool:
        """Whether there are two scales."""
        return self.wide_K > 1.001 * self.narrow_K

    def log_wide(self, offset_K: Array) -> Array:
        """Log-density of the wide part, up to a constant."""
        if self.wide_K == 0.0:
            return np.zeros_like(offset_K)
        return -0.5 * (offset_K / self.wide_K) ** 2

    def log_mixed(self, offset_K: Array) -> Array:
        """Log-density of the mixture, up to a constant."""
        narrow = max(self.narrow_K, 1e-4)
        return np.logaddexp(
            -0.5 * (offset_K / narrow) ** 2 - log(narrow), -0.5 * (offset_K / self.wide_K) ** 2 - log(self.wide_K)
        )

    def narrowed(self, offset_K: float, mean: Array, covariance: Array) -> tuple[Array, Array]:
        """A normal posterior under the wide prior, taken over to the narrow one: mean and covariance.

        `mean` is a shift from a point at which the offset is `offset_K`."""
        gain = 1.0 / max(self.narrow_K, 1e-4) ** 2 - 1.0 / self.wide_K**2
        column = covariance[:, 2]
        share = gain / (1.0 + gain * covariance[2, 2])
        moved = mean - column * share * (offset_K + mean[2])
        return moved, covariance - np.outer(column, column) * share


def prior_of(setup: Setup) -> Prior:
    """The prior of a bench."""
    narrow = setup.air.temperature_u_K
    return Prior(narrow, hypot(narrow, setup.thermometer.accuracy_K))
