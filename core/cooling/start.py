"""Where the fit begins: after the fan has run up, heat has spread in the body, and the sensor has caught up.

The later part of the record is fitted first and followed back towards the start. The fit begins at the first row
from which on no stretch of early rows is off that curve, beyond their own scatter and the curve's uncertainty.
Sound runs keep every row but a few times in a thousand, so that choosing the start costs them nothing; a single
late tap is not taken for a late fan, as no row counts for more than three standard deviations."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from core.cooling.likelihood import Evidence, as_normal
from core.cooling.prior import Prior
from core.cooling.solve import Found, search

Array = NDArray[np.float64]

LATER_SHARE = 0.35  # of the rows, tried as the latest start
FEWEST_LATER = 12
CLIP = 3.0  # standard deviations
STRETCHES = (1, 2, 3, 5, 8, 13, 21)  # rows taken together
SURE = 3.1  # standard normal quantile of one in a thousand


def find_start(evidence: Evidence, later: Evidence, guess: Array, prior: Prior) -> tuple[int, Found | None]:
    """The row at which the fit begins, 0 where nothing speaks against the whole record; and the fit of the later part.

    Parameters
    ----------
    evidence : all rows
    later : the same with only its later rows counting
    guess : parameters to begin with
    prior : of the asymptote
    """
    early = int(np.argmax(later.counts))
    if early == 0:
        return 0, None
    found = search(later, guess, prior)
    covariance = found.covariance
    one = as_normal(evidence, found.tangent.at(found.point))
    rows = evidence.rows
    place = np.flatnonzero((rows < early) & evidence.counts[rows])[::-1]
    squares = _surprises(one.miss[place], one.sd[place], one.slope[place][:, list(prior.free)], covariance)[::-1]
    first = _first_sound(squares)
    if first == 0:
        return 0, found
    return early if first == len(place) else int(rows[place[::-1][first]]), found


def _surprises(miss: Array, sd: Array, slope: Array, covariance: Array) -> Array:
    """Clipped squares of how far each row lies off what is known before it, going back in time.

    A Kalman update of the parameters with each row that is not itself a surprise."""
    shift, spread = np.zeros(slope.shape[1]), covariance.copy()
    squares = np.empty(len(miss))
    for k in range(len(miss)):
        gain = spread @ slope[k]
        variance = sd[k] ** 2 + slope[k] @ gain
        off = miss[k] - slope[k] @ shift
        squares[k] = min(off * off / variance, CLIP**2)
        if squares[k] < CLIP**2:
            shift = shift + gain * (off / variance)
            spread = spread - np.outer(gain, gain) / variance
    return squares


def _first_sound(squares: Array) -> int:
    """The first row from which on no stretch of rows is off; `squares` are clipped squares in order of time."""
    first = 0
    while first < len(squares):
        heard = np.cumsum(squares[first:])
        stretches = np.array([count for count in STRETCHES if count <= len(heard)])
        off = np.any(heard[stretches - 1] > _chi_square_limit(stretches.astype(np.float64)))
        if not off and not (first > 0 and squares[first] >= CLIP**2):
            break
        first += 1
    return first


def latest_start(rows: int) -> int:
    """The latest row that is tried as a start in a record of `rows` rows; 0 where there are too few to judge."""
    latest = min(int(LATER_SHARE * rows), rows - FEWEST_LATER)
    return latest if latest >= 2 else 0


def _chi_square_limit(degrees: Array) -> Array:
    """Quantile of chi-square that is passed once in a thousand, by Wilson and Hilferty, PNAS 17 (1931) 684."""
    ninth = 2.0 / (9.0 * degrees)
    result: Array = degrees * (1.0 - ninth + SURE * np.sqrt(ninth)) ** 3
    return result
