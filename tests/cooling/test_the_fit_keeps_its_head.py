"""Faults of the person, of the bench and of the readings: named, not swallowed."""

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from core.bench.readings import Readings, Ruling
from core.cooling.estimator import fit_cooling
from core.cooling.simulator import Hand, Truth, simulate
from core.errors import NoAnswer
from tests.cooling.benches import exponential_bench, exponential_run


def run_and_bench(seed=3):
    setup = exponential_bench()
    return exponential_run(np.random.default_rng(seed), setup), setup


def test_late_taps_are_named_and_hardly_move_the_answer():
    named = missed = wrongly = good = 0
    clean, marred = [], []
    setup = exponential_bench()
    for seed in range(25):
        rng = np.random.default_rng(seed)
        readings = exponential_run(rng, setup)
        time = np.array(readings.time_s)
        gaps = np.diff(time)
        slow = np.flatnonzero(gaps > 2.2)[1:-1]
        late = rng.choice(slow, 3, replace=False)
        time[late] += rng.uniform(1.2, 1.6, 3) + 0.5
        late_run = Readings(tuple(np.maximum.accumulate(time)), readings.reading_C)
        fit = fit_cooling(late_run, setup)
        found = {one.row for one in fit.left_out}
        named += len(found & set(late))
        missed += len(set(late) - found)
        wrongly += len(found - set(late))
        good += len(readings) - 3
        clean.append(fit_cooling(readings, setup).time_constant_s)
        marred.append(fit.time_constant_s)
    assert named / (named + missed) >= 0.9
    assert wrongly / good < 0.01
    rmse = [np.sqrt(np.mean((np.array(one) - 60.0) ** 2)) for one in (marred, clean)]
    assert rmse[0] < 1.34 * rmse[1]


def test_a_late_tap_says_so_and_a_person_may_overrule():
    readings, setup = run_and_bench()
    time = list(readings.time_s)
    time[40] += 1.4
    marred = Readings(tuple(time), readings.reading_C)
    fit = fit_cooling(marred, setup)
    assert [(one.row, one.cause) for one in fit.left_out] == [(40, "late")]
    assert "late tap" in fit.left_out[0].reason
    kept = fit_cooling(marred, setup, rulings=[Ruling(40, keep=True)])
    assert kept.left_out == ()
    dropped = fit_cooling(readings, setup, rulings=[Ruling(12, keep=False)])
    assert [(one.row, one.cause, one.by) for one in dropped.left_out] == [(12, "dropped", "person")]


def test_a_late_fan_is_found_and_left_out():
    setup = exponential_bench()
    setup = replace(setup, body=replace(setup.body, emissivity=0.05))
    truth = Truth(setup, 200.0, fan_late_s=4.0, fan_run_up_s=2.0)
    fits = [fit_cooling(simulate(truth, seed), setup) for seed in range(6)]
    assert all(fit.window_s[0] > 3.0 and fit.start_by == "program" for fit in fits)
    assert all(abs(fit.h_W_m2K / 200.0 - 1.0) < 0.01 for fit in fits)


def test_sound_runs_keep_their_start():
    setup = exponential_bench()
    rng = np.random.default_rng(5)
    assert sum(fit_cooling(exponential_run(rng, setup), setup).window_s[0] > 0.0 for _ in range(60)) <= 1


def test_a_person_may_set_the_start():
    readings, setup = run_and_bench()
    fit = fit_cooling(readings, setup, start_s=20.0)
    assert fit.start_by == "person"
    assert fit.window_s[0] >= 20.0
    assert all(one.cause == "start" and one.by == "person" for one in fit.left_out)
    with pytest.raises(NoAnswer, match="readings are left"):
        fit_cooling(readings, setup, start_s=readings.time_s[-2])


def test_a_slip_on_a_beat_is_named():
    setup = exponential_bench("beat")
    setup = replace(setup, body=replace(setup.body, emissivity=0.05))
    fit = fit_cooling(simulate(Truth(setup, 100.0), 1, Hand(slips={9: 10})), setup)
    assert [(one.row, one.cause) for one in fit.left_out] == [(9, "slip")]


@pytest.mark.parametrize(
    ("time", "shown", "words"),
    [
        ((0.0, 1.0, 2.0), (90.0, 89.0, 88.0), "3 readings"),
        ((0.0, 1.0, 2.0, 3.0), (90.0, 90.0, 90.0, 90.0), "does not cool"),
        ((0.0, 1.0, 2.0, 3.0), (60.0, 65.0, 70.0, 75.0), "does not cool"),
        ((0.0, 1.0, 2.0, 3.0), (25.0, 24.0, 23.0, 22.0), "hardly above the air"),
        ((0.0, 9.0, 20.0, 33.0), (60.0, 40.0, 25.0, 12.0), "below the air"),
    ],
)
def test_readings_that_cannot_answer_are_refused_in_a_sentence(time, shown, words):
    with pytest.raises(NoAnswer, match=words):
        fit_cooling(Readings(time, shown), exponential_bench())


@settings(max_examples=25, deadline=None)
@given(
    drops=st.lists(st.integers(1, 4), min_size=4, max_size=60),
    gaps=st.lists(st.floats(0.01, 40.0), min_size=60, max_size=60),
    first=st.integers(40, 99),
)
def test_any_falling_readings_give_an_answer_or_a_refusal(drops, gaps, first):
    shown = tuple(float(x) for x in first - np.concatenate([[0], np.cumsum(drops)]))
    time = tuple(float(x) for x in np.concatenate([[0.0], np.cumsum(gaps[: len(drops)])]))
    try:
        fit = fit_cooling(Readings(time, shown), exponential_bench())
    except NoAnswer:
        return
    assert np.isfinite(fit.h_W_m2K)
    assert fit.h_W_m2K > 0.0
    assert fit.h_u_W_m2K > 0.0


def test_a_warm_start_gives_the_same_answer():
    readings, setup = run_and_bench()
    cold = fit_cooling(readings, setup)
    warm = fit_cooling(readings, setup, warm=cold)
    assert warm.h_W_m2K == pytest.approx(cold.h_W_m2K, rel=0.1 * cold.h_u_W_m2K / cold.h_W_m2K)


def test_stretching_time_scales_h_down():
    readings, setup = run_and_bench()
    slow = replace(
        setup,
        thermometer=replace(setup.thermometer, refresh_s=1.0),
        recording=replace(setup.recording, tap_jitter_s=0.1),
    )
    slower = Readings(tuple(2.0 * t for t in readings.time_s), readings.reading_C)
    ratio = fit_cooling(slower, slow).time_constant_s / fit_cooling(readings, setup).time_constant_s
    assert ratio == pytest.approx(2.0, rel=2e-4)


def test_the_profile_interval_agrees_with_the_stated_uncertainty():
    readings, setup = run_and_bench()
    fit = fit_cooling(readings, setup, profile=True)
    low, high = fit.profile_interval_W_m2K
    assert low < fit.h_W_m2K < high
    assert (high - low) / 2 == pytest.approx(1.96 * fit.h_u_W_m2K, rel=0.15)
