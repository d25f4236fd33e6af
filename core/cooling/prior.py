"""What is known of the parameters before a run is looked at.

Forced run: the offset between the fitted and the measured air temperature is normal with the standard uncertainty
of the air temperature. The calibration of the body's thermometer against the air's is no part of it: it is one and
the same error in every run, so it stands in the budget, with the sensitivity that the fit gives.

Still-air run: the coefficient of natural convection is that of the simplified laws for air times a scale, of which
the logarithm is normal with the scatter of those laws; the stem loss is free; the air is taken as measured."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from core.bench.setup import Setup

Array = NDArray[np.float64]

NATURAL_SCATTER = 0.15
"""Relative standard deviation of the simplified laws of natural convection in air, from their usual ±30 % (common
practice)."""


@dataclass(frozen=True, slots=True)
class Prior:
    """Inverse variance of each parameter about zero, shape (3,), the parameters that are searched for, and the
    bound on one step of each."""

    weight: Array
    free: tuple[int, ...]
    largest_step: Array

    @property
    def air_weight(self) -> float:
        """Inverse variance [1/K²] of the measured air in a forced run; 0 where the asymptote is fixed."""
        return float(self.weight[2])


def prior_of(setup: Setup) -> Prior:
    """The prior of a bench."""
    if setup.recording.kind == "still-air":
        weight = np.array([1.0 / NATURAL_SCATTER**2, 0.0, 0.0])
        return Prior(weight, (0, 1, 2), np.array([0.3, 10.0, 0.05]))
    u = setup.air.temperature_u_K
    weight = np.array([0.0, 0.0, 1.0 / u**2 if u > 0.0 else 0.0])
    return Prior(weight, (0, 1, 2) if u > 0.0 else (0, 1), np.array([0.4, 10.0, 3.0]))
