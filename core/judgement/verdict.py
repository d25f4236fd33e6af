"""From checks to one word: keep, look or again."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Literal

from core.judgement import checks_bench as bench
from core.judgement import checks_readings as readings
from core.judgement.answer import Check, Verdict
from core.judgement.evidence import Evidence, Rule

# What a corrected set-up puts right, without another run: while one of these speaks, the others may only echo it.
SETTINGS: tuple[Rule, ...] = (readings.MODE, readings.DISPLAY, readings.REFRESH, bench.MATERIAL)

# What was measured to have changed during the run, and the checks that only show that something did.
CAUSES: tuple[Rule, ...] = (bench.AIRSPEED_DRIFT, bench.AIR_DRIFT)
SYMPTOMS: tuple[Rule, ...] = (
    readings.START,
    readings.ASYMPTOTE,
    readings.PATTERN,
    readings.DOUBT,
    bench.EARLIER,
    bench.EXPECTED,
)

# In order of weight.
RULES: tuple[Rule, ...] = (
    *SETTINGS,
    readings.SPAN,
    readings.COUNT,
    *CAUSES,
    *SYMPTOMS,
    bench.MODEL,
    bench.MIXED,
    bench.RADIATION,
    bench.STEM,
    bench.TARGET,
)

_WORST: tuple[Literal["again", "look"], ...] = ("again", "look")


def run_checks(evidence: Evidence) -> tuple[Check, ...]:
    """Every check of one run, in order of weight."""
    return tuple(rule.check(evidence) for rule in RULES)


def conclude(checks: Sequence[Check]) -> tuple[Verdict, str]:
    """The verdict and the one sentence that matters most.

    A setting that does not fit the readings comes first: `look`, as correcting it judges the same readings anew.
    Otherwise the verdict is the worst outcome, and the reason the advice of the weightiest check that has it; but
    a symptom leaves the word to a cause that was measured."""
    setting = _first_speaking(checks, SETTINGS)
    if setting is not None:
        return "look", setting.advice
    for outcome in _WORST:
        for check in checks:
            if check.outcome == outcome:
                cause = _first_speaking(checks, CAUSES)
                symptom = any(check.name == rule.name for rule in SYMPTOMS)
                return outcome, cause.advice if symptom and cause is not None else check.advice
    return "keep", "Every check is good: keep the run."


def _first_speaking(checks: Sequence[Check], rules: Sequence[Rule]) -> Check | None:
    names = {rule.name for rule in rules}
    return next((check for check in checks if check.name in names and check.outcome != "good"), None)
