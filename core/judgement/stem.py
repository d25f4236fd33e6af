"""The stem loss that a run in still air measures, with everything that makes it uncertain.

The readings tell how the whole conductance falls with the excess temperature. What stays constant of it is put down
to holder and stem, what falls to natural convection: the split hangs on how that goes with the excess. θ^(1/4), the
law of the fit, and the published law for the shape, with air properties at film temperature, differ in this by more
than the readings could ever hide, and most for small bodies, whose published laws have a constant part of their own.
Neither is known to be right for a body with a holder: the value lies half-way between the two, and its uncertainty
takes in both."""

from __future__ import annotations

from dataclasses import dataclass
from math import hypot, sqrt

import numpy as np

from core.bench.body import thermal_body
from core.bench.setup import Setup
from core.convection.natural import still_air
from core.cooling.fit import CoolingFit
from core.cooling.observation import STILL_AIR_K
from core.errors import NoAnswer
from core.judgement.propagation import Vector
from core.judgement.relation import radiation_W_m2K

EXPONENT_U = 0.01
"""Standard uncertainty of the exponent of h over θ beside the choice of law: own judgement, no source."""
LAW_POINTS = 24
COVERAGE = 2.0


@dataclass(frozen=True, slots=True)
class StemLoss:
    """Conductance of holder and stem [W/K], its standard and expanded (95 %, k = 2) uncertainty, and the parts of
    the standard one [W/K] by name, largest first."""

    loss_W_K: float
    u_W_K: float
    U95_W_K: float
    parts: tuple[tuple[str, float], ...]


@dataclass(frozen=True, slots=True)
class _Run:
    """The fitted cooling in the window, shapes (n,): time [s], excess over the air and temperature of the air
    [K, °C], conductance of convection and of black radiation [W/K], heat capacity [J/K], weight of the readings."""

    time_s: Vector
    excess_K: Vector
    air_C: Vector
    convection_W_K: Vector
    black_W_K: Vector
    capacity_J_K: Vector
    weight: Vector

    def gathered(self, conductance_W_K: Vector) -> Vector:
        """∫ conductance/capacity dt: what it adds to the logarithm of the excess."""
        rate = conductance_W_K / self.capacity_J_K
        return np.concatenate([[0.0], np.cumsum(0.5 * (rate[1:] + rate[:-1]) * np.diff(self.time_s))])

    def constant_W_K(self, told: Vector, convection_W_K: Vector) -> float:
        """The constant conductance in what was told, beside one that goes like convection, by least squares."""
        even = np.ones(len(told))
        columns = np.stack([self.gathered(convection_W_K), self.gathered(even), even], axis=1)
        scale, root = np.linalg.norm(columns, axis=0), np.sqrt(self.weight)
        found = np.linalg.lstsq(columns / scale * root[:, None], told * root, rcond=None)[0] / scale
        return float(found[1])


def stem_loss(fit: CoolingFit, setup: Setup) -> StemLoss:
    """The stem loss of a still-air run.

    Parameters
    ----------
    fit : the fit of the run
    setup : the set-up that it was made with

    Notes
    -----
    Each input is moved by its uncertainty, and the constant conductance found anew by weighted least squares on
    ∫ conductance/capacity dt along the fitted curve: to first order what a new fit would give.

    Raises
    ------
    NoAnswer : the run was not in still air.

    References
    ----------
    JCGM 100:2008, 4.3.7 (a value between two bounds), 5.1.2.
    """
    own = fit.stem_loss_W_K
    if own is None or fit.stem_loss_u_W_K is None:
        raise NoAnswer("Only a run in still air measures the stem loss; record one with the fan off.")
    run, body = _run_of(fit, setup), setup.body
    told = run.gathered(run.convection_W_K + own)
    published = run.constant_W_K(told, _published_W_K(run, setup))
    tilted = run.constant_W_K(told, run.convection_W_K * run.excess_K**EXPONENT_U)
    black = run.constant_W_K(run.gathered(run.black_W_K), run.convection_W_K)
    air_u = setup.air.temperature_u_K
    moved = run.convection_W_K * np.maximum(1.0 - air_u / run.excess_K, 0.0) ** 0.25
    parts = {
        "natural convection": hypot((published - own) / sqrt(12.0), tilted - own),
        "readings and their fit": fit.stem_loss_u_W_K,
        "emissivity": abs(black) * body.emissivity_u,
        "heat capacity": abs(own + black * body.emissivity) * _capacity_u_rel(setup),
        "air temperature": abs(run.constant_W_K(told + air_u / run.excess_K, moved) - own),
    }
    u = sqrt(sum(part**2 for part in parts.values()))
    return StemLoss(0.5 * (own + published), u, COVERAGE * u, tuple(sorted(parts.items(), key=lambda one: -one[1])))


