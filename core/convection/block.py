"""Mean heat transfer of a long square bar across a stream, one face to the front."""

from __future__ import annotations

from dataclasses import replace
from math import inf

from core.convection.correlation import Correlation

SQUARE_WITHIN = 0.05


def igarashi(reynolds: float, prandtl: float) -> float:
    """Nusselt number of a square bar, one face to the stream, Nu = 0.158 Re^0.66 Pr^⅓, [-].

    Igarashi's Nu = 0.14 Re^0.66 for air, with Pr^⅓ for other fluids. It replaces the older 0.102 Re^0.675 Pr^⅓
    (Jakob 1949, after Hilpert), which reads a quarter low: its length had been taken amiss (Sparrow et al.).

    Parameters
    ----------
    reynolds, prandtl : Re with the side across the stream, and Pr, both at film temperature [-]

    Notes
    -----
    5e3 ≤ Re ≤ 6e4, Pr ≥ 0.7, mean over the four long faces of a square section, not turned.

    References
    ----------
    Igarashi, Int. J. Heat Mass Transfer 28 (1985) 175–181.
    Sparrow, Abraham and Tong, Int. J. Heat Mass Transfer 47 (2004) 5285–5296.
    Incropera et al., 7th ed. (2011), table 7.3.
    """
    value: float = 0.158 * reynolds**0.66 * prandtl ** (1.0 / 3.0)
    return value


_SQUARE = Correlation(
    "igarashi",
    "Igarashi, Int. J. Heat Mass Transfer 28 (1985) 175",
    lambda Re, Pr, _: igarashi(Re, Pr),
    "film",
    "none",
    (5e3, 6e4),
    (0.7, inf),
    0.20,
    "not much better than 20 %: Incropera et al., 7th ed. (2011), section 7.4.2",
)


def correlations(across_m: float, along_m: float) -> tuple[Correlation, ...]:
    """The correlation for a bar; out of range where the section is not square within 5 %.

    Parameters
    ----------
    across_m : side across the stream [m]
    along_m : side along the stream [m]
    """
    square = abs(along_m / across_m - 1.0) <= SQUARE_WITHIN
    return (replace(_SQUARE, geometry_fits=square),)
