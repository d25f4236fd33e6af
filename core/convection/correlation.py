"""What a published correlation is, and what it expects on a bench."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Literal

from core.bench.air import Air
from core.convection.numbers import reynolds

PropertiesAt = Literal["film", "stream"]
WallRatio = Literal["none", "prandtl", "viscosity"]
NusseltOf = Callable[[float, float, float], float]


@dataclass(frozen=True, slots=True)
class Correlation:
    """One published law Nu(Re, Pr, wall ratio) with what its author says of it.

    `at` is the temperature at which Re, Pr and λ are taken: the film's or the undisturbed stream's. `wall` is the
    third argument: Pr/Pr_s, μ/μ_s with the subscript at the surface, or 1. `band_rel` is the stated accuracy,
    `band_source` who states it. `geometry_fits` is False where the body's proportions leave the source's range."""

    name: str
    source: str
    nusselt: NusseltOf
    at: PropertiesAt
    wall: WallRatio
    reynolds_range: tuple[float, float]
    prandtl_range: tuple[float, float]
    band_rel: float
    band_source: str
    geometry_fits: bool = True

    def holds(self, reynolds_number: float, prandtl: float) -> bool:
        """Whether Re, Pr and the proportions lie in the source's range; Pr is rounded as sources print it, so
        that hot air of 0.698 counts as their 0.7."""
        return (
            self.geometry_fits
            and self.reynolds_range[0] <= reynolds_number <= self.reynolds_range[1]
            and self.prandtl_range[0] <= round(prandtl, 1)
            and prandtl <= self.prandtl_range[1]
        )


@dataclass(frozen=True, slots=True)
class Expectation:
    """What one correlation expects here. Outside its range the formula is still evaluated, where it is defined,
    and `in_range` is False: a hint, no longer a published value."""

    correlation: str
    source: str
    nusselt: float
    h_W_m2K: float
    band_rel: float
    in_range: bool


def expectation(
    law: Correlation, velocity_m_s: float, length_m: float, film: Air, stream: Air, surface: Air
) -> Expectation:
    """What a correlation expects of a body of one length in one stream.

    Parameters
    ----------
    law : the correlation
    velocity_m_s : velocity that the source means, in a bank that of the narrowest section [m/s]
    length_m : characteristic length of the source [m]
    film, stream, surface : air at film, undisturbed and surface temperature

    Returns
    -------
    `Expectation`; h [W/(m²·K)]
    """
    air = film if law.at == "film" else stream
    ratio = {
        "none": 1.0,
        "prandtl": air.prandtl / surface.prandtl,
        "viscosity": air.viscosity_Pa_s / surface.viscosity_Pa_s,
    }[law.wall]
    Re = reynolds(velocity_m_s, length_m, air.kinematic_viscosity_m2_s)
    Nu = law.nusselt(Re, air.prandtl, ratio)
    return Expectation(
        law.name,
        law.source,
        Nu,
        Nu * air.conductivity_W_mK / length_m,
        law.band_rel,
        law.holds(Re, air.prandtl),
    )
