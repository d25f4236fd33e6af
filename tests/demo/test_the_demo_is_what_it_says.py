"""The demo session: invented, reproducible, and answered as its own truth has it."""

import pytest

from core.demo.cabinet_bench import FOLDER, TITLE, demo_runs, demo_session
from core.handover.export import read_session


def test_the_folder_in_the_tree_holds_the_readings_that_the_simulator_makes():
    kept = read_session(FOLDER)
    assert kept.name == TITLE
    for run, made in zip(kept.runs, demo_runs(), strict=True):
        assert run.setup == made.setup
        assert run.readings.reading_C == made.readings.reading_C
        assert run.readings.time_s == pytest.approx(made.readings.time_s, abs=1e-9)
        assert run.true_h_W_m2K == pytest.approx(made.true_h_W_m2K, rel=1e-9)


def test_every_run_is_marked_as_invented():
    assert all(run.invented for run in read_session(FOLDER).runs)


def test_the_truth_lies_within_the_stated_uncertainty_of_every_run():
    for run in demo_session().runs:
        assert run.answer is not None
        assert abs(run.answer.h_W_m2K - run.true_h_W_m2K) < run.answer.h_U95_W_m2K
