"""Benches for the fit, and runs on them that share no code with it."""

from __future__ import annotations

import numpy as np

from core.bench.readings import Readings
from core.bench.setup import Body, Flow, Recording, Setup, Surrounding, Thermometer

DENSITY, CAPACITY, DIAMETER = 8500.0, 380.0, 0.016
AIR_C = 23.0


def exponential_bench(mode="change", resolution_K=1.0, refresh_s=0.5, jitter_s=0.05, rounding="nearest", **air):
    """A rod without radiation and with perfect conduction, so that its cooling is one exponential."""
    body = Body("cylinder", diameter_m=DIAMETER, length_m=0.11, density_kg_m3=DENSITY,
                heat_capacity_J_kgK=CAPACITY, conductivity_W_mK=500.0, emissivity=0.0)  # fmt: skip
    return Setup(
        body,
        Thermometer(resolution_K, refresh_s=refresh_s, rounding=rounding, accuracy_K=0.0),
        Recording(mode, tap_jitter_s=jitter_s),
        Surrounding(AIR_C, **{"temperature_u_K": 0.0, **air}),
        Flow(velocity_m_s=8.0),
    )


def exponential_run(rng, setup, tau_s=60.0, first_C=90.0, last_C=33.0):
    """What a perfect person with a little jitter records of one exponential."""
    meter, recording = setup.thermometer, setup.recording
    refresh, step = meter.refresh_s, meter.resolution_K
    phase = rng.uniform(0.0, refresh)
    end = tau_s * np.log((first_C - AIR_C) / (last_C - AIR_C))

    def shown(time):
        place = (AIR_C + (first_C - AIR_C) * np.exp(-np.maximum(time, 0.0) / tau_s)) / step
        whole = np.floor(place + 0.5) if meter.rounding == "nearest" else np.floor(place)
        return np.round(whole * step, 6)

    if recording.mode == "beat":
        beats = np.arange(0.0, end, recording.beat_s)
        return Readings(tuple(beats), tuple(shown(phase + np.floor((beats - phase) / refresh) * refresh)))
    renewals = np.concatenate([[0.0], np.arange(phase, end, refresh)])
    numbers = shown(renewals)
    changed = np.flatnonzero(np.diff(numbers) != 0.0) + 1
    taps = renewals[changed] + recording.tap_lag_s + recording.tap_jitter_s * rng.normal(size=len(changed))
    taps = np.maximum.accumulate(np.maximum(taps, 1e-3)) + 1e-6 * np.arange(len(taps))
    return Readings((0.0, *taps), (numbers[0], *numbers[changed]))
