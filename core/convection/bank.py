"""Heat transfer of tubes in a bank across a stream, in line or staggered, by two published correlations.

Both give the mean over all tubes of a bank in which every tube is heated. For one heated body in an unheated bank
the local value at its row is meant: the row sees the turbulence of the rows before it, but air at the temperature
of the undisturbed stream. The local factor follows from the published factors of the mean by difference,
c(n) = n C(n) − (n − 1) C(n − 1), taken as 1 from where it first reaches 1. Its band is wider than the mean's:
inner rows lie 30–70 % above the first (Žukauskas 1972, from memory), and half of that range, 13 %, joins in
quadrature."""

from __future__ import annotations

from dataclasses import dataclass
from math import exp, hypot, inf, log

from core.convection.correlation import Correlation
from core.convection.cylinder import zukauskas
from core.errors import OutOfRange

MEAN_BAND_REL = 0.15
ROW_SPREAD_REL = 0.13
_MEAN_BAND = (
    "mean of a bank ±15 %: Žukauskas, Handbook of Single-Phase Convective Heat Transfer (1987), from memory"
)
_ROW_BAND = f"{_MEAN_BAND}; local row: in quadrature ±13 % (inner rows 1.3 to 1.7 of the first, Žukauskas 1972)"


@dataclass(frozen=True, slots=True)
class Bank:
    """A bank: pitches in diameters, `rows` in the stream's direction, `row` that of the one heated body.

    `row` None means the mean over the bank; `rows` None a bank of 20 rows or more."""

    staggered: bool
    transverse: float
    longitudinal: float
    rows: int | None = None
    row: int | None = None


# Mean of the first n rows over the mean of 20 or more: Incropera et al., 7th ed. (2011), table 7.6; Re > 1000.
ZUKAUSKAS_ROWS = (1, 2, 3, 4, 5, 7, 10, 13, 16, 20)
ZUKAUSKAS_MEAN = {
    False: (0.70, 0.80, 0.86, 0.90, 0.92, 0.95, 0.97, 0.98, 0.99, 1.0),
    True: (0.64, 0.76, 0.84, 0.89, 0.92, 0.95, 0.97, 0.98, 0.99, 1.0),
}
# Mean of the first n rows over the mean of 10 or more: Incropera et al., 6th ed. (2007), table 7.6 (Kays and Lo).
GRIMISON_ROWS = (1, 2, 3, 4, 5, 6, 7, 8, 9, 10)
GRIMISON_MEAN = {
    False: (0.64, 0.80, 0.87, 0.90, 0.92, 0.94, 0.96, 0.98, 0.99, 1.0),
    True: (0.68, 0.75, 0.83, 0.89, 0.92, 0.95, 0.97, 0.98, 0.99, 1.0),
}

# Grimison's C₁ and m by transverse (columns) and longitudinal pitch (rows), both in diameters; None: not given.
GRIMISON_TRANSVERSE = (1.25, 1.5, 2.0, 3.0)
GRIMISON_IN_LINE = {
    1.25: ((0.348, 0.592), (0.275, 0.608), (0.100, 0.704), (0.0633, 0.752)),
    1.50: ((0.367, 0.586), (0.250, 0.620), (0.101, 0.702), (0.0678, 0.744)),
    2.00: ((0.418, 0.570), (0.299, 0.602), (0.229, 0.632), (0.198, 0.648)),
    3.00: ((0.290, 0.601), (0.357, 0.584), (0.374, 0.581), (0.286, 0.608)),
}
GRIMISON_STAGGERED = {
    0.600: (None, None, None, (0.213, 0.636)),
    0.900: (None, None, (0.446, 0.571), (0.401, 0.581)),
    1.000: (None, (0.497, 0.558), None, None),
    1.125: (None, None, (0.478, 0.565), (0.518, 0.560)),
    1.250: ((0.518, 0.556), (0.505, 0.554), (0.519, 0.556), (0.522, 0.562)),
    1.500: ((0.451, 0.568), (0.460, 0.562), (0.452, 0.568), (0.488, 0.568)),
    2.000: ((0.404, 0.572), (0.416, 0.568), (0.482, 0.556), (0.449, 0.570)),
    3.000: ((0.310, 0.592), (0.356, 0.580), (0.440, 0.562), (0.428, 0.574)),
}


