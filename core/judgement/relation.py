"""The closed relation between what was measured and h, Nu, Re: what the budget differentiates and the Monte Carlo
draws through, without fitting again.

The readings fix the decay rate of the body's temperature; h follows from it as

    h = U / (1 − U·ℓ / (s·k)) − G/A − h_r,   U = κ·m·c(T_b) / (τ·A)

with the time constant τ, heat capacity m·c at the body's temperature, swept area A, stem loss G, radiation
h_r, conductivity k, half thickness ℓ and s = 3, 4, 5 for a wall, a long cylinder, a sphere (first eigenvalue to
second order in Bi; only where the model has conduction inside). The constant κ, close to 1, makes the relation
meet the fit exactly at the nominal values."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from typing import Any

import numpy as np

from core.bench.air import Air, air_properties
from core.bench.body import ThermalBody, thermal_body
from core.bench.setup import Flow, Setup
from core.convection.flow import undisturbed_velocity, velocity_at_body
from core.cooling.fit import CoolingFit

STEFAN_BOLTZMANN_W_m2K4 = 5.670374419e-8  # CODATA 2018, exact
ZERO_CELSIUS_K = 273.15
_FLATNESS = {"block": 3.0, "cylinder": 4.0, "sphere": 5.0}

READINGS = "readings and their fit"
BODY_KEYS = {
    "diameter": "diameter_m",
    "length": "length_m",
    "side a": "side_a_m",
    "side b": "side_b_m",
    "side c": "side_c_m",
    "mass": "mass_kg",
    "density": "density_kg_m3",
    "emissivity": "emissivity",
    "stem loss": "stem_loss_W_K",
}


@dataclass(frozen=True, slots=True)
class Anchor:
    """What the relation needs of a fit, made or predicted: h and its standard uncertainty from readings alone, its
    change with the measured air and with the tap's delay, the standard uncertainty of the air temperature, the
    time constant, the body's mean temperature and the one that the fit feels, whether conduction inside is in the
    model, and the degrees of freedom of the readings."""

    h_W_m2K: float
    readings_u_W_m2K: float
    per_air_W_m2K2: float
    per_lag_W_m2Ks: float
    air_u_K: float
    time_constant_s: float
    body_mean_C: float
    body_felt_C: float
    conduction: bool
    readings_dof: float


def anchor_of(fit: CoolingFit, setup: Setup) -> Anchor:
    """The anchor of a fit.

    The fit takes the measured air as prior of its asymptote, so its variance holds that of the measured air,
    (dh/dT_air · u)²; this part is taken out and stands as the line `air temperature`, counted once."""
    air_u_K = setup.air.temperature_u_K
    from_air = fit.h_per_measured_air_W_m2K2 * air_u_K
    return Anchor(
        h_W_m2K=fit.h_W_m2K,
        readings_u_W_m2K=max(fit.h_u_W_m2K**2 - from_air**2, 0.0) ** 0.5,
        per_air_W_m2K2=fit.h_per_measured_air_W_m2K2,
        per_lag_W_m2Ks=fit.h_per_lag_W_m2Ks,
        air_u_K=air_u_K,
        time_constant_s=fit.time_constant_s,
        body_mean_C=fit.body_mean_C,
        body_felt_C=felt_temperature_C(fit, setup),
        conduction=fit.model != "lumped",
        readings_dof=max(1.0, sum(fit.used) - len(fit.parameters)),
    )


def felt_temperature_C(fit: CoolingFit, setup: Setup) -> float:
    """The body's temperature at which a part of h that changes along the cooling, such as radiation, enters the
    fitted h [°C].

    A coefficient h_r(T) adds R(t) = ∫ h_r dt to H·t, the cooling's logarithm times the heat capacity per area.
    The fit takes of R what looks like more h, a weighted regression on t beside a constant and the asymptote's own
    effect H·τ/(T − T∞), which the measured air holds. The weights are those of the readings: even over the
    temperature for taps at each change, (T − T∞)² over time for readings on a beat, each as sure in temperature;
    together they make up the fit's uncertainty at a known asymptote."""
    time, body_C = np.array(fit.curve_time_s), np.array(fit.curve_C)
    inside = (time >= fit.window_s[0]) & (time <= fit.window_s[1])
    time, body_C = time[inside], body_C[inside]
    excess = body_C - fit.asymptote_C
    if len(time) < 4 or float(excess.min()) <= 0.0 or float(np.ptp(body_C)) == 0.0:
        return fit.body_mean_C
    walls_C = fit.asymptote_C if setup.air.surroundings_C is None else setup.air.surroundings_C
    coefficient = np.array([radiation_W_m2K(1.0, float(one), fit.asymptote_C, walls_C) for one in body_C])
    added = np.concatenate([[0.0], np.cumsum(0.5 * (coefficient[1:] + coefficient[:-1]) * np.diff(time))])
    weight = np.abs(np.gradient(body_C, time)) if setup.recording.mode == "change" else excess**2
    centred = time - np.average(time, weights=weight)
    weight /= fit.h_u_fixed_air_W_m2K**2 * np.sum(weight * centred**2)
    columns = np.stack([centred, np.ones(len(time)), fit.h_total_W_m2K * fit.time_constant_s / excess], axis=1)
    normal = (columns * weight[:, np.newaxis]).T @ columns
    normal[2, 2] += max(setup.air.temperature_u_K, 1e-6) ** -2
    felt = float(np.linalg.solve(normal, columns.T @ (weight * added))[0])
    return float(np.interp(felt, np.sort(coefficient), np.sort(body_C)))


