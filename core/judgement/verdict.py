"""From checks to one word: keep, look or again."""

from __future__ import annotations

from collections.abc import Sequence

from core.judgement import checks_bench as bench
from core.judgement import checks_readings as readings
from core.judgement.answer import Check, Outcome, Verdict
from core.judgement.evidence import Evidence, Rule

# What a corrected set-up puts right, without another run: while one of these speaks, the others may only echo it.
SETTINGS: tuple[Rule, ...] = (readings.MODE, readings.DISPLAY, readings.REFRESH, bench.MATERIAL)

# In order of weight: a cause comes before what it may cause.
RULES: tuple[Rule, ...] = (
    *SETTINGS,
    readings.SPAN,
    readings.COUNT,
    bench.AIRSPEED_DRIFT,
    bench.AIR_DRIFT,
    readings.START,
    readings.ASYMPTOTE,
    readings.PATTERN,
    readings.DOUBT,
    bench.EARLIER,
    bench.EXPECTED,
    bench.MODEL,
    bench.MIXED,
    bench.RADIATION,
    bench.STEM,
    bench.TARGET,
)

_SETTINGS = frozenset(rule.name for rule in SETTINGS)
_WORDS: tuple[tuple[Outcome, Verdict], ...] = (("again", "again"), ("look", "look"))


def run_checks(evidence: Evidence) -> tuple[Check, ...]:
    """Every check of one run, in order of weight."""
    return tuple(rule.check(evidence) for rule in RULES)


def conclude(checks: Sequence[Check]) -> tuple[Verdict, str]:
    """The verdict and the one sentence that matters most.

    A setting that does not fit the readings comes first: `look`, as correcting it judges the same readings anew.
    Otherwise the verdict is the worst outcome, and the reason the advice of the weightiest check that has it."""
    for check in checks:
        if check.name in _SETTINGS and check.outcome != "good":
            return "look", check.advice
    for outcome, verdict in _WORDS:
        for check in checks:
            if check.outcome == outcome:
                return verdict, check.advice
    return "keep", "Every check is good: keep the run."
