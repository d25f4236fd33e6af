"""Runs for the tests of the commands, from the core's own simulator: a brass rod at several airspeeds."""

from dataclasses import replace

from core.bench.setup import Body, Flow, Recording, Setup, Surrounding, Thermometer
from core.cooling.simulator import Truth, simulate
from core.handover.session import ExportRun, ExportSession


def setup_for(velocity_m_s, mode="change"):
    """The bench at one speed."""
    return Setup(
        Body(shape="cylinder", diameter_m=0.016, length_m=0.11, material="brass", emissivity=0.1),
        Thermometer(resolution_K=1.0, refresh_s=0.5, accuracy_K=0.1),
        Recording(mode=mode, tap_jitter_s=0.05),
        Surrounding(temperature_C=23.0, temperature_end_C=23.0),
        Flow(velocity_m_s=velocity_m_s, velocity_end_m_s=velocity_m_s, velocity_u_m_s=0.1),
    )


def run_for(name, velocity_m_s, seed, mode="change", **changes):
    """A run at one speed, h by a power of the speed."""
    setup = setup_for(velocity_m_s, mode)
    h = 85.0 * (velocity_m_s / 8.0) ** 0.6
    run = ExportRun(
        name,
        "measured",
        setup,
        simulate(Truth(setup, h), seed),
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
