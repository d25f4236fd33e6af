"""The fit against what the readings can tell at best, and against fits that do not think of the display.

    python -m tests.bench.estimator_table [RUNS] [NAME]

prints a row a scenario, 400 runs each on two processes if left out; then late taps, times and memory. NAME picks the
scenarios that contain it, and leaves out the rest. CRB is the bound for taps taken one by one: the fit goes below it
where it hears the display's clock, which the bound does not know of. It stays above it where 60 wide intervals are too
few to reach what the bound promises in the limit of many; /u is then the measure, the error beside the spread of the
posterior, which no estimator undercuts in the mean over such runs."""

import sys
from multiprocessing import Pool

import numpy as np

from core.cooling.estimator import fit_cooling
from tests.bench.bound import information
from tests.bench.late_taps import late_table, memory_line, time_table
from tests.bench.rivals import by_curve_fit, by_lmfit, straight_line
from tests.bench.scenarios import SCENARIOS

RIVALS = (straight_line, by_curve_fit, by_lmfit)
BOUND_RUNS = 20


def one_run(task):
    """Relative error of h, its stated standard uncertainty and the rivals' errors for one run."""
    scenario = SCENARIOS[task[0]]
    readings = scenario.run(task[1])
    setup = scenario.noted(readings, task[1])
    fit = fit_cooling(readings, setup)
    h = scenario.h_W_m2K
    errors = [rival(setup, readings) / h - 1.0 for rival in RIVALS]
    starts = sum(one.cause == "start" for one in fit.left_out)
    return [fit.h_W_m2K / h - 1.0, fit.h_u_W_m2K / h, *errors, starts, len(fit.left_out) - starts, len(readings)]


def bound_of(task):
    """Fisher information of one run of a scenario."""
    return information(SCENARIOS[task[0]], [task[1]])


def rms(values):
    return float(np.sqrt(np.mean(np.square(values))))


def main(runs, wanted=""):
    places = [k for k, one in enumerate(SCENARIOS) if wanted in one.name]
    print(f"{'scenario':32}{'n':>5}{'bias %':>8}{'RMSE %':>8}{'/CRB':>6}{'/u':>6}{'cover %':>8}"
          f"{'line %':>8}{'curve_fit':>10}{'lmfit':>8}{'best/':>7}{'start':>6}{'named':>7}")  # fmt: skip
    with Pool(2) as pool:
        for place in places:
            bound = np.mean(pool.map(bound_of, [(place, seed) for seed in range(BOUND_RUNS)], 2), axis=0)
            bound = 100 * float(np.sqrt(np.linalg.inv(bound)[0, 0]))
            table = np.array(pool.map(one_run, [(place, seed) for seed in range(runs)], 10))
            error, stated = 100 * table[:, 0], 100 * table[:, 1]
            rivals = [100 * rms(table[:, 2 + k]) for k in range(len(RIVALS))]
            print(f"{SCENARIOS[place].name:32}{table[:, -1].mean():5.0f}{error.mean():8.3f}{rms(error):8.4f}"
                  f"{rms(error) / bound:6.2f}{rms(error) / rms(stated):6.2f}"
                  f"{100 * np.mean(np.abs(error) < 1.96 * stated):8.1f}"
                  f"{rivals[0]:8.3f}{rivals[1]:10.3f}{rivals[2]:8.3f}{min(rivals) / rms(error):7.1f}"
                  f"{np.mean(table[:, -3] > 0):6.3f}{table[:, -2].sum() / table[:, -1].sum():7.4f}",
                  flush=True)  # fmt: skip
        if not wanted:
            late_table(runs, pool)
    if not wanted:
        time_table()
        memory_line()


if __name__ == "__main__":
    main(int(sys.argv[1]) if len(sys.argv) > 1 else 400, *sys.argv[2:3])
