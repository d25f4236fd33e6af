"""The demo session, made by the project's own simulator with a seed: nobody measured it.

A small maker of fruit-drying cabinets wants to know how fast its tube bank warms the air. A brass rod stands in
the third of five staggered rows; four airspeeds, the second of them twice, a run in which the damper creeps, and
one with an aluminium rod. The true law of this invented bank, Nu = C·Re^m·Pr^(1/3) with the values below, is
recorded with each run."""

from __future__ import annotations

from dataclasses import dataclass, replace
from pathlib import Path

from core.bench.air import air_properties
from core.bench.readings import Readings
from core.bench.setup import Body, Flow, Recording, Setup, Surrounding, Thermometer
from core.convection.flow import velocity_at_body
from core.cooling.simulator import Hand, Truth, simulate
from core.handover.export import export_session
from core.handover.session import ExportRun, ExportSession
from core.judgement.answer import Answer
from core.judgement.judge import judge

FOLDER = Path(__file__).with_name("session")
TITLE = "Drying cabinet bench (invented)"
TRUE_C, TRUE_M = 0.52, 0.56
SEED = 20260
NOTE = "Invented: made by the simulator, measured by nobody; seed {seed}, true law Nu = {C}·Re^{m}·Pr^(1/3)."
HAND = Hand(lag_s=0.23, jitter_s=0.05)

BRASS = Body(shape="cylinder", diameter_m=0.016, length_m=0.110, material="brass", mass_kg=0.1874, emissivity=0.06)
ALUMINIUM = replace(BRASS, material="aluminium 6082", mass_kg=0.0597, emissivity=0.07)

BENCH = Setup(
    body=BRASS,
    thermometer=Thermometer(resolution_K=1.0, refresh_s=0.5, accuracy_K=0.1),
    recording=Recording(mode="change", tap_lag_s=0.22, tap_jitter_s=0.05, tap_lag_u_s=0.03),
    air=Surrounding(temperature_C=22.6, temperature_end_C=22.8, pressure_Pa=100200.0, relative_humidity=0.45),
    flow=Flow(
        velocity_m_s=8.0,
        velocity_u_m_s=0.1,
        duct_height_m=0.15,
        duct_width_m=0.15,
        arrangement="staggered",
        pitch_transverse_m=0.030,
        pitch_longitudinal_m=0.026,
        row=3,
        rows=5,
    ),
)

RUNS = (
    # name, body, velocity before and after [m/s], wall time of an invented day
    ("Brass, damper at 12", BRASS, 12.1, 12.0, "2026-03-10T09:12:00+01:00"),
    ("Brass, damper at 8", BRASS, 8.2, 8.1, "2026-03-10T09:41:00+01:00"),
    ("Brass, damper at 8 again", BRASS, 8.1, 8.1, "2026-03-10T10:08:00+01:00"),
    ("Brass, damper at 5", BRASS, 5.6, 5.6, "2026-03-10T10:37:00+01:00"),
    ("Brass, damper at 3", BRASS, 3.9, 3.9, "2026-03-10T11:10:00+01:00"),
    ("Brass, damper at 5, creeping", BRASS, 5.6, 5.2, "2026-03-10T11:34:00+01:00"),
    ("Aluminium, damper at 8", ALUMINIUM, 8.1, 8.1, "2026-03-10T11:58:00+01:00"),
)


@dataclass(frozen=True, slots=True)
class DemoRun:
    """One invented run: what was recorded, and the truth behind it."""

    name: str
    setup: Setup
    readings: Readings
    true_h_W_m2K: float
    seed: int
    recorded_at: str


def true_h_W_m2K(setup: Setup) -> float:
    """h of the invented bank by its own law, at a film temperature of 41 °C."""
    air = air_properties(41.0, setup.air.pressure_Pa)
    diameter = setup.body.diameter_m or 0.0
    reynolds = velocity_at_body(setup) * diameter / air.kinematic_viscosity_m2_s
    nusselt = TRUE_C * reynolds**TRUE_M * air.prandtl ** (1 / 3)
    return float(nusselt * air.conductivity_W_mK / diameter)


def demo_runs() -> tuple[DemoRun, ...]:
    """The runs of the demo session, the same at every call."""
    runs = []
    for count, (name, body, before, after, wall_time) in enumerate(RUNS):
        flow = replace(BENCH.flow, velocity_m_s=before, velocity_end_m_s=after)
        setup = replace(BENCH, body=body, flow=flow)
        h = true_h_W_m2K(setup)
        truth = Truth(setup, h, start_C=91.3, creep_rel=after / before - 1.0, exponent=TRUE_M)
        seed = SEED + count
        runs.append(DemoRun(name, setup, simulate(truth, seed, HAND), h, seed, wall_time))
    return tuple(runs)


def demo_session() -> ExportSession:
    """The demo session with its answers, as an export holds it."""
    answers: list[Answer] = []
    runs: list[ExportRun] = []
    for count, run in enumerate(demo_runs(), 1):
        answer = judge(run.readings, run.setup, earlier=tuple(answers))
        answers.append(answer)
        runs.append(
            ExportRun(
                run=str(count),
                kind="rehearsal",
                setup=run.setup,
                readings=run.readings,
                name=run.name,
                note=NOTE.format(seed=run.seed, C=TRUE_C, m=TRUE_M),
                invented=True,
                recorded_at=run.recorded_at,
                stamp_source="simulator",
                answer=answer,
                true_h_W_m2K=run.true_h_W_m2K,
            )
        )
    return ExportSession(TITLE, tuple(runs))


def write_demo(folder: Path = FOLDER) -> None:
    """Write the demo session as an exported folder."""
    export_session(demo_session(), folder)
