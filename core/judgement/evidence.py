"""What the checks look at: one run with everything that was derived from it."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from core.bench.readings import Readings
from core.bench.setup import Setup
from core.convection.correlation import Expectation
from core.cooling.fit import CoolingFit
from core.judgement.answer import Check, Outcome

COMMON_PRACTICE = "common practice"


@dataclass(frozen=True, slots=True)
class Earlier:
    """An earlier run of the same body at the same speed: its h brought to this run's speed, and the standard
    uncertainty of the difference, without what both runs share."""

    h_W_m2K: float
    difference_u_W_m2K: float


@dataclass(frozen=True, slots=True)
class Evidence:
    """One run for the checks. Shares are of the whole heat flow at mid-run; `mass_ratio` is weighed over computed
    mass; `richardson` is Gr/Re²; `free_air_K` how far above the measured air the readings alone head, with its
    standard uncertainty; None where a value cannot be had."""

    readings: Readings
    setup: Setup
    fit: CoolingFit
    h_U95_rel: float
    free_air_K: tuple[float, float] | None
    radiation_share: float
    stem_share: float
    velocity_before_m_s: float | None
    richardson: float | None
    mass_ratio: float | None
    mass_ratio_u: float
    expected: tuple[Expectation, ...]
    earlier: tuple[Earlier, ...]


@dataclass(frozen=True, slots=True)
class Finding:
    """What one check found; `source` only where it differs from run to run."""

    outcome: Outcome
    value: float | None
    limit: float | None
    advice: str
    source: str = ""


@dataclass(frozen=True, slots=True)
class Rule:
    """One check: its name, the unit of value and limit, the source of the limit, and the function that looks."""

    name: str
    unit: str
    source: str
    find: Callable[[Evidence], Finding]

    def check(self, evidence: Evidence) -> Check:
        """The named check of one run."""
        found = self.find(evidence)
        return Check(
            self.name,
            found.outcome,
            found.value,
            found.limit,
            self.unit,
            found.source or self.source,
            found.advice,
        )


def unknown(why: str, limit: float | None = None) -> Finding:
    """A check that has nothing to hold against its limit; it says why and raises no alarm."""
    return Finding("good", None, limit, why)


def beyond(value: float, limit: float, again: float = 2.0) -> Outcome:
    """`good` up to the limit, `look` beyond it, `again` beyond `again` times the limit."""
    return "good" if value <= limit else "look" if value <= again * limit else "again"
