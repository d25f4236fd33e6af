"""While a run goes on: what stopping now, in half a minute or at the planned end would give, and when the body
may be touched."""

from __future__ import annotations

from dataclasses import dataclass
from math import exp, log, sqrt

from core.bench.setup import Setup
from core.judgement.answer import Answer
from core.judgement.prediction import Planned, promise

SOON_s = 30.0
ENOUGH_GAIN = 0.05  # of U95: going on is not worth it below this

BURN_THRESHOLDS_C = ((1.0, 65.0), (10.0, 56.0), (60.0, 51.0), (600.0, 48.0), (28800.0, 43.0))
"""Contact time [s] and the surface temperature of bare metal [°C] from which a burn threatens, lower end of each
band: ISO 13732-1:2006, figures and table for uncoated metal; values from memory of the standard."""


@dataclass(frozen=True, slots=True)
class Guidance:
    """Expanded uncertainty of h, relative, if the run is stopped at three moments; seconds to the planned end and
    until the body is touch-safe, both estimates. `enough` says that going on to the end would bring less than a
    twentieth. `touch_safe_s` is None where the air is too warm for it ever to be."""

    U95_now_rel: float
    U95_soon_rel: float
    U95_end_rel: float
    enough: bool
    end_in_s: float
    touch_safe_s: float | None


def guide(answer: Answer, setup: Setup, shown_C: float, planned_end_C: float) -> Guidance:
    """Guidance for a run of which `answer` is the newest fit.

    Parameters
    ----------
    answer : to the readings so far
    setup : the bench
    shown_C : newest reading [°C]
    planned_end_C : reading at which the run is meant to end [°C]
    """
    fit = answer.fit
    air = fit.asymptote_C
    first = max(fit.start_C - air, 1e-3)
    now = min(max(shown_C - air, 1e-3), 0.99 * first)
    end = min(max(planned_end_C - air, 1e-3), now)
    rate = 1.0 / answer.time_constant_s
    soon = now * exp(-rate * SOON_s)
    bound_now = _readings_rel(setup, rate, first, now)
    rel_now = answer.h_U95_W_m2K / answer.h_W_m2K
    share = fit.h_u_fixed_air_W_m2K / answer.h_W_m2K

    def stopped_at(excess_K: float) -> float:
        ratio = _readings_rel(setup, rate, first, excess_K) / bound_now if bound_now > 0.0 else 1.0
        readings = share * min(ratio, 1.0)
        return sqrt(max(rel_now**2 + answer.coverage_factor**2 * (readings**2 - share**2), 0.0))

    at_end = stopped_at(end)
    return Guidance(
        U95_now_rel=rel_now,
        U95_soon_rel=stopped_at(max(soon, end) if end < now else now),
        U95_end_rel=at_end,
        enough=at_end > (1.0 - ENOUGH_GAIN) * rel_now,
        end_in_s=log(now / end) / rate,
        touch_safe_s=touch_safe_in_s(shown_C, air, answer.time_constant_s),
    )


def _readings_rel(setup: Setup, rate_s: float, first_K: float, last_K: float) -> float:
    planned = Planned(rate_s, first_K, last_K)
    return promise(
        planned, setup.thermometer, setup.recording, setup.recording.mode, setup.air.temperature_u_K
    ).rate_u_rel


def touch_safe_C(contact_s: float) -> float:
    """The surface temperature of bare metal [°C] below which a contact of this length [s] threatens no burn.

    Between the published contact times the value of the longer one holds. An estimate: it replaces neither gloves
    nor measuring."""
    for time_s, limit_C in BURN_THRESHOLDS_C:
        if contact_s <= time_s:
            return limit_C
    return BURN_THRESHOLDS_C[-1][1]


def touch_safe_in_s(
    shown_C: float, air_C: float, time_constant_s: float, contact_s: float = 28800.0
) -> float | None:
    """Time [s] until the body is below the burn threshold if the air goes on as it does; None if it never will be.

    Parameters
    ----------
    shown_C, air_C : newest reading and asymptote [°C]
    time_constant_s : of the cooling [s]
    contact_s : length of the contact meant [s]; the default is the most careful one
    """
    limit = touch_safe_C(contact_s)
    if air_C >= limit:
        return None
    return max(0.0, time_constant_s * log(max(shown_C - air_C, limit - air_C) / (limit - air_C)))
