"""What a rehearsal is made of: a bench, a true h drawn by lot, and a display that falls as that h has it."""

from __future__ import annotations

import json
import random
import statistics
from dataclasses import dataclass, replace
from math import exp, log

from core.bench.setup import Body, Flow, Recording, Setup, Surrounding, Thermometer
from core.cooling.simulator import Display, cool
from core.cooling.simulator import Truth as SimulatedBench
from core.errors import BenchError
from core.judgement.expect import expect
from core.recording.events import RunOpened
from core.recording.run_state import RunState
from mobileapp.views import TruthView

LEAD_S = 5.0  # the display stands still at first, so that the person can get ready
START_C = 86.0
SPREAD = 0.25  # the true h lies within a quarter of the expected one, drawn evenly in its logarithm
END_EXCESS_K = 4.0
STRAY_S = 1.0  # a tap further than this from the middle of all delays belongs to no change
SHORT_BENCH = Setup(
    body=Body(shape="cylinder", diameter_m=0.008, length_m=0.1, material="aluminium", emissivity=0.05),
    thermometer=Thermometer(resolution_K=1.0, refresh_s=0.3, accuracy_K=0.1),
    recording=Recording(mode="change", beat_s=3.0),
    air=Surrounding(temperature_C=23.0),
    flow=Flow(velocity_m_s=10.0, duct_height_m=0.15, duct_width_m=0.15),
)


@dataclass(frozen=True, slots=True)
class Truth:
    """What only the simulator knows. `from_s` is the moment [s, monotonic clock] at which the cooling begins."""

    h_W_m2K: float
    start_C: float = START_C
    from_s: float = 0.0
    phase_s: float = 0.0


@dataclass(frozen=True, slots=True)
class Plan:
    """A rehearsal about to begin."""

    setup: Setup
    seed: int
    truth: str


@dataclass(frozen=True, slots=True)
class RehearsalDisplay:
    """The simulated display on the device's clock: it stands still until `from_s` and then falls."""

    display: Display
    from_s: float
    decimals: int
    first_to_tap_C: float

    def text(self, now_s: float) -> str:
        """What the display shows at this moment."""
        return f"{self.display.shown(now_s - self.from_s):.{self.decimals}f}"

    def changes(self) -> dict[float, float]:
        """The moment at which each number first appeared."""
        first: dict[float, float] = {}
        for time_s, shown in zip(*self.display.changes(), strict=True):
            first.setdefault(float(shown), self.from_s + float(time_s))
        return first


def plan(bench: Setup | None, mode: str, now_s: float, seed: int | None = None) -> Plan:
    """Draw a rehearsal on this bench, or on the short one."""
    seed = random.SystemRandom().randrange(1, 2**31) if seed is None else seed
    lot = random.Random(seed)
    setup = bench or SHORT_BENCH
    setup = replace(
        setup,
        recording=replace(setup.recording, mode=mode, kind="forced"),
        air=replace(setup.air, temperature_end_C=None),
        flow=replace(setup.flow, velocity_end_m_s=None),
    )
    try:
        expected = expect(setup).h_W_m2K
    except BenchError:
        expected = 80.0
    h = expected * exp(log(1 + SPREAD) * lot.uniform(-1, 1))
    refresh = setup.thermometer.refresh_s
    truth = {
        "h_W_m2K": round(h, 6),
        "start_C": START_C + lot.uniform(-0.4, 0.4),
        "from_s": now_s + LEAD_S,
        "phase_s": lot.uniform(0, refresh) if refresh else 0.0,
    }
    return Plan(setup, seed, json.dumps(truth))


def truth_of(opened: RunOpened) -> Truth | None:
    """The truth kept with a run; None for a run that was measured."""
    if not opened.truth:
        return None
    try:
        return Truth(**json.loads(opened.truth))
    except (ValueError, TypeError):
        return None


def display_of(opened: RunOpened | None, setup: Setup) -> RehearsalDisplay | None:
    """The display that belongs to a rehearsal; the same again after the app was stopped."""
    truth = truth_of(opened) if opened is not None and opened.run_kind == "rehearsal" else None
    if opened is None or truth is None:
        return None
    thermometer = setup.thermometer
    step = thermometer.resolution_K
    end_C = setup.air.temperature_C + END_EXCESS_K
    course = cool(SimulatedBench(setup, truth.h_W_m2K, truth.start_C, end_C))
    display = Display(
        course=course,
        resolution_K=step,
        refresh_s=thermometer.refresh_s,
        phase_s=truth.phase_s,
        rounding=thermometer.rounding,
        noise_K=thermometer.noise_K,
        seed=opened.seed or 0,
    )
    decimals = max(0, len(f"{step:g}".partition(".")[2]))
    return RehearsalDisplay(display, truth.from_s, decimals, round(display.shown(0.0) - step, 9))


def truth_view(state: RunState, setup: Setup) -> TruthView | None:
    """The true h, and the delay and scatter of the taps against the moments at which the display changed."""
    truth = truth_of(state.opened) if state.opened else None
    if truth is None:
        return None
    display = display_of(state.opened, setup)
    if display is None or setup.recording.mode != "change":
        return TruthView(truth.h_W_m2K, None, None, None, 0)
    changes = display.changes()
    delays = [row.stamp_s - changes[row.reading_C] for row in state.rows if row.reading_C in changes]
    if len(delays) >= 3:
        middle = statistics.median(delays)
        delays = [delay for delay in delays if abs(delay - middle) < STRAY_S]
    if len(delays) < 3:
        return TruthView(truth.h_W_m2K, None, None, None, len(delays))
    lag, jitter = statistics.fmean(delays), statistics.stdev(delays)
    return TruthView(truth.h_W_m2K, lag, jitter, jitter / len(delays) ** 0.5, len(delays))
