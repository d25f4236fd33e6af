"""A body cooling by convection, radiation and its stem in air that may drift.

m c(T) dT/dt = −w [(h A + G)(T − T∞(t)) + ε σ A (T⁴ − T_s⁴)]

with w = 1 for a body at one temperature, and by conduction inside (`core.cooling.conduction`) below 1. Then T is the
sensor's, the faces radiate at their own temperature, w follows the coefficient as radiation fades, air that drifts
is felt with the delay of the body, and the early modes of conduction come on top.

With θ = T − T∞ and z = ln(θ₀/θ) this becomes dz/dt = f(z, t), nearly constant in time. It is solved by Picard
iteration on Chebyshev nodes: no time stepping, and the solution can be evaluated anywhere in the window."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from core.bench.body import ThermalBody, thermal_body
from core.bench.setup import Setup
from core.cooling import chebyshev
from core.cooling.conduction import MODES, Factor, Modes, factors_of, modes_of

Array = NDArray[np.float64]

STEFAN_BOLTZMANN_W_M2K4 = 5.670374419e-8  # CODATA 2018
ZERO_C_K = 273.15
TOLERANCE = 1e-11
ROUNDS = 80
PARAMETERS = ("ln h", "start", "asymptote")
STILL_PARAMETERS = ("ln scale", "start", "stem loss")
STEPS = np.array([1e-4, 1e-3, 1e-3])  # for central differences in the parameters
LARGEST_Z = 30.0
MEAN_EXCESS = 0.45  # of the first excess over the air: about the mean over a run
NO_CONDUCTION = 1e-5  # Biot number (half thickness) below which conduction is left out
NEARLY_EQUAL = 1e-6  # of a sensor's and a mode's time constants
EARLY_MODES = 0.03  # Biot number above which the early modes are followed too


@dataclass(frozen=True, slots=True)
class Early:
    """The early modes of conduction on top of the lasting one, as the sensor feels them.

    `lasting_s` is the decay rate of the lasting mode at the start and `air_C` the air then, shape (sets,);
    `body_rate_K_s` the rate of the lasting mode of the first set on the Chebyshev nodes."""

    modes: Modes
    lasting_s: Array
    air_C: Array
    air_rate_K_s: float
    start_K: Array
    body_rate_K_s: Array

    def at(self, time_s: Array, body_C: Array, rate_K_s: Array, lag_s: float) -> tuple[Array, Array]:
        """What they add to the temperatures [K], shape (times, sets), and to the rate of the first set [K/s].

        Each mode A e^(−μt) is felt by a sensor of time constant s, which starts at the body's own temperature, as
        A (e^(−μt) − sμ e^(−t/s))/(1 − sμ), and lags behind drifting air by A/μ of its change."""
        modes, time = self.modes, time_s[None, :, None]
        excess = body_C - self.air_C - self.air_rate_K_s * time_s[:, None]
        behind = 1.0 - lag_s * (modes.rate_s + self.lasting_s)
        behind = np.where(np.abs(behind) < NEARLY_EQUAL, NEARLY_EQUAL, behind)
        each = (modes.amplitude / behind)[:, None, :] * np.exp(-modes.rate_s[:, None, :] * time)
        share, ending = each.sum(axis=0), np.einsum("mn,m->n", each[:, :, 0], modes.rate_s[:, 0])
        more = excess * share
        faster = (rate_K_s - self.air_rate_K_s) * share[:, 0] - excess[:, 0] * ending
        if lag_s > 0.0:
            own = self.start_K * np.sum(modes.amplitude * (1.0 - behind) / behind, axis=0)
            settling = np.exp(-time_s / lag_s)
            more = more - own * settling[:, None]
            faster = faster + own[0] * settling / lag_s
        if self.air_rate_K_s != 0.0:
            total = modes.rate_s + self.lasting_s
            late = self.air_rate_K_s * modes.first * modes.amplitude
            gone = np.exp(-total[:, None, :] * time)
            more = more - np.sum((late / total)[:, None, :] * (1.0 - gone), axis=0)
            faster = faster - late[:, 0] @ gone[:, :, 0]
        return more, faster


@dataclass(frozen=True, slots=True)
class Curve:
    """Temperatures over a record for one or more sets of parameters.

    `sensor_C`, `body_C` and `rate_K_s` (of the sensor) stand on the Chebyshev nodes, shape (NODES, sets), without
    what comes on top: the sensor's own transient, of amplitude `fading_K` and time constant `lag_s`, and the early
    modes of conduction."""

    length_s: float
    sensor_C: Array
    body_C: Array
    rate_K_s: Array
    fading_K: Array
    lag_s: float
    early: Early | None

    def at(self, time_s: Array) -> Array:
        """Sensor temperature [°C] at times [s], shape (len(time_s), sets); beyond the record straight on."""
        return self.with_rate(time_s)[0]

    def with_rate(self, time_s: Array) -> tuple[Array, Array]:
        """The same, and the rate [K/s] of the first set, shape (len(time_s),)."""
        x = 2.0 * time_s / self.length_s - 1.0
        inside = np.minimum(np.maximum(x, -1.0), 1.0)
        beyond = None if (x == inside).all() else (x - inside) * self.length_s / 2.0
        return self.on_basis(chebyshev.interpolation(inside), time_s, beyond)

    def on_basis(self, basis: Array, time_s: Array, beyond_s: Array | None = None) -> tuple[Array, Array]:
        """The same where the interpolation matrix for these times is known already."""
        shown = basis @ self.sensor_C
        rate = basis @ self.rate_K_s[:, 0]
        if self.early is not None:
            body = shown if self.lag_s == 0.0 else basis @ self.body_C
            body_rate = rate if self.lag_s == 0.0 else basis @ self.early.body_rate_K_s
            more, faster = self.early.at(np.maximum(time_s, 0.0), body, body_rate, self.lag_s)
            shown, rate = shown + more, rate + faster
        if self.lag_s > 0.0:
            fading = np.exp(-np.maximum(time_s, 0.0) / self.lag_s)
            shown = shown + self.fading_K * fading[:, None]
            rate = rate - self.fading_K[0] / self.lag_s * fading
        if beyond_s is not None:
            shown = shown + np.where(
                beyond_s[:, None] < 0.0,
                beyond_s[:, None] * self.rate_K_s[0],
                beyond_s[:, None] * self.rate_K_s[-1],
            )
        return shown, rate


@dataclass(frozen=True, slots=True)
class CoolingModel:
    """The bench as the physics needs it; parameters are (ln h, T at the start, asymptote offset).

    T at the start is that of the lasting mode at the sensor, followed back to time 0. With `natural_W_m2K`, the
    coefficient of natural convection at an excess of 1 K, above 0, the run is one in still air: h goes with the
    fourth root of the excess, and the parameters are (ln scale of h, T at the start, stem loss [W/K])."""

    body: ThermalBody
    stem_loss_W_K: float
    emissivity: float
    air_C: float
    air_rate_K_s: float
    walls_C: float
    lag_s: float
    factors: tuple[Factor, ...]
    natural_W_m2K: float = 0.0

    def curve(self, parameters: Array, length_s: float) -> Curve:
        """Temperatures over `length_s` from the start of the record for parameter sets of shape (sets, 3).

        A lagging sensor is taken as at the body's own temperature at the start."""
        h, start_C = np.exp(parameters[:, 0]), parameters[:, 1]
        still = self.natural_W_m2K > 0.0
        offset = np.zeros(len(h)) if still else parameters[:, 2]
        time = (chebyshev.nodes() + 1.0)[:, None] * (length_s / 2.0)
        air = self.air_C + offset + self.air_rate_K_s * time
        theta0 = np.maximum(start_C - air[0], 1e-3)
        integrate = chebyshev.integration() * (length_s / 2.0)
        modes = None if still else self.modes(h, start_C, air[0])
        first = h * self.natural_W_m2K * theta0**0.25 if still else h
        conductance = first * self.body.area_m2 + (parameters[:, 2] if still else self.stem_loss_W_K)
        z = conductance / self.body.capacity_J_K(float(np.mean(start_C))) * time
        walls = self.walls_C + offset if self.walls_C == self.air_C else self.walls_C
        drift = self.air_rate_K_s * (1.0 if modes is None else modes.first)
        for _ in range(ROUNDS):
            theta = theta0 * np.exp(-np.clip(z, -LARGEST_Z, LARGEST_Z))
            if still:
                conductance = self._still_W_K(h, theta, parameters[:, 2])
            cooling, flatter = self._cooling_K_s(theta, air, conductance, walls, modes)
            new = integrate @ ((cooling + drift) / theta) + flatter
            change = float(np.max(np.abs(new - z)))
            z = new
            if change < TOLERANCE:
                break
        theta = theta0 * np.exp(-np.clip(z, -LARGEST_Z, LARGEST_Z))
        if still:
            conductance = self._still_W_K(h, theta, parameters[:, 2])
        cooling, _ = self._cooling_K_s(theta, air, conductance, walls, modes)
        body, rate = air + theta, self.air_rate_K_s - drift - cooling
        early = None
        if modes is not None and len(modes.amplitude):
            early = Early(modes, cooling[0] / theta0, air[0], self.air_rate_K_s, theta0, rate[:, 0])
        if self.lag_s == 0.0:
            return Curve(length_s, body, body, rate, np.zeros(len(h)), 0.0, early)
        derivative = chebyshev.differentiation() * (2.0 / length_s)
        steady = np.linalg.solve(np.eye(chebyshev.NODES) + self.lag_s * derivative, body)
        return Curve(length_s, steady, body, derivative @ steady, body[0] - steady[0], self.lag_s, early)

    def _cooling_K_s(
        self, excess_K: Array, air_C: Array, conductance_W_K: Array | float, walls_C: Array | float, modes: Modes | None
    ) -> tuple[Array, Array | float]:
        """How fast the sensor's excess falls in steady air [K/s], any shape that ends in (sets,); and by how much its
        logarithm has fallen since the first row as the body became more even."""
        if modes is None:
            body_C = air_C + excess_K
            watts = conductance_W_K * excess_K + self._radiation_W(body_C, walls_C)
            return watts / self.body.capacity_J_K_at(body_C), 0.0
        area, face_K = self.body.area_m2, modes.face * excess_K
        whole = (conductance_W_K + self._radiation_W(air_C + face_K, walls_C) / face_K) / area
        lumped = modes.whole_W_m2K * area * excess_K / self.body.capacity_J_K_at(air_C + modes.mean * excess_K)
        cooling = modes.share * (whole / modes.whole_W_m2K) ** modes.exponent * lumped
        return cooling, modes.flattens * np.log(whole / whole[0])

    def _still_W_K(self, scale: Array, excess_K: Array, stem_W_K: Array) -> Array:
        result: Array = scale * self.natural_W_m2K * excess_K**0.25 * self.body.area_m2 + stem_W_K
        return result

    def modes(self, h_W_m2K: Array, start_C: Array, air_C: Array) -> Modes | None:
        """Conduction inside the body for sets of h [W/(m²·K)]; None where it would change nothing that counts."""
        body = self.body
        middle = air_C + MEAN_EXCESS * (start_C - air_C)
        losses = self.stem_loss_W_K / body.area_m2
        whole = h_W_m2K + losses + self._radiation_W(middle, air_C) / (body.area_m2 * np.maximum(middle - air_C, 1e-3))
        biot = float(whole[0]) * max(one.half_m for one in self.factors) / body.conductivity_W_mK
        if biot < NO_CONDUCTION:
            return None
        diffusivity = body.conductivity_W_mK / (body.density_kg_m3 * body.specific_heat_J_kgK(float(middle[0])))
        count = MODES if biot > EARLY_MODES else 1
        ratio = body.area_m2 / body.volume_m3
        return modes_of(self.factors, whole, body.conductivity_W_mK, diffusivity, ratio, count)

    def conduction_share(self, parameters: Array) -> float:
        """Share of the lumped conductance that conduction inside the body leaves, at parameters of shape (3,)."""
        if self.natural_W_m2K > 0.0:
            return 1.0
        modes = self.modes(np.exp(parameters[:1]), parameters[1:2], np.array([self.air_C + parameters[2]]))
        return 1.0 if modes is None else float(modes.share[0])

    def radiation_W_m2K(self, body_C: float, offset_K: float = 0.0) -> float:
        """Radiation [W/(m²·K)] at a surface temperature [°C], over its excess above the air."""
        walls = self.walls_C + offset_K if self.walls_C == self.air_C else self.walls_C
        watts = self._radiation_W(np.array([body_C]), walls)[0]
        return float(watts / (self.body.area_m2 * (body_C - self.air_C - offset_K)))

    def _radiation_W(self, body_C: Array, walls_C: Array | float) -> Array:
        fourth = (body_C + ZERO_C_K) ** 4 - (np.asarray(walls_C) + ZERO_C_K) ** 4
        result: Array = self.emissivity * STEFAN_BOLTZMANN_W_M2K4 * self.body.area_m2 * fourth
        return result


