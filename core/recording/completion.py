"""Whole numbers from last digits: on a beat a person types the digits that change, the rest follows from the
readings before. What does not follow is asked, never guessed."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from decimal import Decimal

from core.recording.run_state import Row

SHORTEST_TAU_S = 20.0
"""No body at the bench cools with a shorter time constant: 6 mm of aluminium at 100 W/(m²·K) has 36 s."""

FIRST_FALL_K = 25.0
"""Before a first fall is known, every fall up to this one is thought possible."""

SHORTEST_BEAT_S = 0.5
LOWEST_C, HIGHEST_C = -50.0, 200.0
TOLERANCE_K = 1e-9
MOST_CANDIDATES = 4


@dataclass(frozen=True, slots=True)
class Completion:
    """Numbers that the digits can mean [°C], likeliest first. It is `certain` if it can only be the first."""

    candidates_C: tuple[float, ...]
    certain: bool


def complete(
    digits: str, rows: Sequence[Row], stamp_s: float, resolution_K: float, refresh_s: float = 0.0
) -> Completion:
    """The number that a display showed at the stamp, from its last digits and the readings before.

    A body that cools falls no faster than it did just before, and no slower than with a time constant of
    `SHORTEST_TAU_S`. Each reading is off by up to half a step of the display, and as old as one refresh at most.
    A number is certain if it alone lies between these bounds. With only one reading before there is no such bound,
    and every number down to `FIRST_FALL_K` below it is asked.

    Parameters
    ----------
    digits : the last digits of the display, most significant first; digits only
    rows : the readings before the stamp, in order of time; at least one
    stamp_s : the moment of the beat [s]
    resolution_K : step of the display [K]
    refresh_s : time from one renewal of the display to the next [s]

    Notes
    -----
    Where the flow is switched on between two beats the body falls faster than before; the number then mostly lies
    outside the bounds and is asked.
    """
    before_C = rows[-1].reading_C
    least_K, likely_K, most_K = _fall_K(rows, stamp_s, resolution_K, refresh_s)
    likely_C = before_C - likely_K
    inside = _numbers(digits, before_C - most_K, before_C - least_K, resolution_K)
    if len(inside) == 1:
        return Completion(inside, certain=True)
    if not inside:
        turn_K = 10.0 ** len(digits) * _unit(resolution_K)
        wide = _numbers(digits, before_C - most_K - turn_K, before_C - least_K + turn_K, resolution_K)
        wide = wide or _numbers(digits, before_C - turn_K, before_C + turn_K, resolution_K)
        return Completion(_nearest(wide, likely_C)[:2], certain=False)
    return Completion(_nearest(inside, likely_C)[:MOST_CANDIDATES], certain=False)


def nearest(digits: str, near_C: float, resolution_K: float) -> float | None:
    """The number with these last digits that lies nearest to `near_C` [°C]; None if the display has none such."""
    turn_K = 10.0 ** len(digits) * _unit(resolution_K)
    found = _nearest(_numbers(digits, near_C - turn_K, near_C + turn_K, resolution_K), near_C)
    return found[0] if found else None


def _fall_K(
    rows: Sequence[Row], stamp_s: float, resolution_K: float, refresh_s: float
) -> tuple[float, float, float]:
    """Least, likely and largest fall since the last reading, as the display shows it [K]."""
    if len(rows) == 1:
        return -2.0 * resolution_K, 0.0, FIRST_FALL_K
    past_s, now_s = rows[-1].stamp_s - rows[-2].stamp_s, stamp_s - rows[-1].stamp_s
    fall_K = rows[-2].reading_C - rows[-1].reading_C
    likely_K = max(fall_K, 0.0) * now_s / past_s
    if past_s < max(SHORTEST_BEAT_S, 2.0 * refresh_s):
        return -2.0 * resolution_K, likely_K, max(FIRST_FALL_K, 2.0 * likely_K)
    decay = -math.expm1(-now_s / SHORTEST_TAU_S) / math.expm1(past_s / SHORTEST_TAU_S) * past_s / now_s
    slowest = decay * max(fall_K - resolution_K, 0.0) / (past_s + refresh_s) * max(now_s - refresh_s, 0.0)
    fastest = max(fall_K + resolution_K, resolution_K) / (past_s - refresh_s) * (now_s + refresh_s)
    return slowest - 2.0 * resolution_K, likely_K, fastest + resolution_K


def _numbers(digits: str, low_C: float, high_C: float, resolution_K: float) -> tuple[float, ...]:
    """All numbers of the display between two bounds that end with these digits, highest first."""
    unit = Decimal(repr(_unit(resolution_K)))
    step = int(Decimal(repr(float(resolution_K))) / unit)
    turn, wanted = 10 ** len(digits), int(digits)
    if high_C < LOWEST_C or low_C > HIGHEST_C:
        return ()
    low = Decimal(repr(max(low_C, LOWEST_C) - TOLERANCE_K)) / unit
    high = Decimal(repr(min(high_C, HIGHEST_C) + TOLERANCE_K)) / unit
    sizes = range(wanted, int(max(abs(low), abs(high))) + 1, turn)
    ending_so = {sign * size for size in sizes for sign in (1, -1)}
    shown = [number for number in ending_so if low <= number <= high and number % step == 0]
    return tuple(float(number * unit) for number in sorted(shown, reverse=True))


def _unit(resolution_K: float) -> float:
    """The place of the display's last digit [K]."""
    exponent = int(Decimal(repr(float(resolution_K))).normalize().as_tuple().exponent)
    return float(Decimal(1).scaleb(min(exponent, 0)))


def _nearest(numbers: Sequence[float], to_C: float) -> tuple[float, ...]:
    return tuple(sorted(numbers, key=lambda one: abs(one - to_C)))
