"""Conduction inside a simulated body by finite volumes: the simulator's own way, apart from the estimator's."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from core.bench.body import ThermalBody
from core.bench.setup import Body

Array = NDArray[np.float64]

CELLS = 150
MIDDLE_C = 56.0  # temperature of the heat capacity
POWERS = {"wall": 0, "cylinder": 1, "sphere": 2}


@dataclass(frozen=True, slots=True)
class Direction:
    """One direction of conduction: wall, cylinder or sphere, half thickness or radius [m], the sensor's place in
    it (0 centre, 1 surface)."""

    kind: str
    half_m: float
    place: float


@dataclass(frozen=True, slots=True)
class Layers:
    """A direction cut into layers, thinner towards its outer face.

    `middles` [m], and per unit of face or angle: `volumes`, `matrix` of the heat exchanged between layers [same
    unit/m²], shape (cells, cells), `face` the outer face and `skin_m` its distance from the last middle."""

    middles: Array
    volumes: Array
    matrix: Array
    face: float
    skin_m: float

    def weights(self, place: float) -> Array:
        """What each layer has of the temperature at a place inside, shape (cells,)."""
        half = self.middles[-1] + self.skin_m
        result: Array = np.array([np.interp(place * half, self.middles, one) for one in np.eye(len(self.middles))])
        return result

    def modes(self, coefficient_1_m: float) -> tuple[Array, Array]:
        """Decay rates over the diffusivity [1/m²], and orthogonal modes of √volume · temperature, where the outer
        face loses `coefficient_1_m` (h/k) of its excess."""
        matrix = self.matrix.copy()
        if coefficient_1_m > 0.0:
            matrix[-1, -1] += self.face / (1.0 / coefficient_1_m + self.skin_m)
        root = np.sqrt(self.volumes)
        rates, vectors = np.linalg.eigh(matrix / np.outer(root, root))
        return rates, vectors


@dataclass(frozen=True, slots=True)
class Decay:
    """Excess temperature at the sensor over the first one, as a sum of decays: `share` and `rate_s` [1/s]."""

    share: Array
    rate_s: Array

    def at(self, time_s: Array) -> Array:
        """The excess at times [s] as a share of the first one."""
        result: Array = np.exp(-np.outer(time_s, self.rate_s)) @ self.share
        return result


def directions_of(body: Body, thermal: ThermalBody) -> tuple[Direction, ...]:
    """The directions in which heat flows to exposed faces."""
    place = 1.0 if body.position == "surface" else 0.0
    across: tuple[Direction, ...]
    if body.shape == "block":
        across = (
            Direction("wall", (body.side_a_m or 0.0) / 2, place),
            Direction("wall", (body.side_b_m or 0.0) / 2, 0.0),
        )
    else:
        across = (Direction(body.shape, thermal.half_thickness_m, place),)
    length = thermal.span_m
    if body.shape == "sphere" or body.exposed == "side":
        return across
    if body.exposed == "all":
        return (*across, Direction("wall", length / 2, min(2 * abs(body.axial_offset_m) / length, 1.0)))
    return (*across, Direction("wall", length, min(0.5 + body.axial_offset_m / length, 1.0)))


def layers_of(direction: Direction, cells: int) -> Layers:
    """A direction cut into `cells` layers."""
    power = POWERS[direction.kind]
    edges = direction.half_m * (1.0 - (1.0 - np.linspace(0.0, 1.0, cells + 1)) ** 1.2)
    middles = (edges[1:] + edges[:-1]) / 2.0
    volumes = (edges[1:] ** (power + 1) - edges[:-1] ** (power + 1)) / (power + 1)
    links = edges[1:-1] ** power / np.diff(middles)
    matrix = np.diag(np.append(links, 0.0) + np.append(0.0, links)) - np.diag(links, 1) - np.diag(links, -1)
    return Layers(middles, volumes, matrix, float(edges[-1] ** power), float(edges[-1] - middles[-1]))


def decay_in(body: Body, thermal: ThermalBody, coefficient_W_m2K: float) -> Decay:
    """The decay of a whole body in steady air: the product of its directions.

    Parameters
    ----------
    body : shape, exposed faces, place of the thermometer
    thermal : its properties
    coefficient_W_m2K : whole coefficient on the exposed faces [W/(m²·K)]
    """
    diffusivity = thermal.conductivity_W_mK / (thermal.density_kg_m3 * thermal.specific_heat_J_kgK(MIDDLE_C))
    share, rate = np.ones(1), np.zeros(1)
    for direction in directions_of(body, thermal):
        own = _direction(direction, coefficient_W_m2K / thermal.conductivity_W_mK, diffusivity)
        share = np.outer(share, own.share).ravel()
        rate = np.add.outer(rate, own.rate_s).ravel()
        order = np.argsort(rate)[:200]
        share, rate = share[order], rate[order]
    return Decay(share, rate)


def _direction(direction: Direction, h_over_k_1_m: float, diffusivity_m2_s: float) -> Decay:
    layers = layers_of(direction, CELLS)
    rates, vectors = layers.modes(h_over_k_1_m)
    root = np.sqrt(layers.volumes)
    if direction.place >= 1.0:
        skin = layers.skin_m / (1.0 / h_over_k_1_m + layers.skin_m)
        seen = vectors[-1] / root[-1] * (1.0 - skin)
    else:
        seen = (layers.weights(direction.place) / root) @ vectors
    return Decay(seen * (vectors.T @ root), rates * diffusivity_m2_s)