def zukauskas_bank(reynolds: float, prandtl: float, prandtl_ratio: float, bank: Bank) -> float:
    """Nusselt number of a deep bank (20 rows or more) by Žukauskas, Nu = C Re^m Pr^0.36 (Pr/Pr_s)^¼, [-].

    Parameters
    ----------
    reynolds, prandtl : Re with diameter and velocity in the narrowest section, and Pr, at the mean temperature of
        the stream, which one heated body leaves that of the undisturbed air [-]
    prandtl_ratio : Pr of the stream over Pr at the surface [-]
    bank : arrangement and pitches

    Notes
    -----
    1e3 ≤ Re ≤ 2e6, 0.7 ≤ Pr ≤ 500. The table goes on down to Re = 10, but between 100 and 1000 it takes the
    single cylinder for want of better and steps by a third at 1000, so that is counted as outside here. In line
    only for S_T/S_L > 0.7: closer, the rows hide in each other's wakes.

    References
    ----------
    Žukauskas, Adv. Heat Transfer 8 (1972) 93–160. Incropera et al., 7th ed. (2011), equation 7.58, table 7.5.
    """
    if 100.0 <= reynolds < 1000.0:
        return zukauskas(reynolds, prandtl, prandtl_ratio)
    shape = bank.transverse / bank.longitudinal
    if reynolds < 100.0:
        C, m = (0.90, 0.40) if bank.staggered else (0.80, 0.40)
    elif reynolds < 2e5:
        wide = (0.35 * shape**0.2, 0.60) if shape < 2.0 else (0.40, 0.60)
        C, m = wide if bank.staggered else (0.27, 0.63)
    else:
        C, m = (0.022, 0.84) if bank.staggered else (0.021, 0.84)
    value: float = C * reynolds**m * prandtl**0.36 * prandtl_ratio**0.25
    return value


def _along(points: tuple[tuple[float, float, float], ...], x: float) -> tuple[float, float, bool]:
    """Straight line through (x, y, z) points, held at the ends; y, z, and whether x lies within."""
    first, last = points[0], points[-1]
    if x <= first[0] or x >= last[0]:
        end = first if x <= first[0] else last
        return end[1], end[2], x == end[0]
    i = next(i for i, point in enumerate(points) if point[0] > x)
    (x0, y0, z0), (x1, y1, z1) = points[i - 1], points[i]
    t = (x - x0) / (x1 - x0)
    return y0 + t * (y1 - y0), z0 + t * (z1 - z0), True


def grimison_constants(bank: Bank) -> tuple[float, float, bool]:
    """Grimison's C₁ and m at a bank's pitches, and whether these lie within his table, [-].

    Between the table's pitches ln C₁ and m run straight, first along the stream, then across; outside it they are
    held at its edge.

    Parameters
    ----------
    bank : arrangement and pitches, in diameters
    """
    table = GRIMISON_STAGGERED if bank.staggered else GRIMISON_IN_LINE
    columns = []
    within = {}
    for j, transverse in enumerate(GRIMISON_TRANSVERSE):
        points = tuple((b, log(cell[0]), cell[1]) for b, row in table.items() if (cell := row[j]) is not None)
        ln_C, m, inside = _along(points, bank.longitudinal)
        columns.append((transverse, ln_C, m))
        within[transverse] = inside
    ln_C, m, inside = _along(tuple(columns), bank.transverse)
    below = [t for t in GRIMISON_TRANSVERSE if t <= bank.transverse][-1:]
    above = [t for t in GRIMISON_TRANSVERSE if t >= bank.transverse][:1]
    return exp(ln_C), m, inside and all(within[t] for t in below + above)


