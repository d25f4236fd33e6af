"""Taps that follow one display tell its clock, and the clock sharpens the answer; without one nothing is made up."""

from dataclasses import replace

import numpy as np
import pytest

from core.bench.readings import Readings
from core.bench.setup import Recording
from core.cooling.estimator import fit_cooling
from tests.bench.bound import cramer_rao_rel
from tests.bench.scenarios import SCENARIOS
from tests.cooling.benches import exponential_bench, exponential_run

NAMED = {one.name: one for one in SCENARIOS}


def test_the_refresh_is_found_though_the_setup_has_it_wrong():
    setup = exponential_bench(refresh_s=0.51)
    said = replace(setup, thermometer=replace(setup.thermometer, refresh_s=0.5))
    fit = fit_cooling(exponential_run(np.random.default_rng(2), setup), said)
    assert fit.refresh_found_s == pytest.approx(0.51, rel=2e-3)
    assert fit.time_constant_s == pytest.approx(60.0, rel=3e-3)


@pytest.mark.parametrize("name", ["1 °C, 0.5 s", "dark, 1 °C, 0.5 s"])
def test_taps_on_one_clock_tell_more_than_taps_one_by_one(name):
    scenario = NAMED[name]
    fits = [fit_cooling(scenario.run(seed), scenario.setup) for seed in range(24)]
    error = np.array([fit.h_W_m2K / scenario.h_W_m2K - 1.0 for fit in fits])
    score = error * scenario.h_W_m2K / np.array([fit.h_u_W_m2K for fit in fits])
    assert np.sqrt(np.mean(error**2)) < cramer_rao_rel(scenario, range(6))
    assert 0.7 < np.sqrt(np.mean(score**2)) < 1.3


def test_beats_that_the_refresh_does_not_divide_share_one_phase():
    scenario = NAMED["beat 0.1 °C, 0.7 s"]
    fits = [fit_cooling(scenario.run(seed), scenario.setup) for seed in range(36)]
    error = np.array([fit.h_W_m2K / scenario.h_W_m2K - 1.0 for fit in fits])
    score = error * scenario.h_W_m2K / np.array([fit.h_u_W_m2K for fit in fits])
    assert np.sqrt(np.mean(error**2)) < cramer_rao_rel(scenario, range(12))
    assert 0.65 < np.sqrt(np.mean(score**2)) < 1.4


@pytest.mark.parametrize("unsteady_s", [0.03, 0.1])
def test_an_unsteady_display_does_not_make_the_answer_overconfident(unsteady_s):
    setup = exponential_bench(refresh_s=0.8)
    score = []
    for seed in range(30):
        rng = np.random.default_rng((seed, 5))
        readings = unsteady_run(rng, 0.8, unsteady_s, 0.05)
        fit = fit_cooling(readings, setup)
        score.append((fit.time_constant_s - 60.0) / fit.time_constant_u_s)
    assert np.sqrt(np.mean(np.square(score))) < 1.35


def unsteady_run(rng, refresh_s, unsteady_s, jitter_s):
    """Taps on a display of which each renewal comes up to `unsteady_s` off its time, evenly."""
    air, first, tau = 23.0, 90.0, 60.0
    renewals = np.arange(rng.uniform(0.0, refresh_s), 115.0, refresh_s)
    renewals = np.sort(renewals + rng.uniform(-unsteady_s, unsteady_s, len(renewals)))
    renewals = np.concatenate([[0.0], renewals[renewals > 0.0]])
    shown = np.floor(air + (first - air) * np.exp(-renewals / tau) + 0.5)
    changed = np.flatnonzero(np.diff(shown) != 0.0) + 1
    taps = np.maximum.accumulate(np.maximum(renewals[changed] + jitter_s * rng.normal(size=len(changed)), 1e-3))
    return Readings((0.0, *(taps + 1e-6 * np.arange(len(taps)))), (shown[0], *shown[changed]))


def test_no_clock_is_made_up_where_the_hand_scatters_widely():
    setup = replace(exponential_bench(), recording=Recording("change", tap_jitter_s=0.3))
    fit = fit_cooling(exponential_run(np.random.default_rng(4), setup), setup)
    assert fit.refresh_found_s is None
    assert fit.phase_s is None
