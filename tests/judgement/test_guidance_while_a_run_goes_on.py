"""What the person is told while the run goes on."""

from dataclasses import replace

import pytest

from core.bench.readings import Readings
from core.cooling.simulator import Truth, simulate
from core.demo.cabinet_bench import BENCH
from core.judgement.guidance import guide, touch_safe_C, touch_safe_in_s
from core.judgement.judge import judge

SETUP = replace(BENCH, body=replace(BENCH.body, heat_capacity_u_rel=0.0, emissivity_u=0.0))


def cut(readings, count):
    return Readings(readings.time_s[:count], readings.reading_C[:count])


@pytest.fixture(scope="module")
def run():
    return simulate(Truth(SETUP, 150.0), 4)


def test_the_promise_for_the_end_is_kept(run):
    early = cut(run, 25)
    answer = judge(early, SETUP)
    told = guide(answer, SETUP, early.reading_C[-1], run.reading_C[-1])
    whole = judge(run, SETUP)
    assert told.U95_end_rel == pytest.approx(whole.h_U95_W_m2K / whole.h_W_m2K, rel=0.3)
    assert told.U95_end_rel < told.U95_soon_rel < told.U95_now_rel
    assert told.end_in_s == pytest.approx(run.time_s[-1] - early.time_s[-1], rel=0.05)
    assert not told.enough


def test_enough_is_said_where_the_material_decides(run):
    setup = replace(SETUP, body=replace(SETUP.body, heat_capacity_u_rel=0.03))
    most = cut(run, 45)
    assert guide(judge(most, setup), setup, most.reading_C[-1], run.reading_C[-1]).enough


def test_touch_safe_times_follow_the_thresholds():
    assert touch_safe_C(1.0) == 65.0
    assert touch_safe_C(30.0) == 51.0
    assert touch_safe_C(1e9) == 43.0
    assert touch_safe_in_s(90.0, 45.0, 60.0) is None
    assert touch_safe_in_s(40.0, 23.0, 60.0) == 0.0
    times = [touch_safe_in_s(90.0, 23.0, 60.0, contact) for contact in (1.0, 10.0, 60.0, 600.0, 28800.0)]
    assert times == sorted(times)
    assert times[0] == pytest.approx(60.0 * 0.4669, rel=1e-3)
