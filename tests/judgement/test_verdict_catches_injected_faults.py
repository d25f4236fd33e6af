"""Runs with one injected fault each, and sound runs: does the right check speak, and only then?

`python -m tests.bench.verdict_table` does the same at length: 500 sound runs, 40 runs a fault."""

import numpy as np
import pytest

from core.judgement.judge import judge
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
