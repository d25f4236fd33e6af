"""The uncertainty budget of h, Nu and Re by JCGM 100.

What is counted where, so that nothing counts twice. The display's resolution, its refresh and the hand's jitter
lie in the likelihood of the readings and have no line of their own. How far the air's thermometer may be off the
body's is the line `air temperature`, with the sensitivity of the fit to the measured air. The body thermometer's
own offset and scale act only through the temperature at which c(T), radiation and the air's properties are taken:
a common offset and a common scale leave the time constant alone. The mean delay of the tap acts by the sensitivity
that the fit gives."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from core.bench.body import thermal_body
from core.bench.setup import Setup
from core.convection.flow import undisturbed_velocity
from core.cooling.fit import CoolingFit
from core.judgement.answer import BudgetLine
from core.judgement.montecarlo import Distribution, simulate
from core.judgement.propagation import Expanded, Input, Model, Vector, propagate
from core.judgement.relation import BODY_KEYS, READINGS, Anchor, Relation, anchor_of, mid_air_C, relate
from core.judgement.stem import measured_stem_loss

BODY_INPUTS = frozenset({*BODY_KEYS, "heat capacity", "conductivity"})
BENCH_INPUTS = frozenset({"thermometer offset", "thermometer gain", "tap delay", "pressure", "humidity"})
_SIZES = {
    "cylinder": (("diameter", "diameter_m", "diameter_u_m"), ("length", "length_m", "length_u_m")),
    "sphere": (("diameter", "diameter_m", "diameter_u_m"),),
    "block": tuple((f"side {one}", f"side_{one}_m", "length_u_m") for one in "abc"),
}


@dataclass(frozen=True, slots=True)
class Budget:
    """The inputs and what becomes of them: h always, Nusselt and Reynolds number in forced flow."""

    inputs: tuple[Input, ...]
    h: Expanded
    nusselt: Expanded | None
    reynolds: Expanded | None

    def lines(self) -> tuple[BudgetLine, ...]:
        """The budget of h, largest share first; inputs that touch only the Reynolds number are left out."""
        lines = (
            BudgetLine(one.name, one.value, one.unit, one.u, sensitivity, share)
            for one, sensitivity, share in zip(self.inputs, self.h.sensitivities, self.h.shares, strict=True)
            if one.name not in {"velocity", "pressure", "humidity"}
        )
        return tuple(sorted(lines, key=lambda line: -line.share))


def inputs_of(relation: Relation) -> tuple[Input, ...]:
    """Every input of the relation with its standard uncertainty and degrees of freedom.

    Uncertainties stated in the set-up are type B and taken as exactly known (JCGM 100, G.4.3)."""
    setup, anchor, body = relation.setup, relation.anchor, relation.setup.body
    thermal = thermal_body(body)
    inputs = [
        Input(name, getattr(body, key), getattr(body, u), "m", low=0.0) for name, key, u in _SIZES[body.shape]
    ]
    if body.mass_kg is not None:
        inputs.append(Input("mass", body.mass_kg, body.mass_u_kg, "kg", low=0.0))
    else:
        density = thermal.density_kg_m3
        inputs.append(Input("density", density, density * thermal.density_u_rel, "kg/m³", low=0.0))
    heat = relation.nominal_heat_J_kgK
    inputs.append(Input("heat capacity", heat, heat * thermal.heat_capacity_u_rel, "J/(kg·K)", low=0.0))
    if anchor.conduction:
        k = thermal.conductivity_W_mK
        inputs.append(Input("conductivity", k, k * body.conductivity_u_rel, "W/(m·K)", low=0.0))
    inputs += [
        Input("emissivity", body.emissivity, body.emissivity_u, low=0.0, high=1.0),
        Input("stem loss", body.stem_loss_W_K, body.stem_loss_u_W_K, "W/K", low=0.0),
        Input("thermometer offset", 0.0, setup.thermometer.accuracy_K, "K"),
        Input("thermometer gain", 0.0, setup.thermometer.gain_u_rel),
        Input("air temperature", mid_air_C(setup), anchor.air_u_K, "°C"),
        Input("tap delay", setup.recording.tap_lag_s, setup.recording.tap_lag_u_s, "s"),
    ]
    if setup.recording.kind == "forced":
        velocity = undisturbed_velocity(setup)
        inputs += [
            Input("pressure", setup.air.pressure_Pa, setup.air.pressure_u_Pa, "Pa", low=60e3, high=105e3),
            Input("humidity", setup.air.relative_humidity, setup.air.relative_humidity_u, low=0.0, high=1.0),
            Input("velocity", velocity.value_m_s, velocity.u_m_s, "m/s", velocity.dof, low=0.0),
        ]
    tau = anchor.time_constant_s
    h, *_ = relation.outputs({})
    step = 1e-4 * tau
    slope = (relation.outputs({READINGS: tau + step})[0] - h) / step
    u = float(anchor.readings_u_W_m2K / abs(slope))
    inputs.append(Input(READINGS, tau, u, "s", anchor.readings_dof, low=0.0))
    return tuple(inputs)


def model_of(relation: Relation, inputs: tuple[Input, ...]) -> Model:
    """The relation as a function of the vector of inputs."""
    names = [one.name for one in inputs]

    def model(values: Vector) -> Vector:
        return np.array(relation.outputs(dict(zip(names, (float(v) for v in values), strict=True))))

    return model


def budget_from(setup: Setup, anchor: Anchor) -> Budget:
    """The budget of a fit made or predicted."""
    relation = relate(setup, anchor)
    inputs = inputs_of(relation)
    outputs, _ = propagate(model_of(relation, inputs), inputs)
    if len(outputs) == 1:
        return Budget(inputs, outputs[0], None, None)
    return Budget(inputs, *outputs)


def budget_of(fit: CoolingFit, setup: Setup) -> Budget:
    """The budget of a fit.

    Diameter and length enter area and, without a weighed mass, the mass; the diameter also Nu and Re: each is one
    input moved everywhere at once, which carries its correlations in full (JCGM 100:2008, F.1.2.4).

    Parameters
    ----------
    fit : the fit of one run [any]
    setup : the set-up that it was made with [any]

    Returns
    -------
    Budget

    References
    ----------
    JCGM 100:2008, clauses 5 and 6, F.1.2.4, G.4.
    """
    return budget_from(_as_measured(fit, setup), anchor_of(fit, setup))


def _as_measured(fit: CoolingFit, setup: Setup) -> Setup:
    """The set-up, in a still-air run with the stem loss that the run itself measured."""
    stem = measured_stem_loss(fit, setup)
    if stem is None:
        return setup
    return replace(
        setup, body=replace(setup.body, stem_loss_W_K=max(stem.loss_W_K, 0.0), stem_loss_u_W_K=stem.u_W_K)
    )


def monte_carlo_of(fit: CoolingFit, setup: Setup, *, seed: int, draws: int = 20_000) -> tuple[Distribution, ...]:
    """The same inputs drawn through the same relation (JCGM 101): h, and in forced flow Nu and Re."""
    relation = relate(_as_measured(fit, setup), anchor_of(fit, setup))
    inputs = inputs_of(relation)
    return simulate(model_of(relation, inputs), inputs, seed=seed, draws=draws)
