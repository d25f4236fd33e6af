"""The heated body as the physics needs it: mass, heat capacity, swept faces, the length of its Biot number."""

from __future__ import annotations

from dataclasses import dataclass
from math import pi

import numpy as np
from numpy.typing import NDArray

from core.bench.setup import Body
from core.bench.solids import SOLIDS, solid
from core.errors import BadSetup

REFERENCE_C = 20.0


@dataclass(frozen=True, slots=True)
class ThermalBody:
    """A body resolved: sizes and material properties in SI units.

    `heat_capacity_J_kgK` holds at 20 °C and changes by `heat_capacity_slope_J_kgK2` per kelvin. `area_m2` is
    what the air sweeps (`exposed`), `volume_m3` the whole body. `half_thickness_m` is the length of the Biot
    number: the radius of a cylinder or sphere, half the smallest side of a block. `across_m` is the size across
    the stream, `span_m` the length across it."""

    shape: str
    mass_kg: float
    density_kg_m3: float
    heat_capacity_J_kgK: float
    heat_capacity_slope_J_kgK2: float
    conductivity_W_mK: float
    area_m2: float
    volume_m3: float
    half_thickness_m: float
    across_m: float
    span_m: float
    heat_capacity_u_rel: float
    density_u_rel: float

    def specific_heat_J_kgK(self, temperature_C: float) -> float:
        """Specific heat capacity at a temperature [°C], in J/(kg·K)."""
        return self.heat_capacity_J_kgK + self.heat_capacity_slope_J_kgK2 * (temperature_C - REFERENCE_C)

    def capacity_J_K_at(self, temperature_C: NDArray[np.float64]) -> NDArray[np.float64]:
        """Heat capacity m·c of the body at temperatures [°C] of any shape, in J/K."""
        result: NDArray[np.float64] = self.mass_kg * (
            self.heat_capacity_J_kgK + self.heat_capacity_slope_J_kgK2 * (temperature_C - REFERENCE_C)
        )
        return result

    def capacity_J_K(self, temperature_C: float) -> float:
        """Heat capacity m·c of the body at a temperature [°C], in J/K."""
        return self.mass_kg * self.specific_heat_J_kgK(temperature_C)


def _size(body: Body, key: str) -> float:
    value = getattr(body, key)
    if value is None:
        raise BadSetup(f"[body] {key} is missing, and a {body.shape} needs it.")
    return float(value)


def _faces(body: Body) -> tuple[float, float, float, float, float, float]:
    """Volume, side area, area of one end, half thickness, size across the stream, span; in m³, m² and m."""
    if body.shape == "sphere":
        d = _size(body, "diameter_m")
        return pi / 6 * d**3, pi * d**2, 0.0, d / 2, d, d
    if body.shape == "cylinder":
        d, length = _size(body, "diameter_m"), _size(body, "length_m")
        end = pi / 4 * d**2
        return end * length, pi * d * length, end, d / 2, d, length
    a, b, c = (_size(body, f"side_{side}_m") for side in "abc")
    return a * b * c, 2 * (a + b) * c, a * b, min(a, b) / 2, a, c


def thermal_body(body: Body) -> ThermalBody:
    """The body of a set-up with its material looked up and its mass settled.

    A weighed mass replaces density times volume; the density then follows from mass and volume. Properties given
    in the set-up go before the table of solids; a heat capacity given there is taken as constant.

    Raises
    ------
    BadSetup : a size or a property is missing, or the material is unknown.
    """
    volume, side, end, half, across, span = _faces(body)
    area = side + {"side": 0.0, "side+end": end, "all": 2 * end}[body.exposed]
    known = None
    if body.material is not None and (
        body.material in SOLIDS or None in (body.density_kg_m3, body.heat_capacity_J_kgK, body.conductivity_W_mK)
    ):
        known = solid(body.material)

    def settled(key: str) -> float:
        own = getattr(body, key)
        if own is not None:
            return float(own)
        if known is None:
            raise BadSetup(f"[body] {key} is missing: name a material of the table, or give all three properties.")
        return float(getattr(known, key))

    density = settled("density_kg_m3")
    slope = 0.0
    if known is not None and body.heat_capacity_J_kgK is None:
        slope = known.heat_capacity_slope_J_kgK2
    capacity_u = body.heat_capacity_u_rel
    if capacity_u is None:
        capacity_u = known.heat_capacity_u_rel if known and body.heat_capacity_J_kgK is None else 0.01
    mass = density * volume if body.mass_kg is None else body.mass_kg
    return ThermalBody(
        shape=body.shape,
        mass_kg=mass,
        density_kg_m3=mass / volume,
        heat_capacity_J_kgK=settled("heat_capacity_J_kgK"),
        heat_capacity_slope_J_kgK2=slope,
        conductivity_W_mK=settled("conductivity_W_mK"),
        area_m2=area,
        volume_m3=volume,
        half_thickness_m=half,
        across_m=across,
        span_m=span,
        heat_capacity_u_rel=capacity_u,
        density_u_rel=body.density_u_rel,
    )
