"""Sound runs and runs with one fault each, as a person at the bench would have made them.

A fault is a bench that differs from what the person wrote down, or a hand that slips; the readings come from the
simulator, the answer from `judge` with the set-up as written and one earlier sound run at the same speed."""

from collections.abc import Callable
from dataclasses import dataclass, replace
from functools import cache

import numpy as np

from core.bench.readings import Readings
from core.bench.setup import Setup
from core.cooling.simulator import Course, Display, Hand, Truth, cool, record, simulate
from core.judgement.answer import Answer
from core.judgement.judge import judge
from tests.judgement.benches import bench

H = 80.0
LAG_S = 0.22
WRITTEN = bench(
    recording={"tap_lag_s": LAG_S, "tap_lag_u_s": 0.03},
    air={"temperature_end_C": 23.1},
    flow={"velocity_end_m_s": 8.0, "velocity_u_m_s": 0.1},
)


def with_(setup: Setup, section: str, **changes) -> Setup:
    """A set-up with values of one section changed."""
    return replace(setup, **{section: replace(getattr(setup, section), **changes)})


def hand(generator, late=None) -> Hand:
    """A hand whose mean delay is known to 0.03 s."""
    return Hand(LAG_S + generator.normal(0, 0.03), 0.05, late or {})


def truth(setup: Setup, generator, **changes) -> Truth:
    """The bench as it is: h by the speed really there, the thermometers compared to 0.02 K."""
    speed = 1.0 + generator.normal(0, 0.1 / 8.0 / 2**0.5)
    fields = {"start_C": generator.uniform(88, 93), "thermometer_offset_K": generator.normal(0, 0.02)}
    return Truth(setup, **{"h_W_m2K": H * speed**0.6, **fields, **changes})


@cache
def earlier() -> Answer:
    """A sound run at the same speed, made before."""
    generator = np.random.default_rng(99)
    return judge(simulate(truth(WRITTEN, generator), 99, hand(generator)), WRITTEN)


def damper_creeps(seed, generator):
    """The velocity falls by 6 % over the run, and the person reads it again afterwards."""
    written = with_(WRITTEN, "flow", velocity_end_m_s=8.0 * 0.94)
    return written, simulate(truth(WRITTEN, generator, creep_rel=-0.06), seed, hand(generator))


def damper_creeps_unseen(seed, generator):
    """The same, not read again."""
    written = with_(WRITTEN, "flow", velocity_end_m_s=None)
    return written, simulate(truth(WRITTEN, generator, creep_rel=-0.06), seed, hand(generator))


def air_drifts(seed, generator):
    """The air warms by 2 K, and the person reads it again afterwards."""
    written = with_(WRITTEN, "air", temperature_end_C=25.0)
    return written, simulate(truth(written, generator), seed, hand(generator))


def air_drifts_unseen(seed, generator):
    """The same, not read again."""
    real = with_(WRITTEN, "air", temperature_end_C=25.0)
    written = with_(WRITTEN, "air", temperature_end_C=None)
    return written, simulate(truth(real, generator), seed, hand(generator))


def beat_set_as_change(seed, generator):
    """Readings on a beat, set as changes."""
    real = with_(WRITTEN, "recording", mode="beat")
    return WRITTEN, simulate(truth(real, generator), seed, hand(generator))


def change_set_as_beat(seed, generator):
    """Taps at changes, set as a beat."""
    written = with_(WRITTEN, "recording", mode="beat")
    return written, simulate(truth(WRITTEN, generator), seed, hand(generator))


def end_exposed(seed, generator):
    """The cover of one end has come off."""
    real = with_(WRITTEN, "body", exposed="side+end")
    return WRITTEN, simulate(truth(real, generator), seed, hand(generator))


def wrong_material(seed, generator):
    """A rod of aluminium, set as brass; it was weighed."""
    weighed = {"mass_kg": 0.0597}
    real = with_(WRITTEN, "body", material="aluminium 6082", **weighed)
    return with_(WRITTEN, "body", **weighed), simulate(truth(real, generator), seed, hand(generator))


def sensor_lags(seed, generator):
    """A sensor that lags by 4 s, set as none."""
    real = with_(WRITTEN, "thermometer", lag_s=4.0)
    return WRITTEN, simulate(truth(real, generator), seed, hand(generator))


def late_fan(seed, generator):
    """The fan is switched on 10 s after the first reading and takes 3 s to run up."""
    return WRITTEN, simulate(truth(WRITTEN, generator, fan_late_s=10.0, fan_run_up_s=3.0), seed, hand(generator))


def three_late_taps(seed, generator):
    """Three taps come 1.2 to 2.5 s late."""
    taps = generator.choice(np.arange(3, 50), 3, replace=False)
    late = {int(tap): float(generator.uniform(1.2, 2.5)) for tap in taps}
    return WRITTEN, simulate(truth(WRITTEN, generator), seed, hand(generator, late))


