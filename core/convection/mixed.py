"""Whether buoyancy has a say in a forced flow, and how much it would add."""

from __future__ import annotations

from dataclasses import dataclass

from core.bench.air import air_properties
from core.convection.natural import combined, still_air
from core.convection.numbers import film_temperature_C, grashof, reynolds, richardson

EXPONENT = {"cylinder": 4.0, "sphere": 4.0, "block": 3.0}


@dataclass(frozen=True, slots=True)
class Mixed:
    """Richardson number, h that still air alone would give, and the share that buoyancy adds to the forced h by
    the published rule for joining the two."""

    richardson: float
    natural_h_W_m2K: float
    added_rel: float


def mixed(
    shape: str,
    across_m: float,
    along_m: float,
    velocity_m_s: float,
    forced_h_W_m2K: float,
    surface_C: float,
    air_C: float,
    pressure_Pa: float,
    relative_humidity: float = 0.0,
) -> Mixed:
    """Forced and natural convection of one body side by side, the stream level and across the body's axis.

    Parameters
    ----------
    shape : "cylinder", "sphere" or "block"
    across_m : diameter, or side across the stream [m]
    along_m : side of a block along the stream [m]
    velocity_m_s : velocity at the body, above zero [m/s]
    forced_h_W_m2K : coefficient of the forced flow alone [W/(m²·K)]
    surface_C, air_C : temperatures [°C]
    pressure_Pa : absolute pressure [Pa]
    relative_humidity : of the undisturbed air [-]

    Returns
    -------
    `Mixed`

    Raises
    ------
    OutOfRange : air outside its range

    References
    ----------
    Incropera et al., 7th ed. (2011), section 9.9.
    """
    film = air_properties(film_temperature_C(surface_C, air_C), pressure_Pa, relative_humidity, air_C)
    viscosity = film.kinematic_viscosity_m2_s
    still = still_air(shape, across_m, along_m, surface_C, air_C, pressure_Pa, relative_humidity)
    both = combined(forced_h_W_m2K, still.h_W_m2K, EXPONENT[shape])
    return Mixed(
        richardson(grashof(surface_C, air_C, across_m, viscosity), reynolds(velocity_m_s, across_m, viscosity)),
        still.h_W_m2K,
        both / forced_h_W_m2K - 1.0,
    )