def mid_air_C(setup: Setup) -> float:
    """Air temperature at mid-run [°C]."""
    before, after = setup.air.temperature_C, setup.air.temperature_end_C
    return before if after is None else 0.5 * (before + after)


def radiation_W_m2K(emissivity: float, body_C: float, air_C: float, surroundings_C: float) -> float:
    """Radiation coefficient referred to the air, ε σ (T⁴ − T_s⁴) / (T − T_air), small grey body in large
    surroundings [W/(m²·K)] (Incropera et al., Fundamentals of Heat and Mass Transfer, equation 1.7)."""
    body, walls = body_C + ZERO_CELSIUS_K, surroundings_C + ZERO_CELSIUS_K
    return emissivity * STEFAN_BOLTZMANN_W_m2K4 * (body**4 - walls**4) / (body_C - air_C)


def film_air(setup: Setup, film_C: float) -> Air:
    """Air at the film temperature, with the vapour of the air in the room."""
    air = setup.air
    return air_properties(film_C, air.pressure_Pa, air.relative_humidity, humidity_at_C=mid_air_C(setup))


@dataclass(frozen=True, slots=True)
class State:
    """All inputs at one set of values: the set-up that holds most of them, and the few that no set-up holds."""

    setup: Setup
    body: ThermalBody
    capacity_J_K: float
    body_mean_C: float
    body_felt_C: float
    air_C: float
    surroundings_C: float

    @property
    def film_C(self) -> float:
        return 0.5 * (self.body_mean_C + self.air_C)


@dataclass(frozen=True, slots=True)
class Relation:
    """h, Nu and Re as functions of the inputs by name; an input that is left out keeps its nominal value."""

    setup: Setup
    anchor: Anchor
    nominal_heat_J_kgK: float  # specific heat at the body's felt temperature
    kappa: float

    def outputs(self, values: Mapping[str, float]) -> tuple[float, ...]:
        """h; and in forced flow Nu and Re, all at one set of inputs."""
        state = state_at(self.setup, self.anchor, values)
        anchor = self.anchor
        heat = values.get("heat capacity", self.nominal_heat_J_kgK) / self.nominal_heat_J_kgK
        time_constant_s = values.get(READINGS, anchor.time_constant_s)
        through = self.kappa * heat * state.capacity_J_K / (time_constant_s * state.body.area_m2)
        inside = _inside_m2K_W(state.body, anchor, values)
        h = through / (1.0 - through * inside) - _losses_W_m2K(state)
        air_C, lag_s = mid_air_C(self.setup), self.setup.recording.tap_lag_s
        h += anchor.per_air_W_m2K2 * (values.get("air temperature", air_C) - air_C)
        h += anchor.per_lag_W_m2Ks * (values.get("tap delay", lag_s) - lag_s)
        if self.setup.recording.kind != "forced":
            return (h,)
        air, size = film_air(state.setup, state.film_C), state.body.across_m
        velocity = velocity_at_body(state.setup)
        return h, h * size / air.conductivity_W_mK, velocity * size / air.kinematic_viscosity_m2_s


