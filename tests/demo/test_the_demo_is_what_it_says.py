"""The demo session: invented, reproducible, and answered as its own truth has it."""

import csv
import re
import subprocess
import sys

import pytest

from core.demo.cabinet_bench import FOLDER, SEED, TITLE, TRUE_C, TRUE_M, demo_runs, demo_session, write_demo
from core.handover.export import read_session


def test_the_folder_in_the_tree_holds_the_readings_that_the_simulator_makes():
    kept = read_session(FOLDER)
    assert kept.name == TITLE
    for run, made in zip(kept.runs, demo_runs(), strict=True):
        assert run.setup == made.setup
        assert run.readings.reading_C == made.readings.reading_C
        assert run.readings.time_s == pytest.approx(made.readings.time_s, abs=1e-9)
        assert run.true_h_W_m2K == pytest.approx(made.true_h_W_m2K, rel=1e-9)


NUMBER = re.compile(r"-?\d+\.\d+(?:e[-+]?\d+)?|-?\d+e[-+]?\d+")


@pytest.fixture(scope="module")
def made_anew(tmp_path_factory):
    folder = tmp_path_factory.mktemp("demo") / "session"
    write_demo(folder)
    return folder


def cells(path):
    """Every field of a table: its words, and the numbers in it."""
    with path.open(encoding="utf-8", newline="") as file:
        for row in csv.DictReader(file):
            for column, text in row.items():
                yield (row["run"], column, NUMBER.sub("#", text)), [float(one) for one in NUMBER.findall(text)]


@pytest.mark.parametrize("name", ["runs.csv", "readings.csv"])
def test_what_stands_in_the_tree_is_what_the_program_makes_today(made_anew, name):
    """Every word, and every number to the accuracy that another processor keeps. After a change of the estimator:
    python -m core.demo"""
    for (words, numbers), (kept_words, kept_numbers) in zip(
        cells(made_anew / name), cells(FOLDER / name), strict=True
    ):
        assert words == kept_words
        assert numbers == pytest.approx(kept_numbers, rel=1e-6, abs=1e-9), words


def test_made_by_another_process_it_is_the_same_to_the_byte(made_anew, tmp_path):
    again = tmp_path / "session"
    subprocess.run([sys.executable, "-m", "core.demo", str(again)], check=True)
    for file in made_anew.iterdir():
        assert (again / file.name).read_bytes() == file.read_bytes(), file.name


def test_every_run_is_marked_as_invented_and_says_how_it_was_made():
    for count, run in enumerate(read_session(FOLDER).runs):
        assert run.invented
        assert f"seed {SEED + count}" in run.note
        assert f"{TRUE_C}·Re^{TRUE_M}" in run.note


def test_the_truth_lies_within_the_stated_uncertainty_of_every_run():
    for run in demo_session().runs:
        assert run.answer is not None
        assert abs(run.answer.h_W_m2K - run.true_h_W_m2K) < run.answer.h_U95_W_m2K
