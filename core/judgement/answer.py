"""The answer to a run, as it travels to the screen, the CSV and the report."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from core.bench.setup import Setup
from core.convection.correlation import Expectation
from core.cooling.fit import CoolingFit

Outcome = Literal["good", "look", "again"]
Verdict = Literal["keep", "look", "again"]


@dataclass(frozen=True, slots=True)
class BudgetLine:
    """One input of the uncertainty budget: `sensitivity` is dh/dinput, `share` the share of the variance of h."""

    input: str
    value: float
    unit: str
    u: float
    sensitivity: float
    share: float


@dataclass(frozen=True, slots=True)
class Check:
    """One named check: what was found, where the line is and why, and what to do. `value` is None where it
    could not be had."""

    name: str
    outcome: Outcome
    value: float | None
    limit: float | None
    unit: str
    source: str
    advice: str


@dataclass(frozen=True, slots=True)
class Answer:
    """Everything `fit --json` says of one run, and the fit behind it."""

    time_constant_s: float
    time_constant_u_s: float
    h_W_m2K: float
    h_u_W_m2K: float
    h_U95_W_m2K: float
    h_total_W_m2K: float
    h_radiation_W_m2K: float
    biot: float
    nusselt: float | None
    nusselt_u: float | None
    reynolds: float | None
    reynolds_u: float | None
    asymptote_C: float
    readings: int
    readings_left_out: tuple[tuple[int, str], ...]
    window_s: tuple[float, float]
    expected: tuple[Expectation, ...]
    budget: tuple[BudgetLine, ...]
    checks: tuple[Check, ...]
    verdict: Verdict
    reason: str  # the one sentence that matters most
    coverage_factor: float
    degrees_of_freedom: float
    film_temperature_C: float
    prandtl: float
    velocity_m_s: float | None  # at the body: after narrowing and blockage
    setup: Setup
    fit: CoolingFit
