"""What is known beforehand of the asymptote: the measured air temperature, and how far it may be off.

The offset between the fitted and the measured air temperature has a normal prior with the standard uncertainty of
the air temperature. The calibration of the body's thermometer against the air's is no part of it: it is one and
the same error in every run, so it stands in the budget, with the sensitivity that the fit gives."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from core.bench.setup import Setup

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class Prior:
    """Standard deviation [K] of the offset; 0 takes the measured asymptote as it is."""

    sd_K: float

    @property
    def free(self) -> list[int]:
        """The parameters that are searched for: the offset only where it may differ from zero."""
        return [0, 1, 2] if self.sd_K > 0.0 else [0, 1]

    @property
    def weight(self) -> float:
        """Inverse variance [1/K²]; 0 where the offset is not searched for."""
        return 1.0 / self.sd_K**2 if self.sd_K > 0.0 else 0.0


def prior_of(setup: Setup) -> Prior:
    """The prior of a bench."""
    return Prior(setup.air.temperature_u_K)
