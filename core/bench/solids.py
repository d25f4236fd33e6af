"""Solids for the heated body: density, heat capacity, conductivity, emissivity, each with its source."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from difflib import get_close_matches
from types import MappingProxyType

from core.errors import BadSetup


@dataclass(frozen=True, slots=True)
class Solid:
    """One material.

    c(T) is straight: c = c₂₀ + slope · (T − 20 °C), within a further 0.5 % of its source from 0 to 120 °C.
    `*_u_rel` are relative standard uncertainties for a piece of unknown maker and batch, judged from the spread of
    handbooks (common practice). Emissivities are total ones at 20–100 °C by finish (Incropera et al., table A.11,
    and handbook values from memory) and typical only: measure or bound the one that matters."""

    name: str
    density_kg_m3: float
    density_u_rel: float
    heat_capacity_J_kgK: float  # at 20 °C
    heat_capacity_slope_J_kgK2: float
    heat_capacity_u_rel: float
    conductivity_W_mK: float
    conductivity_u_rel: float
    emissivity: Mapping[str, float]
    source: str

    def heat_capacity_at(self, temperature_C: float) -> float:
        """Specific heat capacity at a temperature, [J/(kg·K)].

        Parameters
        ----------
        temperature_C : temperature, 0 to 120 [°C]
        """
        return self.heat_capacity_J_kgK + self.heat_capacity_slope_J_kgK2 * (temperature_C - 20.0)


_PAINTED = ("painted black", 0.95)
_BRASS = MappingProxyType(dict([("polished", 0.04), ("machined", 0.08), ("oxidised", 0.6), _PAINTED]))
_COPPER = MappingProxyType(dict([("polished", 0.03), ("machined", 0.07), ("oxidised", 0.6), _PAINTED]))
_ALUMINIUM = MappingProxyType(dict([("polished", 0.05), ("machined", 0.09), ("anodised", 0.82), _PAINTED]))
_STEEL = MappingProxyType(dict([("polished", 0.08), ("machined", 0.25), ("oxidised", 0.8), _PAINTED]))
_STAINLESS = MappingProxyType(dict([("polished", 0.17), ("machined", 0.22), ("oxidised", 0.67), _PAINTED]))

_INCROPERA = "Incropera et al., Fundamentals of Heat and Mass Transfer, 7th ed. (2011), table A.1, 300 and 400 K"
_CRC = "CRC Handbook of Chemistry and Physics, properties of the elements, 25 °C"
_ASM = "ASM Handbook, vol. 2 (1990), from memory"
_CDA = "Copper Development Association data sheet, from memory"

_KNOWN = (
    Solid(
        "brass", 8470.0, 0.006, 378.0, 0.15, 0.02, 116.0, 0.06, _BRASS, f"CuZn37–CuZn39Pb3: {_CDA}; {_INCROPERA}"
    ),
    Solid("brass CuZn30", 8530.0, 0.003, 379.0, 0.15, 0.02, 110.0, 0.08, _BRASS, f"cartridge brass: {_INCROPERA}"),
    Solid("brass CuZn39Pb3", 8470.0, 0.003, 377.0, 0.15, 0.02, 119.0, 0.04, _BRASS, f"free-cutting: {_CDA}"),
    Solid("bronze CuSn8", 8800.0, 0.004, 377.0, 0.10, 0.02, 64.0, 0.06, _BRASS, _CDA),
    Solid("copper", 8933.0, 0.002, 384.2, 0.12, 0.005, 398.0, 0.02, _COPPER, f"Cu-ETP: {_INCROPERA}; {_CRC}"),
    Solid(
        "aluminium", 2702.0, 0.002, 898.0, 0.46, 0.008, 235.0, 0.03, _ALUMINIUM, f"99.5 %: {_INCROPERA}; {_CRC}"
    ),
    Solid(
        "aluminium 2024",
        2770.0,
        0.003,
        871.6,
        0.50,
        0.015,
        150.0,
        0.12,
        _ALUMINIUM,
        f"T3–T6: {_INCROPERA}; {_ASM}",
    ),
    Solid("aluminium 6061", 2700.0, 0.003, 893.0, 0.48, 0.015, 167.0, 0.04, _ALUMINIUM, f"T6: {_ASM}"),
    Solid("aluminium 6082", 2700.0, 0.003, 893.0, 0.48, 0.015, 172.0, 0.05, _ALUMINIUM, "T6: makers' data sheets"),
    Solid(
        "carbon steel", 7850.0, 0.002, 441.0, 0.57, 0.02, 53.0, 0.12, _STEEL, "EN 1993-1-2:2005, 3.2.2, 3.4.1.2–3"
    ),
    Solid(
        "stainless steel 304", 7900.0, 0.003, 474.4, 0.38, 0.025, 14.8, 0.04, _STAINLESS, f"1.4301: {_INCROPERA}"
    ),
    Solid(
        "stainless steel 316",
        7990.0,
        0.003,
        470.0,
        0.36,
        0.03,
        14.0,
        0.06,
        _STAINLESS,
        f"1.4401: c {_INCROPERA}; density {_ASM}",
    ),
    Solid("titanium", 4500.0, 0.002, 520.0, 0.29, 0.01, 21.9, 0.04, _STAINLESS, f"pure: {_INCROPERA}"),
    Solid("zinc", 7140.0, 0.002, 387.5, 0.13, 0.01, 116.0, 0.02, _COPPER, f"{_INCROPERA}; {_CRC}"),
    Solid("lead", 11340.0, 0.001, 128.8, 0.03, 0.01, 35.3, 0.02, _STEEL, _INCROPERA),
)

SOLIDS: Mapping[str, Solid] = MappingProxyType({one.name: one for one in _KNOWN})


def solid(name: str) -> Solid:
    """The solid of that name, whatever its capitals.

    Parameters
    ----------
    name : name in the table `SOLIDS`

    Raises
    ------
    BadSetup : no such name; the sentence gives the nearest ones known
    """
    by_folded = {known.casefold(): one for known, one in SOLIDS.items()}
    folded = " ".join(name.split()).casefold()
    if folded in by_folded:
        return by_folded[folded]
    near = get_close_matches(folded, by_folded, n=1, cutoff=0.5)
    hint = f"did you mean {by_folded[near[0]].name!r}?" if near else f"known are {', '.join(SOLIDS)}."
    raise BadSetup(f"No material is called {name!r}; {hint} Or give its three properties instead.")
