"""Mean heat transfer of a long circular cylinder across a stream, by four published correlations."""

from __future__ import annotations

from math import exp, inf

from core.convection.correlation import Correlation

_TEXTBOOK = "not much better than 20 %: Incropera et al., 7th ed. (2011), section 7.4.2"


def _piece(reynolds: float, pieces: tuple[tuple[float, float, float], ...]) -> tuple[float, float]:
    """C and m of the piece that holds at Re; the last piece beyond the table."""
    for below, C, m in pieces:
        if reynolds < below:
            return C, m
    return pieces[-1][1:]


HILPERT = (
    (4.0, 0.989, 0.330),
    (40.0, 0.911, 0.385),
    (4e3, 0.683, 0.466),
    (4e4, 0.193, 0.618),
    (4e5, 0.027, 0.805),
)
ZUKAUSKAS = ((40.0, 0.75, 0.4), (1e3, 0.51, 0.5), (2e5, 0.26, 0.6), (1e6, 0.076, 0.7))


def hilpert(reynolds: float, prandtl: float) -> float:
    """Nusselt number of a cylinder in cross flow by Hilpert, Nu = C Re^m Pr^⅓, [-].

    Parameters
    ----------
    reynolds, prandtl : Re with the diameter, and Pr, both at film temperature [-]

    Notes
    -----
    0.4 ≤ Re ≤ 4e5, Pr ≥ 0.7. C and m as tabulated in textbooks, with Knudsen and Katz's factor Pr^⅓ for other
    fluids than air. The five power laws meet within 1.5 %.

    References
    ----------
    Hilpert, Forsch. Geb. Ingenieurwes. 4 (1933) 215–224.
    Incropera et al., Fundamentals of Heat and Mass Transfer, 7th ed. (2011), equation 7.52, table 7.2.
    """
    C, m = _piece(reynolds, HILPERT)
    value: float = C * reynolds**m * prandtl ** (1.0 / 3.0)
    return value


def zukauskas(reynolds: float, prandtl: float, prandtl_ratio: float = 1.0) -> float:
    """Nusselt number of a cylinder in cross flow by Žukauskas, Nu = C Re^m Pr^n (Pr/Pr_s)^¼, [-].

    n = 0.37 for Pr ≤ 10, else 0.36.

    Parameters
    ----------
    reynolds, prandtl : Re with the diameter, and Pr, both of the undisturbed stream [-]
    prandtl_ratio : Pr of the stream over Pr at the surface [-]

    Notes
    -----
    1 ≤ Re ≤ 1e6, 0.7 ≤ Pr ≤ 500.

    References
    ----------
    Žukauskas, Adv. Heat Transfer 8 (1972) 93–160.
    Incropera et al., 7th ed. (2011), equation 7.53, table 7.4.
    """
    C, m = _piece(reynolds, ZUKAUSKAS)
    n = 0.37 if prandtl <= 10.0 else 0.36
    value: float = C * reynolds**m * prandtl**n * prandtl_ratio**0.25
    return value


def churchill_bernstein(reynolds: float, prandtl: float) -> float:
    """Nusselt number of a cylinder in cross flow by Churchill and Bernstein, [-].

    Nu = 0.3 + 0.62 Re^½ Pr^⅓ [1 + (0.4/Pr)^⅔]^−¼ [1 + (Re/282 000)^⅝]^⅘

    Parameters
    ----------
    reynolds, prandtl : Re with the diameter, and Pr, both at film temperature [-]

    Notes
    -----
    Re Pr ≥ 0.2, up to Re = 1e7. The authors call it a lower bound for most data; around Re = 2e4–4e5 it may be
    20 % low.

    References
    ----------
    Churchill and Bernstein, J. Heat Transfer 99 (1977) 300–306, equation 9.
    """
    laminar = 0.62 * reynolds**0.5 * prandtl ** (1.0 / 3.0) / (1.0 + (0.4 / prandtl) ** (2.0 / 3.0)) ** 0.25
    value: float = 0.3 + laminar * (1.0 + (reynolds / 282000.0) ** 0.625) ** 0.8
    return value


def sanitjai_goldstein(reynolds: float, prandtl: float) -> float:
    """Nusselt number of a cylinder in cross flow by Sanitjai and Goldstein, [-].

    Nu = 0.446 Re^½ Pr^0.35 + 0.528 [(6.5 e^(Re/5000))^−5 + (0.031 Re^0.8)^−5]^−⅕ Pr^0.42

    Parameters
    ----------
    reynolds, prandtl : Re with the diameter, and Pr, both at film temperature [-]

    Notes
    -----
    2e3 ≤ Re ≤ 9e4, 0.7 ≤ Pr ≤ 176: measured in air, water and a glycol mixture; the first part is the attached
    boundary layer, the second the separated region.

    References
    ----------
    Sanitjai and Goldstein, Int. J. Heat Mass Transfer 47 (2004) 4795–4805.
    """
    separated = (6.5**-5.0 * exp(-reynolds / 1000.0) + (0.031 * reynolds**0.8) ** -5.0) ** -0.2
    value: float = 0.446 * reynolds**0.5 * prandtl**0.35 + 0.528 * separated * prandtl**0.42
    return value


CORRELATIONS = (
    Correlation(
        "hilpert",
        "Hilpert, Forsch. Ing.-Wes. 4 (1933) 215",
        lambda Re, Pr, _: hilpert(Re, Pr),
        "film",
        "none",
        (0.4, 4e5),
        (0.7, inf),
        0.20,
        _TEXTBOOK,
    ),
    Correlation(
        "zukauskas",
        "Žukauskas, Adv. Heat Transfer 8 (1972) 93",
        zukauskas,
        "stream",
        "prandtl",
        (1.0, 1e6),
        (0.7, 500.0),
        0.20,
        _TEXTBOOK,
    ),
    Correlation(
        "churchill-bernstein",
        "Churchill and Bernstein, J. Heat Transfer 99 (1977) 300",
        lambda Re, Pr, _: churchill_bernstein(Re, Pr),
        "film",
        "none",
        (0.3, 1e7),
        (0.7, inf),
        0.20,
        _TEXTBOOK,
    ),
    Correlation(
        "sanitjai-goldstein",
        "Sanitjai and Goldstein, Int. J. Heat Mass Transfer 47 (2004) 4795",
        lambda Re, Pr, _: sanitjai_goldstein(Re, Pr),
        "film",
        "none",
        (2e3, 9e4),
        (0.7, 176.0),
        0.20,
        _TEXTBOOK,
    ),
)
