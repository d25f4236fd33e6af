"""A simple bench for the tests of the commands: a lumped brass rod without radiation, its display read exactly."""

from dataclasses import replace

import numpy as np

from core.bench.body import thermal_body
from core.bench.readings import Readings
from core.bench.setup import Body, Flow, Recording, Setup, Surrounding, Thermometer
from core.handover.session import ExportRun, ExportSession

AIR_C = 23.0


def setup_for(velocity_m_s, mode="change"):
    """The bench at one speed."""
    return Setup(
        Body(
            shape="cylinder", diameter_m=0.016, length_m=0.11, material="brass", emissivity=0.0, emissivity_u=0.0
        ),
        Thermometer(resolution_K=1.0, refresh_s=0.5, accuracy_K=0.1),
        Recording(mode=mode, tap_jitter_s=0.05),
        Surrounding(temperature_C=AIR_C, temperature_end_C=AIR_C),
        Flow(velocity_m_s=velocity_m_s, velocity_end_m_s=velocity_m_s, velocity_u_m_s=0.1),
    )


def readings_for(setup, h_W_m2K, seed):
    """Taps at each change of the display, or readings each 5 s, of an exponential cooling from 90.5 °C."""
    rng = np.random.default_rng(seed)
    body = thermal_body(replace(setup.body, heat_capacity_J_kgK=380.0))
    tau = body.capacity_J_K(20.0) / (h_W_m2K * body.area_m2)
    if setup.recording.mode == "beat":
        time = np.arange(0.0, tau * np.log(67.5 / 10.0), 5.0)
        shown = np.round(AIR_C + 67.5 * np.exp(-(time - rng.uniform(0, 0.5)) / tau))
        return Readings(tuple(time.tolist()), tuple(shown.tolist()))
    shown = np.arange(90.0, 32.0, -1.0)
    crossed = tau * np.log(67.5 / (shown + 0.5 - AIR_C))
    phase = rng.uniform(0, 0.5)
    renewed = phase + 0.5 * np.ceil((crossed - phase) / 0.5)
    tapped = renewed + rng.normal(0, 0.05, len(shown))
    tapped = np.round(tapped - tapped[0], 3)
    return Readings(tuple(tapped.tolist()), tuple(shown.tolist()), 0.002)


def run_for(name, velocity_m_s, seed, mode="change", **changes):
    """A run at one speed, h by a power of the speed."""
    setup = setup_for(velocity_m_s, mode)
    setup = replace(setup, body=replace(setup.body, heat_capacity_J_kgK=380.0))
    h = 80.0 * (velocity_m_s / 8.0) ** 0.6
    run = ExportRun(
        name,
        "measured",
        setup,
        readings_for(setup, h, seed),
        name=f"{velocity_m_s:g} m/s",
        invented=True,
        recorded_at=f"2026-03-02T10:{seed:02d}:00+01:00",
        stamp_source="simulated",
        true_h_W_m2K=h,
    )
    return replace(run, **changes)


def session_for(velocities_m_s):
    """A session of one run a speed."""
    runs = (run_for(f"run-{i + 1}", v, seed=i + 1) for i, v in enumerate(velocities_m_s))
    return ExportSession("drying cabinet bench", tuple(runs))
