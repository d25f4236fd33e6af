"""Runs with late taps, and what a refit costs: the two short tables beside `estimator_table`."""

import os
import subprocess
import sys
import time
from dataclasses import replace
from functools import partial

import numpy as np

from core.bench.readings import Readings
from core.cooling.estimator import fit_cooling
from core.cooling.simulator import Hand
from tests.bench.rivals import lmfit_exponential
from tests.bench.scenarios import SCENARIOS

BENCH = next(one for one in SCENARIOS if one.name == "1 °C, 0.5 s")
FINE = next(one for one in SCENARIOS if one.name.startswith("0.1 °C"))
LATE = 3
TAPS = 16  # taps in a row that are timed: two searches for the start are among them


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


def _spent_ms(work):
    begin = time.perf_counter()
    work()
    return 1e3 * (time.perf_counter() - begin)


def _times_of(scenario, readings, rounds):
    """The refits after each of the last taps, as a run asks for them, each from the fit before; beside each, in turn,
    a fit that begins with nothing and one lmfit fit."""
    setup, air_C = scenario.setup, scenario.setup.air.temperature_C
    spent = []
    for _ in range(rounds):
        fit = None
        for count in range(len(readings) - TAPS, len(readings) + 1):
            part = Readings(readings.time_s[:count], readings.reading_C[:count])
            begin = time.perf_counter()
            fit = fit_cooling(part, setup, warm=fit)
            warm_ms = 1e3 * (time.perf_counter() - begin)
            time_s, shown = np.array(part.time_s), np.array(part.reading_C)
            lmfit_ms = _spent_ms(partial(lmfit_exponential, time_s, shown, air_C))
            if count > len(readings) - TAPS:
                spent.append((warm_ms, _spent_ms(partial(fit_cooling, part, setup)), lmfit_ms))
    warm, cold, lmfit = np.percentile(spent, [50, 99], axis=0).T
    print(f"{len(readings)} readings, ms (median, 99 %): warm refit {warm[0]:.2f}, {warm[1]:.1f}; cold {cold[0]:.1f}, "
          f"{cold[1]:.1f}; one lmfit fit {lmfit[0]:.2f}, {lmfit[1]:.1f}; warm / lmfit {warm[0] / lmfit[0]:.2f}",
          flush=True)  # fmt: skip


def time_table(rounds=12):
    """A warm refit beside one lmfit fit of a plain exponential, with about 60 and about 400 readings."""
    whole = BENCH.run(1)
    _times_of(BENCH, Readings(whole.time_s[:57], whole.reading_C[:57]), rounds)
    whole = replace(FINE, h_W_m2K=FINE.h_W_m2K / 2).run(1)
    _times_of(FINE, Readings(whole.time_s[:401], whole.reading_C[:401]), rounds)


def memory_line():
    """Peak memory of one `fit` as a whole process."""
    folder = "core/demo/session"
    child = subprocess.Popen([sys.executable, "-m", "core", "fit", folder], stdout=subprocess.DEVNULL)
    _, status, used = os.wait4(child.pid, 0)
    print(f"peak memory of `python -m core fit {folder}`: {used.ru_maxrss / 1024:.0f} MiB (status {status})")
