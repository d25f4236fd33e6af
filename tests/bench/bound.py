"""What no unbiased estimator beats: the Cramér–Rao bound of the observation model, computed numerically.

The model of one tap: the renewal that brings the new number lies evenly in [lo, hi), lo the crossing into its bin,
hi the earlier of the crossing out of the old bin one refresh later and the crossing out of the new one; the tap
adds its normal scatter. Of one beat: the renewal lies evenly within one refresh before it, the temperature then in
the bin shown, smoothed by the meter's noise. Courses and their derivatives come from the simulator's own steps;
the information is the mean over runs of the summed squares of the scores, and the measured air adds its own."""

from dataclasses import replace

import numpy as np
from scipy.stats import norm

from core.cooling.simulator import cool

STEPS = (1e-3, 0.02, 0.02)  # ln h, start [K], asymptote [K]


class Courses:
    """Temperatures, crossings and their derivatives by ln h, start and asymptote for one truth."""

    def __init__(self, truth):
        self.middle = cool(truth)
        self.around = [(cool(self._moved(truth, k, step)), cool(self._moved(truth, k, -step)))
                       for k, step in enumerate(STEPS)]  # fmt: skip

    @staticmethod
    def _moved(truth, k, step):
        if k == 0:
            return replace(truth, h_W_m2K=truth.h_W_m2K * np.exp(step))
        if k == 1:
            return replace(truth, start_C=truth.start_C + step)
        air = truth.setup.air
        end = None if air.temperature_end_C is None else air.temperature_end_C + step
        return replace(truth, setup=replace(truth.setup, air=replace(
            air, temperature_C=air.temperature_C + step, temperature_end_C=end)))  # fmt: skip

    def temperature(self, time):
        slope = [(up.at(time) - down.at(time)) / (2 * step)
                 for (up, down), step in zip(self.around, STEPS, strict=True)]  # fmt: skip
        return self.middle.at(time), np.stack(slope, axis=-1)

    def rate(self, time):
        return (self.middle.at(time + 1e-3) - self.middle.at(time - 1e-3)) / 2e-3

    def crossing(self, edge):
        grid = self.middle.step_s * np.arange(len(self.middle.temperature_C))
        time = np.interp(-edge, -self.middle.temperature_C, grid)
        for _ in range(3):
            time = time - (self.middle.at(time) - edge) / self.rate(np.maximum(time, 2e-3))
        return time, -self.temperature(time)[1] / self.rate(np.maximum(time, 2e-3))[:, None]


def scores(scenario, seed):
    """The scores of one run's readings at the truth, shape (readings, 3)."""
    setup, readings = scenario.setup, scenario.run(seed)
    courses, meter = Courses(scenario.truth(seed)), setup.thermometer
    step, refresh = meter.resolution_K, meter.refresh_s
    lower = np.array(readings.reading_C) - (step / 2 if meter.rounding == "nearest" else 0.0)
    time = np.array(readings.time_s)
    if setup.recording.mode == "change":
        lo, lo_slope = courses.crossing(lower[1:] + step)
        out_old, old_slope = courses.crossing(lower[:-1])
        out_new, new_slope = courses.crossing(lower[1:])
        by_new = out_new < out_old + refresh
        hi = np.where(by_new, out_new, out_old + refresh)
        hi_slope = np.where(by_new[:, None], new_slope, old_slope)
        width, tap = setup.recording.tap_jitter_s, time[1:] - setup.recording.tap_lag_s
        into, out = (tap - lo) / width, (tap - hi) / width
        whole = np.where(into > 0, norm.sf(out) - norm.sf(into), norm.cdf(into) - norm.cdf(out))
        weight = np.stack([-norm.pdf(into), norm.pdf(out)]) / width / np.maximum(whole, 1e-12)
        return weight[0][:, None] * lo_slope + weight[1][:, None] * hi_slope
    share = (np.arange(60) + 0.5) / 60
    noise = max(meter.noise_K, 1e-3 * step)
    total = np.zeros(len(time))
    slope = np.zeros((len(time), 3))
    for delay in share * refresh:
        value, by = courses.temperature(np.maximum(time - delay, 0.0))
        up, down = (lower + step - value) / noise, (lower - value) / noise
        total += norm.cdf(up) - norm.cdf(down)
        slope += ((norm.pdf(down) - norm.pdf(up)) / noise)[:, None] * by
    return slope / np.maximum(total, 1e-12)[:, None]


def information(scenario, seeds):
    """Fisher information of ln h, start and asymptote in a run's readings, shape (3, 3)."""
    total = np.zeros((3, 3))
    for seed in seeds:
        one = scores(scenario, seed)
        total += one.T @ one
    total /= len(seeds)
    total[1, 1] += 12.0 / scenario.setup.thermometer.resolution_K**2 * (scenario.setup.recording.mode == "change")
    air_u = scenario.setup.air.temperature_u_K
    total[2, 2] += 1.0 / air_u**2 if air_u > 0.0 else 1e12
    return total


def cramer_rao_rel(scenario, seeds):
    """Smallest standard deviation of h, relative."""
    return float(np.sqrt(np.linalg.inv(information(scenario, seeds))[0, 0]))
