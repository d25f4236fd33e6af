"""Each check by itself: quiet on a sound run, and the right word and advice when its own thing is off."""

from dataclasses import replace

import numpy as np
import pytest

from core.bench.readings import Readings
from core.convection.expected import expected_for
from core.cooling.fit import LeftOut
from core.judgement.evidence import Earlier, Evidence
from core.judgement.patterns import refresh_grid, residual_pattern
from core.judgement.verdict import RULES, conclude, run_checks
from tests.judgement.benches import bench, invented_fit

TAU = 160.0


def change_taps(refresh_s=0.5, jitter_s=0.05, resolution_K=1.0, tau_s=TAU, seed=4):
    """Taps at the changes of a display that cools from 90 °C towards 23 °C."""
    generator = np.random.default_rng(seed)
    renewals = np.arange(generator.uniform(0, refresh_s), tau_s * np.log(6.7), refresh_s)
    shown = np.round((23 + 67 * np.exp(-renewals / tau_s)) / resolution_K) * resolution_K
    at = np.flatnonzero(np.diff(shown)) + 1
    taps = renewals[at] + 0.25 + generator.normal(0, jitter_s, len(at))
    return Readings((0.0, *taps), (float(shown[0]), *(float(one) for one in shown[at])))


def some(part):
    """Part of a sound record of taps."""
    taps = change_taps()
    return Readings(taps.time_s[part], taps.reading_C[part])


def beats(beat_s=5.0, resolution_K=1.0, tau_s=TAU):
    times = np.arange(0.0, tau_s * np.log(6.7), beat_s)
    shown = np.round((23 + 67 * np.exp(-times / tau_s)) / resolution_K) * resolution_K
    return Readings(tuple(times), tuple(float(one) for one in shown))


def evidence(readings=None, setup=None, fit=None, **changes):
    """A sound run of a sound bench; everything can be changed."""
    readings, setup = readings or change_taps(), setup or bench()
    n = len(readings)
    scores = tuple(np.random.default_rng(1).normal(size=n))
    sound = invented_fit(setup, 80.0)
    fields = {"used": (True,) * n, "residual_score": scores, "window_s": (readings.time_s[0], readings.time_s[-1])}
    whole = replace(sound, **{**fields, **(fit or {})})
    return Evidence(**{
        "readings": readings, "setup": setup, "fit": whole, "h_U95_rel": 0.04, "free_air_K": (0.01, 0.03),
        "radiation_share": 0.01, "stem_share": 0.0, "velocity_before_m_s": 8.0, "richardson": 0.001,
        "mass_ratio": 1.0, "mass_ratio_u": 0.007, "expected": expected_for(setup, 53.0), "earlier": (), **changes,
    })  # fmt: skip


def outcomes(case):
    return {one.name: one.outcome for one in run_checks(case)}


def test_a_sound_run_is_kept_and_every_check_has_a_source_and_a_sentence():
    checks = run_checks(evidence())
    assert conclude(checks) == ("keep", "Every check is good: keep the run.")
    assert len({one.name for one in checks}) == len(RULES) == 19
    for one in checks:
        assert one.source
        assert one.advice.endswith(".")


LATE = tuple(LeftOut(row, "late", "Late.", "program") for row in (5, 20, 41))
CASES = {
    "the mode set to change for readings on a beat": ("recording mode", "look", {"readings": beats()}),
    "the mode set to beat for changes": (
        "recording mode", "look", {"setup": bench(recording={"mode": "beat"})}),
    "a display of 1 K set as 0.1 K": ("display step", "look", {"setup": bench(thermometer={"resolution_K": 0.1})}),
    "a display of 0.1 K set as 1 K": (
        "display step", "look", {"readings": change_taps(resolution_K=0.1)}),
    "a refresh of 1.8 s set as 0.5 s": ("display refresh", "look", {"readings": change_taps(refresh_s=1.8)}),
    "a refresh of 0.5 s set as 1.8 s": (
        "display refresh", "look", {"setup": bench(thermometer={"refresh_s": 1.8})}),
    "a run that ends after a third": (
        "temperature span", "again", {"readings": some(slice(20))}),
    "eight readings": (
        "number of readings", "look", {"readings": some(slice(None, None, 8))}),
    "three late taps": ("readings in doubt", "look", {"fit": {"left_out": LATE}}),
    "a start left out by the program": ("start", "look", {"fit": {"window_s": (30.0, 300.0)}}),
    "a third of the record left out": ("start", "again", {"fit": {"window_s": (110.0, 300.0)}}),
    "an asymptote above the air": (
        "asymptote", "look", {"free_air_K": (0.5, 0.05)}),
    "an asymptote so far off that h hangs on it": ("asymptote", "again", {"free_air_K": (3.0, 0.1)}),
    "residuals in a slow wave": (
        "residual pattern", "again", {"fit": {"residual_score": tuple(2 * np.sin(np.arange(58) / 8))}}),
    "residuals that alternate": (
        "residual pattern", "again", {"fit": {"residual_score": (1.0, -1.0) * 29}}),
    "air that warms by 2 K": ("air drift", "look", {"setup": bench(air={"temperature_end_C": 25.0})}),
    "a damper that creeps": ("airspeed drift", "look", {"setup": bench(flow={"velocity_end_m_s": 7.5})}),
    "a stalled fan": ("airspeed drift", "again", {"setup": bench(flow={"velocity_end_m_s": 5.0})}),
    "a dark body": ("radiation share", "look", {"radiation_share": 0.15}),
    "a thick stem": ("stem share", "again", {"stem_share": 0.5}),
    "hardly any flow": ("mixed convection", "look", {"richardson": 0.3}),
    "a lumped model for a thick body": ("Biot number", "look", {"fit": {"biot": 0.2}}),
    "a mass that is not brass": ("material", "look", {"mass_ratio": 0.32}),
    "h far off the published band": ("expected h", "look", {"fit": {"h_W_m2K": 105.0}}),
    "h off an earlier run": ("earlier runs", "look", {"earlier": (Earlier(84.0, 0.3),)}),
    "a poor budget": ("target uncertainty", "look", {"h_U95_rel": 0.09}),
}  # fmt: skip