def relate(setup: Setup, anchor: Anchor) -> Relation:
    """The relation that gives the anchor's h at the set-up's nominal values."""
    state = state_at(setup, anchor, {})
    wanted = anchor.h_W_m2K + _losses_W_m2K(state)
    through = wanted / (1.0 + wanted * _inside_m2K_W(state.body, anchor, {}))
    kappa = through * anchor.time_constant_s * state.body.area_m2 / state.capacity_J_K
    return Relation(setup, anchor, state.body.specific_heat_J_kgK(anchor.body_felt_C), kappa)


def state_at(setup: Setup, anchor: Anchor, values: Mapping[str, float]) -> State:
    """The set-up with the given inputs put in, and the temperatures that follow.

    An offset of the thermometer moves body and air together, because the air's thermometer was compared with the
    body's in one air; a wrong scale moves the body's excess over the air."""
    changed: dict[str, Any] = {key: values[name] for name, key in BODY_KEYS.items() if name in values}
    body = replace(setup.body, **changed)
    air = replace(
        setup.air,
        pressure_Pa=values.get("pressure", setup.air.pressure_Pa),
        relative_humidity=values.get("humidity", setup.air.relative_humidity),
    )
    moved = replace(setup, body=body, air=air)
    if "velocity" in values:
        moved = replace(moved, flow=_flow_at(setup, moved, values["velocity"]))
    thermal = thermal_body(body)
    offset, gain = values.get("thermometer offset", 0.0), values.get("thermometer gain", 0.0)
    nominal_air_C = mid_air_C(setup)
    air_C = values.get("air temperature", nominal_air_C) - offset
    mean_C, felt_C = (
        one - offset - gain * (one - nominal_air_C) for one in (anchor.body_mean_C, anchor.body_felt_C)
    )
    surroundings_C = air_C if setup.air.surroundings_C is None else setup.air.surroundings_C
    return State(moved, thermal, thermal.capacity_J_K(felt_C), mean_C, felt_C, air_C, surroundings_C)


def _flow_at(setup: Setup, moved: Setup, velocity_m_s: float) -> Flow:
    """The flow with another undisturbed velocity; where it comes from a dynamic pressure, air of another density
    than the nominal one changes it too."""
    if setup.flow.dynamic_pressure_Pa is not None and velocity_m_s > 0.0:
        velocity_m_s *= undisturbed_velocity(moved).value_m_s / undisturbed_velocity(setup).value_m_s
    return replace(
        setup.flow,
        velocity_m_s=velocity_m_s,
        velocity_end_m_s=None,
        velocity_readings_m_s=(),
        dynamic_pressure_Pa=None,
        flow_m3_s=None,
    )


def _losses_W_m2K(state: State) -> float:
    """Radiation and stem loss, as a coefficient on the swept area."""
    emissivity = state.setup.body.emissivity
    radiated = radiation_W_m2K(emissivity, state.body_felt_C, state.air_C, state.surroundings_C)
    return radiated + state.setup.body.stem_loss_W_K / state.body.area_m2


def _inside_m2K_W(body: ThermalBody, anchor: Anchor, values: Mapping[str, float]) -> float:
    """Resistance of the body itself, ℓ/(s·k); 0 where the model is lumped."""
    if not anchor.conduction:
        return 0.0
    conductivity = values.get("conductivity", body.conductivity_W_mK)
    return body.half_thickness_m / (_FLATNESS[body.shape] * conductivity)