def cooling_model(setup: Setup, record_s: float) -> CoolingModel:
    """The model of a bench for a record of `record_s` seconds, over which the air drifts."""
    air = setup.air
    end = air.temperature_C if air.temperature_end_C is None else air.temperature_end_C
    return CoolingModel(
        body=thermal_body(setup.body),
        stem_loss_W_K=setup.body.stem_loss_W_K,
        emissivity=setup.body.emissivity,
        air_C=air.temperature_C,
        air_rate_K_s=(end - air.temperature_C) / record_s,
        walls_C=air.temperature_C if air.surroundings_C is None else air.surroundings_C,
        lag_s=setup.thermometer.lag_s,
        factors=factors_of(setup.body),
        natural_W_m2K=natural_W_m2K(setup) if setup.recording.kind == "still-air" else 0.0,
    )


def natural_W_m2K(setup: Setup) -> float:
    """Coefficient of natural convection in air at an excess of 1 K [W/(m²·K)]; it goes with θ^(1/4).

    Simplified laws for laminar flow at atmospheric pressure: horizontal cylinder and sphere 1.32 (θ/D)^(1/4),
    other bodies 1.42 (θ/L)^(1/4) with their height (McAdams, Heat Transmission, 3rd ed. 1954, ch. 7; Holman, Heat
    Transfer, table 7-2, from memory). Valid for 10⁴ < Gr Pr < 10⁹."""
    body = thermal_body(setup.body)
    factor = 1.42 if body.shape == "block" else 1.32
    return float(factor * body.across_m**-0.25)
