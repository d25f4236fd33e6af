"""A simulated body with temperature differences inside, in air that may change as it cools.

Finite volumes in up to three directions. Over one short step the loss from the faces is linear in their excess over
what they head for, so that the step is a matrix in each direction, one after the other and exact. Convection may
change with time, radiation goes with the fourth power at the mean temperature of the faces, and the heat capacity is
that at the body's mean temperature."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field
from math import exp, floor, log

import numpy as np
from numpy.typing import NDArray

from core.bench.body import ThermalBody
from core.bench.setup import Body
from core.cooling.finite_volume import MIDDLE_C, Direction, Layers, directions_of, layers_of

Array = NDArray[np.float64]

STEFAN_BOLTZMANN_W_M2K4 = 5.670374419e-8  # CODATA 2018
ZERO_C_K = 273.15
STEPS_PER_TIME_CONSTANT = 300
CELLS_IN = {1: 150, 2: 80, 3: 32}  # in each direction, by the number of directions
LONGEST = 40.0  # time constants
MESH = 0.01  # of ln coefficient, between matrices that are worked out


@dataclass(frozen=True, slots=True)
class Face:
    """What the faces lose heat to at one moment: convection and stem [W/(m²·K)] to the air [°C], radiation to the
    walls [°C]."""

    linear_W_m2K: float
    air_C: float
    walls_C: float
    emissivity: float

    def radiation_W_m2K(self, face_C: float) -> float:
        """Radiation from a face at a temperature [°C], over its excess above the walls."""
        own, walls = face_C + ZERO_C_K, self.walls_C + ZERO_C_K
        return self.emissivity * STEFAN_BOLTZMANN_W_M2K4 * (own**2 + walls**2) * (own + walls)

    def loss_W_m2(self, face_C: float) -> float:
        """Heat flow from a face at a temperature [°C]."""
        radiated = self.radiation_W_m2K(face_C) * (face_C - self.walls_C)
        return self.linear_W_m2K * (face_C - self.air_C) + radiated

    def towards(self, face_C: float) -> tuple[float, float]:
        """The whole coefficient [W/(m²·K)], and the temperature [°C] that the face heads for."""
        radiated = self.radiation_W_m2K(face_C)
        whole = self.linear_W_m2K + radiated
        return whole, (self.linear_W_m2K * self.air_C + radiated * self.walls_C) / whole


@dataclass(frozen=True, slots=True)
class Outside:
    """What the body stands in as it cools. `coefficient_W_m2K` is that of the air at a time [s], for a body [°C]
    in air [°C]; `air_C` is the air's temperature at a time; `lost_W_m2K` goes through the stem, over the exposed
    area."""

    coefficient_W_m2K: Callable[[float, float, float], float]
    air_C: Callable[[float], float]
    lost_W_m2K: float
    walls_C: float
    emissivity: float

    def face_at(self, time_s: float, body_C: float) -> Face:
        """The faces' loss at a time [s], for a body at a temperature [°C]."""
        air = self.air_C(time_s)
        linear = self.coefficient_W_m2K(time_s, body_C, air) + self.lost_W_m2K
        return Face(linear, air, self.walls_C, self.emissivity)


@dataclass(frozen=True, slots=True)
class _Cut:
    """A direction cut into layers, for steps that reach `reach_m2` (diffusivity times time). `shares` are those of
    the volume, `seen` what each has of the sensor's temperature; `known` keeps the matrices that were worked out."""

    direction: Direction
    layers: Layers
    conductivity_W_mK: float
    reach_m2: float
    shares: Array
    seen: Array
    known: dict[int, Array] = field(default_factory=dict)

    def step(self, whole_W_m2K: float) -> Array:
        """What one step makes of the layers' excess at a coefficient on the outer face, shape (cells, cells)."""
        place = log(whole_W_m2K) / MESH
        below = floor(place)
        return self._at(below) * (below + 1.0 - place) + self._at(below + 1) * (place - below)

    def _at(self, place: int) -> Array:
        if place not in self.known:
            rates, vectors = self.layers.modes(exp(place * MESH) / self.conductivity_W_mK)
            root = np.sqrt(self.layers.volumes)
            inside = (vectors * np.exp(-rates * self.reach_m2)) @ vectors.T
            self.known[place] = inside / root[:, None] * root[None, :]
        return self.known[place]

    def face_over(self, last: Array, whole_W_m2K: float) -> Array:
        """Excess of the outer face over that of the last layer's middle, any shape."""
        return last / (1.0 + whole_W_m2K * self.layers.skin_m / self.conductivity_W_mK)


def conducting_course(
    body: Body, thermal: ThermalBody, outside: Outside, start_C: float, end_C: float, lag_s: float, tau_s: float
) -> tuple[float, Array]:
    """Step [s] and temperatures [°C] of the sensor on an even grid, until it is at the end temperature.

    Parameters
    ----------
    body, thermal : the body and its properties
    outside : what it stands in
    start_C, end_C : temperature of the whole body at first, and of the sensor at last [°C]
    lag_s : time constant of the sensor in the body [s]
    tau_s : rough time constant of the body [s], which sets the step
    """
    step = tau_s / STEPS_PER_TIME_CONSTANT
    reference = thermal.specific_heat_J_kgK(MIDDLE_C)
    cuts = _cut(body, thermal, step * thermal.conductivity_W_mK / (thermal.density_kg_m3 * reference))
    body_C = np.full([len(cut.shares) for cut in cuts], start_C)
    time, inside, sensor = 0.0, start_C, start_C
    face = before = start_C
    times, shown = [0.0], [start_C]
    while sensor > end_C - 0.5 and time < LONGEST * tau_s:
        own = step * thermal.specific_heat_J_kgK(_mean(body_C, cuts)) / reference
        middle = 1.5 * face - 0.5 * before
        whole, sink = outside.face_at(time + own / 2.0, middle).towards(middle)
        excess = body_C - sink
        for axis, cut in enumerate(cuts):
            excess = np.moveaxis(np.tensordot(cut.step(whole), excess, axes=(1, axis)), 0, axis)
        body_C = sink + excess
        time += own
        before, face = face, sink + _mean(cuts[0].face_over(excess[-1], whole), cuts[1:])
        earlier, inside = inside, sink + _seen(excess, cuts, whole)
        behind = (inside - earlier) / own * lag_s
        sensor = inside - behind + (sensor - earlier + behind) * (exp(-own / lag_s) if lag_s > 0.0 else 0.0)
        times.append(time)
        shown.append(sensor)
    return step, np.interp(np.arange(0.0, time, step), times, shown)


def _cut(body: Body, thermal: ThermalBody, reach_m2: float) -> tuple[_Cut, ...]:
    directions = directions_of(body, thermal)
    cuts = []
    for direction in directions:
        layers = layers_of(direction, CELLS_IN[len(directions)])
        shares = layers.volumes / layers.volumes.sum()
        seen = layers.weights(direction.place)
        cuts.append(_Cut(direction, layers, thermal.conductivity_W_mK, reach_m2, shares, seen))
    return tuple(cuts)


def _mean(layers: Array, cuts: tuple[_Cut, ...]) -> float:
    for cut in cuts:
        layers = np.tensordot(cut.shares, layers, axes=(0, 0))
    return float(layers)


def _seen(excess: Array, cuts: tuple[_Cut, ...], whole_W_m2K: float) -> float:
    """The excess at the sensor's place."""
    for cut in cuts:
        if cut.direction.place >= 1.0:
            excess = cut.face_over(excess[-1], whole_W_m2K)
        else:
            excess = np.tensordot(cut.seen, excess, axes=(0, 0))
    return float(excess)
