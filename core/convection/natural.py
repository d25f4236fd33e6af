"""Heat transfer in still air, and how it joins a forced flow."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from math import inf

from core.bench.air import air_properties
from core.convection.correlation import Expectation
from core.convection.numbers import film_temperature_C, grashof, rayleigh


def churchill_chu(rayleigh_number: float, prandtl: float) -> float:
    """Nusselt number of a long horizontal cylinder in still air by Churchill and Chu, [-].

    Nu = {0.60 + 0.387 Ra^⅙ [1 + (0.559/Pr)^(9/16)]^(−8/27)}²

    Parameters
    ----------
    rayleigh_number, prandtl : Ra with the diameter, and Pr, both at film temperature [-]

    Notes
    -----
    1e-5 ≤ Ra ≤ 1e12, any Pr.

    References
    ----------
    Churchill and Chu, Int. J. Heat Mass Transfer 18 (1975) 1049–1053. Incropera et al., 7th ed., equation 9.34.
    """
    by_prandtl = (1.0 + (0.559 / prandtl) ** (9.0 / 16.0)) ** (-8.0 / 27.0)
    root: float = 0.60 + 0.387 * rayleigh_number ** (1.0 / 6.0) * by_prandtl
    return root * root


def churchill_sphere(rayleigh_number: float, prandtl: float) -> float:
    """Nusselt number of a sphere in still air by Churchill, [-].

    Nu = 2 + 0.589 Ra^¼ / F^(4/9) · [1 + 7.44e-8 Ra / F^(16/9)]^(1/12), F = 1 + (0.469/Pr)^(9/16)

    Parameters
    ----------
    rayleigh_number, prandtl : Ra with the diameter, and Pr, both at film temperature [-]

    Notes
    -----
    Ra ≤ 1e11, Pr ≥ 0.7. Textbooks leave out the last factor, turbulence above Ra = 1e6.

    References
    ----------
    Churchill, in Heat Exchanger Design Handbook (1983), section 2.5.7. Incropera et al., 7th ed., equation 9.35.
    """
    F = 1.0 + (0.469 / prandtl) ** (9.0 / 16.0)
    turbulence = (1.0 + 7.44e-8 * rayleigh_number / F ** (16.0 / 9.0)) ** (1.0 / 12.0)
    value: float = 2.0 + 0.589 * rayleigh_number**0.25 / F ** (4.0 / 9.0) * turbulence
    return value


def lienhard(rayleigh_number: float) -> float:
    """Nusselt number of any submerged body in still air by Lienhard, Nu = 0.52 Ra^¼, [-].

    Both with the way that the boundary layer takes along the body, for a bar half the perimeter of its section.

    Parameters
    ----------
    rayleigh_number : Ra with that length, at film temperature [-]

    Notes
    -----
    1e4 ≤ Ra ≤ 1e9, Pr not far below 1; within 10 % (from memory).

    References
    ----------
    Lienhard, Int. J. Heat Mass Transfer 16 (1973) 2121–2123; A Heat Transfer Textbook, section 8.4.
    """
    value: float = 0.52 * rayleigh_number**0.25
    return value


@dataclass(frozen=True, slots=True)
class StillAirLaw:
    """One published law Nu(Ra, Pr) with what its author says of it."""

    name: str
    source: str
    nusselt: Callable[[float, float], float]
    rayleigh_range: tuple[float, float]
    prandtl_range: tuple[float, float]
    band_rel: float
    band_source: str


LAWS = {
    "cylinder": StillAirLaw(
        "churchill-chu",
        "Churchill and Chu, Int. J. Heat Mass Transfer 18 (1975) 1049",
        churchill_chu,
        (1e-5, 1e12),
        (0.0, inf),
        0.15,
        "common practice",
    ),
    "sphere": StillAirLaw(
        "churchill",
        "Churchill, Heat Exchanger Design Handbook (1983), 2.5.7",
        churchill_sphere,
        (0.0, 1e11),
        (0.7, inf),
        0.15,
        "common practice",
    ),
    "block": StillAirLaw(
        "lienhard",
        "Lienhard, Int. J. Heat Mass Transfer 16 (1973) 2121",
        lambda Ra, _: lienhard(Ra),
        (1e4, 1e9),
        (0.7, inf),
        0.10,
        "±10 %: Lienhard 1973, from memory",
    ),
}


def still_air(
    shape: str,
    across_m: float,
    along_m: float,
    surface_C: float,
    air_C: float,
    pressure_Pa: float,
    relative_humidity: float = 0.0,
) -> Expectation:
    """What the published law for still air expects of a body, its axis level.

    Parameters
    ----------
    shape : "cylinder", "sphere" or "block"
    across_m : diameter, or one side of the section [m]
    along_m : the other side of the section, of a block only [m]
    surface_C, air_C : temperatures of surface and room air [°C]
    pressure_Pa : absolute pressure [Pa]
    relative_humidity : of the room air [-]

    Returns
    -------
    `Expectation`; its Nu has the length of the law, half the perimeter for a block
    """
    law = LAWS[shape]
    length = across_m + along_m if shape == "block" else across_m
    film = air_properties(film_temperature_C(surface_C, air_C), pressure_Pa, relative_humidity, air_C)
    Ra = rayleigh(grashof(surface_C, air_C, length, film.kinematic_viscosity_m2_s), film.prandtl)
    Nu = law.nusselt(Ra, film.prandtl)
    holds = law.rayleigh_range[0] <= Ra <= law.rayleigh_range[1] and round(film.prandtl, 1) >= law.prandtl_range[0]
    return Expectation(law.name, law.source, Nu, Nu * film.conductivity_W_mK / length, law.band_rel, holds)


def combined(forced: float, natural: float, exponent: float = 4.0) -> float:
    """Nusselt number, or h, of forced and natural convection together, (F^n + N^n)^(1/n), [same unit].

    Parameters
    ----------
    forced, natural : Nusselt numbers with one length, or coefficients h [any]
    exponent : n; 4 for cylinders and spheres across a level stream, 3 in general [-]

    Notes
    -----
    For a level stream and buoyancy across it. Richardson numbers from 0.1 to 10 are where neither rules.

    References
    ----------
    Incropera et al., 7th ed. (2011), section 9.9, equation 9.64.
    """
    value: float = (forced**exponent + natural**exponent) ** (1.0 / exponent)
    return value
