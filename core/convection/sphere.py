"""Mean heat transfer of a sphere in a stream."""

from __future__ import annotations

from core.convection.correlation import Correlation


def whitaker(reynolds: float, prandtl: float, viscosity_ratio: float = 1.0) -> float:
    """Nusselt number of a sphere by Whitaker, Nu = 2 + (0.4 Re^½ + 0.06 Re^⅔) Pr^0.4 (μ/μ_s)^¼, [-].

    Parameters
    ----------
    reynolds, prandtl : Re with the diameter, and Pr, both of the undisturbed stream [-]
    viscosity_ratio : viscosity of the stream over that at the surface [-]

    Notes
    -----
    3.5 ≤ Re ≤ 7.6e4, 0.71 ≤ Pr ≤ 380; the source's data have 1.0 ≤ μ/μ_s ≤ 3.2, and textbooks use it for hot
    bodies in air, where the ratio is 0.8 to 1, as well. Stated accuracy ±30 %.

    References
    ----------
    Whitaker, AIChE J. 18 (1972) 361–371. Incropera et al., 7th ed. (2011), equation 7.56.
    """
    value: float = (
        2.0 + (0.4 * reynolds**0.5 + 0.06 * reynolds ** (2.0 / 3.0)) * prandtl**0.4 * viscosity_ratio**0.25
    )
    return value


CORRELATIONS = (
    Correlation(
        "whitaker",
        "Whitaker, AIChE J. 18 (1972) 361",
        whitaker,
        "stream",
        "viscosity",
        (3.5, 7.6e4),
        (0.7, 380.0),
        0.30,
        "±30 %: Whitaker 1972",
    ),
)