def rounding_wrong(seed, generator):
    """A display that cuts down, set as one that rounds to nearest."""
    real = with_(WRITTEN, "thermometer", rounding="down")
    return WRITTEN, simulate(truth(real, generator), seed, hand(generator))


def too_short(seed, generator):
    """The run ends at 60 °C."""
    return WRITTEN, simulate(truth(WRITTEN, generator, end_C=60.0), seed, hand(generator))


def dark_set_shiny(seed, generator):
    """A blackened rod, set as polished; the earlier run was made before it was blackened."""
    real = with_(WRITTEN, "body", emissivity=0.9)
    return WRITTEN, simulate(truth(real, generator), seed, hand(generator))


def blocked_inlet(seed, generator):
    """Half way down something covers a part of the inlet and the velocity falls by a quarter, unseen."""
    whole = truth(WRITTEN, generator)
    before = cool(whole)
    at = len(before.temperature_C) // 3
    after = cool(replace(whole, h_W_m2K=whole.h_W_m2K * 0.75**0.6, start_C=float(before.temperature_C[at])))
    rest = np.arange(0.0, after.length_s, before.step_s)
    temperature = np.concatenate([before.temperature_C[:at], after.at(rest)])
    course = Course(before.step_s, temperature, np.gradient(temperature, before.step_s))
    display = Display(course, 1.0, 0.5, float(generator.uniform(0, 0.5)), "nearest")
    return with_(WRITTEN, "flow", velocity_end_m_s=None), record(display, hand(generator), whole, seed)


def refresh_wrong(seed, generator):
    """A display that renews every 1.5 s, set as 0.5 s."""
    real = with_(WRITTEN, "thermometer", refresh_s=1.5)
    return WRITTEN, simulate(truth(real, generator), seed, hand(generator))


def step_wrong(seed, generator):
    """A display of 0.5 K steps, set as 1 K."""
    real = with_(WRITTEN, "thermometer", resolution_K=0.5)
    return WRITTEN, simulate(truth(real, generator), seed, hand(generator))


@dataclass(frozen=True, slots=True)
class Fault:
    """A way to make a faulty run, and the checks of which one at least should speak."""

    make: Callable[[int, np.random.Generator], tuple[Setup, Readings]]
    checks: frozenset[str]


def _fault(make, *checks) -> Fault:
    return Fault(make, frozenset(checks))


FAULTS = {
    "damper creeps 6 %, read again": _fault(damper_creeps, "airspeed drift"),
    "damper creeps 6 %, not read again": _fault(damper_creeps_unseen, "asymptote", "residual pattern"),
    "air drifts 2 K, read again": _fault(air_drifts, "air drift"),
    "air drifts 2 K, not read again": _fault(air_drifts_unseen, "asymptote", "residual pattern"),
    "beat set as change": _fault(beat_set_as_change, "recording mode"),
    "change set as beat": _fault(change_set_as_beat, "recording mode"),
    "end exposed, set covered": _fault(end_exposed, "earlier runs"),
    "aluminium set as brass": _fault(wrong_material, "material"),
    "sensor lags 4 s, set as none": _fault(sensor_lags, "start", "residual pattern"),
    "fan 10 s late": _fault(late_fan, "start"),
    "three late taps": _fault(three_late_taps, "readings in doubt"),
    "rounding set wrong": _fault(rounding_wrong, "asymptote"),
    "too short a run": _fault(too_short, "temperature span"),
    "dark surface set shiny": _fault(dark_set_shiny, "asymptote", "earlier runs", "expected h"),
    "inlet blocked half way": _fault(blocked_inlet, "residual pattern", "asymptote", "start"),
    "refresh set wrong": _fault(refresh_wrong, "display refresh"),
    "display step set wrong": _fault(step_wrong, "display step"),
}


def sound(seed: int) -> tuple[Setup, Readings]:
    """A sound run on one of many sound benches: display, rounding, mode, speed of the air and drift drawn."""
    generator = np.random.default_rng((seed, 7))
    resolution, refresh = ((1.0, 0.5), (1.0, 1.0), (1.0, 2.0), (0.5, 0.7), (0.1, 1.0))[generator.integers(5)]
    beat = generator.random() < (0.5 if resolution == 0.1 else 0.3)
    rounding = ("nearest", "down")[generator.integers(2)]
    written = with_(WRITTEN, "thermometer", resolution_K=resolution, refresh_s=refresh, rounding=rounding)
    written = with_(written, "recording", mode="beat" if beat else "change")
    written = with_(written, "air", temperature_end_C=23.0 + float(generator.uniform(-0.4, 0.4)))
    written = with_(written, "flow", velocity_end_m_s=8.0 * (1.0 + float(generator.normal(0, 0.005))))
    return written, simulate(truth(written, generator), seed, hand(generator))
