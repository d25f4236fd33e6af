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
class Decay:
    """Excess temperature at the sensor over the first one, as a sum of decays: `share` and `rate_s` [1/s]."""

    share: Array
    rate_s: Array

    def at(self, time_s: Array) -> Array:
        """The excess at times [s] as a share of the first one."""
        result: Array = np.exp(-np.outer(time_s, self.rate_s)) @ self.share
        return result

    def slope_at(self, time_s: Array) -> Array:
        """Its rate of change [1/s]."""
        result: Array = np.exp(-np.outer(time_s, self.rate_s)) @ (-self.share * self.rate_s)
        return result


def decay_in(body: Body, thermal: ThermalBody, coefficient_W_m2K: float) -> Decay:
    """The decay of a whole body: the product of its directions.

    Parameters
    ----------
    body : shape, exposed faces, place of the thermometer
    thermal : its properties
    coefficient_W_m2K : whole coefficient on the exposed faces [W/(m²·K)]
    """
    length = thermal.span_m
    diffusivity = thermal.conductivity_W_mK / (thermal.density_kg_m3 * thermal.specific_heat_J_kgK(MIDDLE_C))
    place = 1.0 if body.position == "surface" else 0.0
    if body.shape == "block":
        directions = [("wall", thermal.across_m / 2, place), ("wall", (body.side_b_m or 0.0) / 2, 0.0)]
    else:
        directions = [(body.shape, thermal.half_thickness_m, place)]
    if body.shape != "sphere" and body.exposed == "all":
        directions.append(("wall", length / 2, 2 * body.axial_offset_m / length))
    if body.shape != "sphere" and body.exposed == "side+end":
        directions.append(("wall", length, 0.5 + body.axial_offset_m / length))
    share, rate = np.ones(1), np.zeros(1)
    for kind, half, where in directions:
        own = _direction(kind, half, where, coefficient_W_m2K / thermal.conductivity_W_mK, diffusivity)
        share = np.outer(share, own.share).ravel()
        rate = np.add.outer(rate, own.rate_s).ravel()
        order = np.argsort(rate)[:200]
        share, rate = share[order], rate[order]
    return Decay(share, rate)


def _direction(kind: str, half_m: float, place: float, h_over_k_1_m: float, diffusivity_m2_s: float) -> Decay:
    power = POWERS[kind]
    edges = half_m * (1.0 - (1.0 - np.linspace(0.0, 1.0, CELLS + 1)) ** 1.2)
    middles = (edges[1:] + edges[:-1]) / 2.0
    volumes = (edges[1:] ** (power + 1) - edges[:-1] ** (power + 1)) / (power + 1)
    links = edges[1:-1] ** power / np.diff(middles)
    skin = edges[-1] ** power / (1.0 / h_over_k_1_m + edges[-1] - middles[-1])
    matrix = np.zeros((CELLS, CELLS))
    for k, link in enumerate(links):
        matrix[k, k] += link
        matrix[k + 1, k + 1] += link
        matrix[k, k + 1] -= link
        matrix[k + 1, k] -= link
    matrix[-1, -1] += skin
    root = np.sqrt(volumes)
    rates, vectors = np.linalg.eigh(matrix / np.outer(root, root))
    weight = vectors.T @ root
    if place >= 1.0:
        inner = vectors[-1] / root[-1]
        seen = inner * (1.0 - (edges[-1] - middles[-1]) / (1.0 / h_over_k_1_m + edges[-1] - middles[-1]))
    else:
        seen = np.array([np.interp(place * half_m, middles, column / root) for column in vectors.T])
    return Decay(seen * weight, rates * diffusivity_m2_s)