@pytest.mark.parametrize("case", CASES)
def test_the_check_that_should_speaks(case):
    name, outcome, changes = CASES[case]
    assert outcomes(evidence(**changes))[name] == outcome


def test_a_wrong_setting_is_the_reason_before_all_that_it_may_cause():
    """Readings on a beat set as changes: correct the set-up first, whatever else speaks."""
    verdict, reason = conclude(run_checks(evidence(readings=beats(), h_U95_rel=0.2, stem_share=0.9)))
    assert verdict == "look"
    assert "set the mode to beat" in reason


def test_the_reason_is_the_advice_of_the_weightiest_of_the_worst():
    """A stalled fan is worse than a poor budget; a poor budget speaks when all else is well."""
    stalled = bench(flow={"velocity_end_m_s": 5.0})
    verdict, reason = conclude(run_checks(evidence(setup=stalled, h_U95_rel=0.2)))
    assert verdict == "again"
    assert "lock the damper" in reason
    verdict, reason = conclude(run_checks(evidence(h_U95_rel=0.2)))
    assert verdict == "look"
    assert "± 20.0 %" in reason


def test_a_symptom_leaves_the_word_to_a_measured_cause():
    """Many readings in doubt because the damper crept: again, and the reason is the damper."""
    doubted = tuple(LeftOut(row, "late", "Late.", "program") for row in range(3, 45, 4))
    crept = bench(flow={"velocity_end_m_s": 7.5})
    verdict, reason = conclude(run_checks(evidence(setup=crept, fit={"left_out": doubted})))
    assert verdict == "again"
    assert "lock the damper" in reason


def test_what_was_not_measured_raises_no_alarm_but_says_so():
    checks = {one.name: one for one in run_checks(evidence(mass_ratio=None, expected=()))}
    for name in ("air drift", "airspeed drift", "material", "expected h", "earlier runs"):
        assert checks[name].outcome == "good"
        assert checks[name].value is None


def test_a_display_that_skips_numbers_while_it_is_fast_is_not_taken_for_a_coarser_one():
    """0.1 K and a renewal each 0.5 s at 0.4 K/s: the first readings all go by 0.2 K."""
    taps = Readings(tuple(0.5 * i for i in range(24)), tuple(90.0 - 0.2 * i for i in range(24)))
    case = evidence(readings=taps, setup=bench(thermometer={"resolution_K": 0.1}), fit={"residual_score": ()})
    assert outcomes(case)["display step"] == "good"


def test_a_start_set_by_the_person_is_theirs():
    assert outcomes(evidence(fit={"window_s": (110.0, 300.0), "start_by": "person"}))["start"] == "good"


@pytest.mark.parametrize("refresh_s", [0.3, 0.5, 0.7, 1.0, 1.8, 2.5])
def test_taps_betray_the_refresh_of_the_display(refresh_s):
    found = [refresh_grid(change_taps(refresh_s, 0.03, seed=seed).time_s) for seed in range(10)]
    assert found == pytest.approx([refresh_s] * 10, rel=0.01)


def test_a_display_that_renews_without_a_grid_betrays_none():
    found = [refresh_grid(change_taps(0.003, 0.03, tau_s=60 + 20 * s, seed=s).time_s) for s in range(30)]
    assert found == [None] * 30


def test_sound_residuals_seldom_look_like_a_pattern():
    """Of 4000 sound records about 1 in 1000 may fall below a chance of 1 in 1000: at most 12."""
    generator = np.random.default_rng(8)
    low = sum(residual_pattern(generator.normal(size=55)).probability < 1e-3 for _ in range(4000))
    assert low <= 12
