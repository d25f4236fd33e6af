"""Runs with one injected fault each, and sound runs: does the right check speak, and only then?

`python -m tests.bench.verdict_table` does the same at length: 500 sound runs, 40 runs a fault."""

import numpy as np
import pytest

from core.cooling.simulator import Truth, simulate
from core.judgement.judge import judge
from tests.judgement.benches import bench
from tests.judgement.faults import FAULTS, WRITTEN, earlier, sound


@pytest.mark.parametrize("name", FAULTS)
def test_a_fault_is_caught_by_the_check_that_should(name):
    """Three runs with the fault: in each, one of its checks is not good and the run is not simply kept."""
    fault = FAULTS[name]
    for seed in range(3):
        setup, readings = fault.make(seed, np.random.default_rng((seed, 3)))
        answer = judge(readings, setup, earlier=(earlier(),))
        spoke = {one.name for one in answer.checks if one.outcome != "good"}
        assert spoke & fault.checks, (seed, spoke)
        assert answer.verdict != "keep"
        assert answer.reason in {one.advice for one in answer.checks}


def test_sound_runs_are_kept():
    """Of 40 sound runs at most one raises any alarm; at length it is below 2 of 100."""
    alarms = []
    for seed in range(1000, 1040):
        setup, readings = sound(seed)
        answer = judge(readings, setup, earlier=(earlier(),))
        alarms += [(seed, one.name) for one in answer.checks if one.outcome != "good"]
    assert len({seed for seed, _ in alarms}) <= 1, alarms


def test_the_earlier_run_was_sound_itself():
    assert earlier().verdict == "keep"
    assert earlier().setup == WRITTEN


def test_a_run_in_still_air_is_judged_without_a_reynolds_number():
    """It measures the stem loss: no alarm for large losses, none for a coarse h."""
    still = bench(body={"stem_loss_W_K": 0.02}, recording={"kind": "still-air"}, flow={"velocity_m_s": None})
    answer = judge(simulate(Truth(still, 8.0, end_C=45.0), 1), still)
    assert (answer.reynolds, answer.nusselt, answer.velocity_m_s) == (None, None, None)
    assert answer.verdict == "keep", answer.reason
    assert answer.fit.stem_loss_W_K == pytest.approx(0.02, abs=0.002)
