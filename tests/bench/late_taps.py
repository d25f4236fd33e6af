"""Runs with late taps, and what a refit costs: the two short tables beside `estimator_table`."""

import os
import subprocess
import sys
import time
from dataclasses import replace

import numpy as np

from core.bench.readings import Readings
from core.cooling.estimator import fit_cooling
from core.cooling.simulator import Hand
from tests.bench.rivals import lmfit_exponential
from tests.bench.scenarios import SCENARIOS

BENCH = next(one for one in SCENARIOS if one.name == "1 °C, 0.5 s")
FINE = next(one for one in SCENARIOS if one.name.startswith("0.1 °C"))
LATE = 3


def late_run(seed):
    """Relative errors of a run clean and with three late taps, late taps named, good ones named, good taps."""
    rng = np.random.default_rng((seed, 9))
    clean = BENCH.run(seed)
    gaps = np.diff(np.array(clean.time_s))
    slow = np.flatnonzero(gaps[1:] > 1.7) + 1
    rows = rng.choice(slow, LATE, replace=False)
    late = {int(row): float(rng.uniform(1.0, min(gaps[row] - 0.1, 4.0))) for row in rows}
    marred = BENCH.run(seed, Hand(BENCH.setup.recording.tap_lag_s, BENCH.setup.recording.tap_jitter_s, late=late))
    fits = [fit_cooling(readings, BENCH.setup) for readings in (clean, marred)]
    named = {one.row for one in fits[1].left_out}
    return [*(fit.h_W_m2K / BENCH.h_W_m2K - 1.0 for fit in fits),
            len(named & set(late)), len(named - set(late)), len(marred) - LATE]  # fmt: skip


def late_table(runs, pool):
    """How much three late taps cost, and who is named."""
    table = np.array(pool.map(late_run, range(runs), 5))
    clean, marred = (100 * np.sqrt(np.mean(table[:, k] ** 2)) for k in (0, 1))
    late, good = 100 * table[:, 2].sum() / (LATE * runs), 100 * table[:, 3].sum() / table[:, 4].sum()
    print(f"{LATE} late taps of {table[:, -1].mean() + LATE:.0f}: RMSE {clean:.4f} % clean, {marred:.4f} % marred, "
          f"ratio {marred / clean:.2f}; named {late:.1f} % of late, {good:.2f} % of good taps", flush=True)  # fmt: skip


def _spent(work, times):
    spent = []
    for _ in range(times):
        begin = time.perf_counter()
        work()
        spent.append(1e3 * (time.perf_counter() - begin))
    return np.percentile(spent, [50, 99])


def _times_of(scenario, readings, times):
    count, setup = len(readings), scenario.setup
    before = Readings(readings.time_s[:-1], readings.reading_C[:-1])
    warm = fit_cooling(before, setup)
    time_s, shown = np.array(readings.time_s), np.array(readings.reading_C)
    ours = _spent(lambda: fit_cooling(readings, setup, warm=warm), times)
    cold = _spent(lambda: fit_cooling(readings, setup), times)
    lmfit = _spent(lambda: lmfit_exponential(time_s, shown, setup.air.temperature_C), times)
    print(f"{count} readings, ms (median, 99 %): warm refit {ours[0]:.1f}, {ours[1]:.1f}; cold {cold[0]:.1f}, "
          f"{cold[1]:.1f}; one lmfit fit {lmfit[0]:.1f}, {lmfit[1]:.1f}; warm / lmfit {ours[0] / lmfit[0]:.2f}",
          flush=True)  # fmt: skip


def time_table(times=200):
    """A warm refit beside one lmfit fit of a plain exponential, with about 60 and about 400 readings."""
    whole = BENCH.run(1)
    _times_of(BENCH, Readings(whole.time_s[:57], whole.reading_C[:57]), times)
    whole = replace(FINE, h_W_m2K=FINE.h_W_m2K / 2).run(1)
    _times_of(FINE, Readings(whole.time_s[:401], whole.reading_C[:401]), times)


def memory_line():
    """Peak memory of one `fit` as a whole process."""
    folder = "core/demo/session"
    child = subprocess.Popen([sys.executable, "-m", "core", "fit", folder], stdout=subprocess.DEVNULL)
    _, status, used = os.wait4(child.pid, 0)
    print(f"peak memory of `python -m core fit {folder}`: {used.ru_maxrss / 1024:.0f} MiB (status {status})")
