"""While a run goes on: what stopping now, in half a minute or at the planned end would give, and when the body
may be touched."""

from __future__ import annotations

from dataclasses import dataclass
from math import exp, log, sqrt

import numpy as np

from core.bench.setup import Setup
from core.judgement.answer import Answer
from core.judgement.prediction import Planned, readings_to_come
from core.judgement.propagation import Vector, coverage_factor, effective_dof

SOON_s = 30.0
ENOUGH_GAIN = 0.05  # of U95: going on is not worth it below this
FEWEST_TO_COMPARE = 6  # readings, from which on what they told is compared with what was expected of them
MENDED_BY_GOING_ON = ("temperature span", "number of readings")
KEENEST = 3.0  # times: further off no comparison is believed

BURN_THRESHOLDS_C = ((1.0, 65.0), (10.0, 56.0), (60.0, 51.0), (600.0, 48.0), (28800.0, 43.0))
"""Contact time [s] and the surface temperature of bare metal [°C] from which a burn threatens, lower end of each
band: ISO 13732-1:2006, figures and table for uncoated metal; values from memory of the standard."""


@dataclass(frozen=True, slots=True)
class Guidance:
    """Expanded uncertainty of h, relative, if the run is stopped at three moments; seconds to the planned end and
    until the body is touch-safe, both estimates. `enough` says that going on to the end would bring less than a
    twentieth, and that the readings so far span enough for the verdict. For a run in still air, of which h is not
    what is wanted, nothing is foretold: the three are the same, and it is never enough before the planned end.
    `touch_safe_s` is None where the air is too warm for it ever to be."""

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

    Notes
    -----
    The information that the fit has is added to that of the readings to come (`readings_to_come`), scaled by what
    the readings so far told over what the same reckoning expects of them. All else in the budget stays as it is.
    """
    fit = answer.fit
    air = fit.asymptote_C
    first = max(fit.start_C - air, 1e-3)
    now = min(max(shown_C - air, 1e-3), 0.99 * first)
    end = min(max(planned_end_C - air, 1e-3), now)
    rate = 1.0 / answer.time_constant_s
    soon = max(now * exp(-rate * SOON_s), end)
    now_rel = answer.h_U95_W_m2K / answer.h_W_m2K
    course = _Course(answer, setup, rate, first)
    forced = setup.recording.kind == "forced"
    soon_rel, end_rel = (min(course.U95_rel(now, later), now_rel) if forced else now_rel for later in (soon, end))
    return Guidance(
        U95_now_rel=now_rel,
        U95_soon_rel=soon_rel,
        U95_end_rel=end_rel,
        enough=forced and end_rel > (1.0 - ENOUGH_GAIN) * now_rel and _stands_when_ended(answer),
        end_in_s=log(now / end) / rate,
        touch_safe_s=touch_safe_in_s(shown_C, air, answer.time_constant_s),
    )


def _stands_when_ended(answer: Answer) -> bool:
    """Whether the checks that only going on can mend are good already."""
    return all(check.outcome == "good" for check in answer.checks if check.name in MENDED_BY_GOING_ON)


@dataclass(frozen=True, slots=True)
class _Course:
    """A run on its way: the newest answer, and the cooling as it has been so far."""

    answer: Answer
    setup: Setup
    rate_s: float
    first_K: float

    def U95_rel(self, now_K: float, later_K: float) -> float:
        """Expanded relative uncertainty of h if the run goes on from one excess to another."""
        answer, fit = self.answer, self.answer.fit
        coming, count = self._information(now_K, later_K)
        if count == 0:
            return answer.h_U95_W_m2K / answer.h_W_m2K
        free = np.flatnonzero(np.diag(fit.covariance) > 0.0)
        so_far = np.array(fit.covariance)[np.ix_(free, free)]
        unit = np.sqrt(np.diag(so_far))
        told = coming[np.ix_(free, free)] * np.outer(unit, unit) * self._keenness(now_K)
        later = np.linalg.inv(np.linalg.inv(so_far / np.outer(unit, unit)) + told) * np.outer(unit, unit)
        air_u = self.setup.air.temperature_u_K
        from_air = float(later[0, 2]) / air_u if len(free) > 2 and air_u > 0.0 else 0.0
        others = max((answer.h_u_W_m2K / answer.h_W_m2K) ** 2 - float(so_far[0, 0]), 0.0)
        u = sqrt(others + float(later[0, 0]))
        readings = sqrt(max(float(later[0, 0]) - from_air**2, 0.0))
        dof = effective_dof([readings], [max(answer.readings + count - len(free), 1.0)], u)
        return coverage_factor(dof) * u

    def _information(self, from_K: float, to_K: float) -> tuple[Vector, int]:
        """Information on ln h, start and asymptote in the readings between two excesses, and their number."""
        thermometer, recording = self.setup.thermometer, self.setup.recording
        planned = Planned(self.rate_s, self.first_K, to_K)
        sharp = recording.mode == "change"
        matrix, count = readings_to_come(planned, thermometer, recording, recording.mode, from_K, sharp)
        by_h = np.array([self.answer.h_W_m2K / self.answer.h_total_W_m2K, 1.0, 1.0])
        return matrix * np.outer(by_h, by_h), count

    def _keenness(self, now_K: float) -> float:
        """What the readings in the fit told of h at a known asymptote, over what was to be expected of them."""
        fit = self.answer.fit
        began = min(self.first_K * exp(-self.rate_s * fit.window_s[0]), self.first_K)
        matrix, count = self._information(max(began, now_K), now_K)
        if count < FEWEST_TO_COMPARE:
            return 1.0
        expected = float(np.linalg.inv(matrix[:2, :2])[0, 0])
        told = (fit.h_u_fixed_air_W_m2K / fit.h_W_m2K) ** 2
        return min(max(expected / told, 1.0 / KEENEST), KEENEST)


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
