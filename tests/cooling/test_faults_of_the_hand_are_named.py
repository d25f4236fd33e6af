"""Late, doubled and missed taps: each named with its row and cause, none of them spoiling the answer."""

import numpy as np
import pytest

from core.cooling.estimator import fit_cooling
from core.cooling.simulator import Hand, simulate
from tests.bench.scenarios import SCENARIOS

RUNS = 12
BENCHES = [one for one in SCENARIOS if one.name in {"1 °C, 0.5 s", "0.5 °C, 0.7 s"}]


def fits(bench, hand_of):
    """Fits of runs with one fault each at a row drawn by lot, and the rows."""
    rows = [int(np.random.default_rng(seed).integers(5, 40)) for seed in range(RUNS)]
    return [fit_cooling(simulate(bench.truth(seed), seed, hand_of(row)), bench.setup)
            for seed, row in enumerate(rows)], rows  # fmt: skip


def named(fit):
    return {one.row: one.cause for one in fit.left_out if one.cause != "start"}


@pytest.mark.parametrize("bench", BENCHES, ids=lambda bench: bench.name)
def test_a_doubled_tap_is_named_as_the_second_of_two(bench):
    for fit, row in zip(*fits(bench, lambda row: Hand(doubled=frozenset({row}))), strict=True):
        assert named(fit)[row + 1] == "doubled"
        assert len(named(fit)) <= 2


@pytest.mark.parametrize("bench", BENCHES, ids=lambda bench: bench.name)
def test_a_late_tap_is_named_as_late(bench):
    for fit, row in zip(*fits(bench, lambda row: Hand(late={row: 2.0})), strict=True):
        assert named(fit)[row] == "late"


@pytest.mark.parametrize("bench", BENCHES, ids=lambda bench: bench.name)
def test_after_a_missed_change_the_tap_two_steps_down_is_a_good_one(bench):
    """In eleven of twelve runs no row at all is in doubt, and h is as close as with every change tapped."""
    missed, _ = fits(bench, lambda row: Hand(missed=frozenset({row})))
    clean, _ = fits(bench, lambda row: Hand())
    assert sum(len(named(fit)) > 0 for fit in missed) <= 1
    error = [np.sqrt(np.mean([(fit.h_W_m2K / bench.h_W_m2K - 1.0) ** 2 for fit in some])) for some in (missed, clean)]
    assert error[0] < 1.15 * error[1]


def test_a_display_that_skips_numbers_is_not_taken_for_a_hand_that_does():
    """0.1 °C renewed each second: most taps are several steps down, and no row is in doubt."""
    bench = next(one for one in SCENARIOS if one.name.startswith("0.1 °C, 1 s"))
    for seed in range(6):
        readings = bench.run(seed)
        assert np.mean(-np.diff(readings.reading_C) > 0.15) > 0.5
        assert len(named(fit_cooling(readings, bench.setup))) <= 1