def measured_stem_loss(fit: CoolingFit, setup: Setup) -> StemLoss | None:
    """The stem loss of a still-air run, None of a forced one."""
    return None if fit.stem_loss_W_K is None else stem_loss(fit, setup)


def _run_of(fit: CoolingFit, setup: Setup) -> _Run:
    time, body_C = np.array(fit.curve_time_s), np.array(fit.curve_C)
    air = setup.air
    drift = 0.0 if air.temperature_end_C is None else air.temperature_end_C - air.temperature_C
    air_C = air.temperature_C + drift * time / time[-1]
    inside = (time >= fit.window_s[0]) & (body_C > air_C)
    time, body_C, air_C = time[inside], body_C[inside], air_C[inside]
    body, excess = thermal_body(setup.body), body_C - air_C
    walls = air.temperature_C if air.surroundings_C is None else air.surroundings_C
    black = [radiation_W_m2K(1.0, *one, walls) for one in zip(body_C, air_C, strict=True)]
    natural = fit.h_W_m2K * (excess / (fit.body_mean_C - fit.asymptote_C)) ** 0.25
    return _Run(
        time_s=time,
        excess_K=excess,
        air_C=air_C,
        convection_W_K=natural * body.area_m2,
        black_W_K=np.array(black) * body.area_m2,
        capacity_J_K=body.capacity_J_K_at(body_C),
        weight=_weight(setup, excess, np.abs(np.gradient(body_C, time))),
    )


def _weight(setup: Setup, excess_K: Vector, rate_K_s: Vector) -> Vector:
    """What the readings say of the logarithm of the excess, for each second: taps come at each step of the display
    and are off by refresh and hand, readings on a beat by the step."""
    meter, recording = setup.thermometer, setup.recording
    if recording.mode == "beat":
        return excess_K**2
    hand = hypot(meter.refresh_s / sqrt(12.0), recording.tap_jitter_s)
    return excess_K**2 * rate_K_s / (STILL_AIR_K**2 + meter.noise_K**2 + (hand * rate_K_s) ** 2)


def _published_W_K(run: _Run, setup: Setup) -> Vector:
    """Convection by the published law for the shape, at a few temperatures and between them."""
    body, air = thermal_body(setup.body), setup.air
    along = body.across_m if setup.body.side_b_m is None else setup.body.side_b_m
    air_C = float(np.mean(run.air_C))
    excess = np.geomspace(float(run.excess_K.min()), float(run.excess_K.max()), LAW_POINTS)
    h = [
        still_air(body.shape, body.across_m, along, air_C + one, air_C, air.pressure_Pa, air.relative_humidity).h_W_m2K
        for one in excess
    ]
    result: Vector = np.interp(np.log(run.excess_K), np.log(excess), h) * body.area_m2
    return result


def _capacity_u_rel(setup: Setup) -> float:
    """Relative standard uncertainty of mass times heat capacity."""
    body = thermal_body(setup.body)
    mass = body.density_u_rel if setup.body.mass_kg is None else setup.body.mass_u_kg / setup.body.mass_kg
    return hypot(body.heat_capacity_u_rel, mass)