def grimison_bank(reynolds: float, prandtl: float, bank: Bank) -> float:
    """Nusselt number of a bank of 10 rows or more by Grimison, Nu = 1.13 C₁ Re^m Pr^⅓, [-].

    Parameters
    ----------
    reynolds, prandtl : Re with diameter and velocity in the narrowest section, and Pr, at film temperature [-]
    bank : arrangement and pitches

    Notes
    -----
    2e3 ≤ Re ≤ 4e4, Pr ≥ 0.7, pitches of 1.25 to 3 diameters (staggered from 0.6 along the stream).

    References
    ----------
    Grimison, Trans. ASME 59 (1937) 583–594. Incropera et al., 6th ed. (2007), equations 7.60–7.62, table 7.5.
    """
    C, m, _ = grimison_constants(bank)
    value: float = 1.13 * C * reynolds**m * prandtl ** (1.0 / 3.0)
    return value


def mean_factor(rows: int, counts: tuple[int, ...], means: tuple[float, ...]) -> float:
    """Mean of the first n rows over that of a deep bank, straight between the table's counts, [-].

    Parameters
    ----------
    rows : number of rows [-]
    counts, means : the table
    """
    points = tuple((float(n), mean, 0.0) for n, mean in zip(counts, means, strict=True))
    return _along(points, float(rows))[0]


def row_factor(row: int, counts: tuple[int, ...], means: tuple[float, ...]) -> float:
    """Local factor of one row, c(n) = n C(n) − (n − 1) C(n − 1), 1 from where it first reaches 1, [-].

    Parameters
    ----------
    row : row, 1 = first in the stream [-]
    counts, means : the table of mean factors C(n)
    """
    factor = mean_factor(1, counts, means)
    for n in range(2, row + 1):
        factor = n * mean_factor(n, counts, means) - (n - 1) * mean_factor(n - 1, counts, means)
        if factor >= 1.0:
            return 1.0
    return factor


def _factor(bank: Bank, counts: tuple[int, ...], means: tuple[float, ...]) -> float:
    if bank.row is not None:
        return row_factor(bank.row, counts, means)
    return 1.0 if bank.rows is None else mean_factor(bank.rows, counts, means)


def correlations(bank: Bank) -> tuple[Correlation, ...]:
    """The two correlations at one bank's pitches, for its mean or for the row of its one heated body.

    Parameters
    ----------
    bank : arrangement, pitches in diameters, rows, and the row of the heated body

    Raises
    ------
    OutOfRange : tubes would touch or overlap
    """
    diagonal = hypot(bank.longitudinal, 0.5 * bank.transverse)
    if bank.transverse <= 1.0 or (diagonal if bank.staggered else bank.longitudinal) <= 1.0:
        raise OutOfRange("The tubes of the bank would touch: give pitches larger than the diameter.")
    deep = _factor(bank, ZUKAUSKAS_ROWS, ZUKAUSKAS_MEAN[bank.staggered])
    kays = _factor(bank, GRIMISON_ROWS, GRIMISON_MEAN[bank.staggered])
    one_row = bank.row is not None
    band = hypot(MEAN_BAND_REL, ROW_SPREAD_REL) if one_row else MEAN_BAND_REL
    band_source = _ROW_BAND if one_row else _MEAN_BAND
    what = f"row {bank.row}" if one_row else "mean of the bank"
    return (
        Correlation(
            "zukauskas-bank",
            f"Žukauskas, Adv. Heat Transfer 8 (1972) 93; {what}",
            lambda Re, Pr, ratio: (deep if Re >= 1000.0 else 1.0) * zukauskas_bank(Re, Pr, ratio, bank),
            "stream",
            "prandtl",
            (1e3, 2e6),
            (0.7, 500.0),
            band,
            band_source,
            bank.staggered or bank.transverse / bank.longitudinal > 0.7,
        ),
        Correlation(
            "grimison-bank",
            f"Grimison, Trans. ASME 59 (1937) 583; {what}",
            lambda Re, Pr, _: kays * grimison_bank(Re, Pr, bank),
            "film",
            "none",
            (2e3, 4e4),
            (0.7, inf),
            band,
            band_source,
            grimison_constants(bank)[2],
        ),
    )
