"""Where the fit begins: after the fan has run up, heat has spread in the body, and the sensor has caught up.

The later part of the record is fitted first and followed back towards the start. The fit begins at the first row
from which on the early rows agree with that curve, within their own scatter and the curve's uncertainty. Sound
runs keep every row but one time in a thousand, so that choosing the start costs them nothing; a single late tap
is not taken for a late fan, as no row counts for more than three standard deviations."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from core.cooling.asymptote import Prior
from core.cooling.likelihood import Evidence, as_normal
from core.cooling.solve import search

Array = NDArray[np.float64]

LATER_SHARE = 0.35  # of the rows, tried as the latest start
FEWEST_LATER = 12
CLIP = 3.0  # standard deviations
SURE = 3.1  # standard normal quantile of one in a thousand


def find_start(evidence: Evidence, later: Evidence, guess: Array, prior: Prior) -> int:
    """The row at which the fit begins; 0 where nothing speaks against the whole record.

    Parameters
    ----------
    evidence : all rows
    later : the same with only its later rows counting
    guess : parameters to begin with
    prior : of the asymptote
    """
    early = int(np.argmax(later.counts))
    if early == 0:
        return 0
    point, covariance, _ = search(later, guess, prior)
    one = as_normal(evidence, evidence.features(point))
    rows = evidence.rows
    place = np.flatnonzero((rows < early) & evidence.counts[rows])[::-1]
    slope = one.slope[place][:, prior.free]
    spread = np.diag(one.sd[place] ** 2) + slope @ covariance @ slope.T
    spread += np.diag(1e-9 * np.diag(spread))
    whitened = np.linalg.solve(np.linalg.cholesky(spread), one.miss[place])
    heard = np.cumsum(np.minimum(whitened**2, CLIP**2))
    count = np.arange(1.0, len(place) + 1.0)
    agrees = heard <= _chi_square_limit(count)
    if agrees[-1]:
        return 0
    last = int(np.flatnonzero(agrees)[-1]) if np.any(agrees) else -1
    return early if last < 0 else int(rows[place[last]])


def latest_start(rows: int) -> int:
    """The latest row that is tried as a start in a record of `rows` rows; 0 where there are too few to judge."""
    latest = min(int(LATER_SHARE * rows), rows - FEWEST_LATER)
    return latest if latest >= 2 else 0


def _chi_square_limit(degrees: Array) -> Array:
    """Quantile of chi-square that is passed once in a thousand, by Wilson and Hilferty, PNAS 17 (1931) 684."""
    ninth = 2.0 / (9.0 * degrees)
    result: Array = degrees * (1.0 - ninth + SURE * np.sqrt(ninth)) ** 3
    return result
