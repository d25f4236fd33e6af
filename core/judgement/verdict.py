"""From checks to one word: keep, look or again."""

from __future__ import annotations

from collections.abc import Sequence

from core.judgement import checks_bench as bench
from core.judgement import checks_readings as readings
from core.judgement.answer import Check, Verdict
from core.judgement.evidence import Evidence, Rule

# In order of weight: the first of the worst gives the reason. What makes other checks meaningless comes first.
RULES: tuple[Rule, ...] = (
    readings.MODE,
    readings.DISPLAY,
    readings.SPAN,
    readings.COUNT,
    readings.DOUBT,
    bench.MATERIAL,
    bench.AIRSPEED_DRIFT,
    bench.AIR_DRIFT,
    readings.REFRESH,
    readings.START,
    readings.ASYMPTOTE,
    readings.PATTERN,
    bench.EARLIER,
    bench.EXPECTED,
    bench.MODEL,
    bench.MIXED,
    bench.RADIATION,
    bench.STEM,
    bench.TARGET,
)

_WORST = ("again", "look", "good")
_WORD: dict[str, Verdict] = {"good": "keep", "look": "look", "again": "again"}


def run_checks(evidence: Evidence) -> tuple[Check, ...]:
    """Every check of one run, in order of weight."""
    return tuple(rule.check(evidence) for rule in RULES)


def conclude(checks: Sequence[Check]) -> tuple[Verdict, str]:
    """The verdict is the worst outcome; the reason is the advice of the first check that has it."""
    for outcome in _WORST:
        for check in checks:
            if check.outcome == outcome:
                return _WORD[outcome], check.advice if outcome != "good" else "Every check is good: keep the run."
    return "keep", "There was nothing to check."
