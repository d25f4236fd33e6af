"""What a person at a real bench would have recorded: a body that cools, a display that rounds, a hand that taps.

For rehearsals, the demo session and the tests. The physics here is integrated by its own small steps and shares no
formula with the estimator, so that the one can be held against the other."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field
from math import exp, log

import numpy as np
from numpy.typing import NDArray

from core.bench.body import thermal_body
from core.bench.readings import Readings
from core.bench.setup import Setup
from core.cooling.conducting_body import Face, Outside, conducting_course
from core.cooling.finite_volume import MIDDLE_C, decay_in

Array = NDArray[np.float64]

STEPS_PER_TIME_CONSTANT = 250
CONDUCTING = 0.03  # Biot number (half thickness) above which all modes of conduction are followed
DOUBLED_AFTER_s = 0.15
STILL_AIR_SHARE = 0.12  # of the forced coefficient, before the fan has run up


@dataclass(frozen=True, slots=True)
class Truth:
    """A bench as it really is, which may differ from the set-up that a person wrote.

    `h_W_m2K` is the coefficient at the velocity before the run; while the velocity creeps by `creep_rel` over the
    run, h follows with the power `exponent`. In a still-air run it is that of natural convection at the start, and
    goes with θ^(1/4), unless `natural_W_m2K` gives it for body and air [°C]. The fan runs up with the time constant
    `fan_run_up_s` after `fan_late_s`. `thermometer_offset_K` is how much the body's thermometer reads above the
    air's. The display's renewals come `unsteady_s` (standard deviation) off their time."""

    setup: Setup
    h_W_m2K: float
    start_C: float = 90.0
    end_C: float = 33.0
    creep_rel: float = 0.0
    exponent: float = 0.6
    fan_run_up_s: float = 0.0
    fan_late_s: float = 0.0
    thermometer_offset_K: float = 0.0
    natural_W_m2K: Callable[[float, float], float] | None = None
    unsteady_s: float = 0.0


@dataclass(frozen=True, slots=True)
class Course:
    """The temperature of the sensor over time, on an even grid with cubic interpolation between."""

    step_s: float
    temperature_C: Array
    rate_K_s: Array

    @property
    def length_s(self) -> float:
        """How long the course is known."""
        return self.step_s * (len(self.temperature_C) - 1)

    def at(self, time_s: Array) -> Array:
        """Temperature [°C] at times [s]; before 0 it is that at 0."""
        place = np.clip(time_s / self.step_s, 0.0, len(self.temperature_C) - 1.000001)
        k = place.astype(np.intp)
        s = place - k
        r = 1.0 - s
        v, d = self.temperature_C, self.rate_K_s * self.step_s
        result: Array = (
            v[k] * (1 + 2 * s) * r * r + v[k + 1] * (3 - 2 * s) * s * s + s * r * (d[k] * r - d[k + 1] * s)
        )
        return result


def _pace(truth: Truth) -> tuple[float, float, float]:
    """Whole coefficient [W/(m²·K)], the share of it that conduction inside leaves, time constant [s]."""
    body = thermal_body(truth.setup.body)
    air_C = truth.setup.air.temperature_C
    whole = _whole_W_m2K(truth, body.area_m2, air_C + 0.45 * (truth.start_C - air_C))
    capacity = body.capacity_J_K(MIDDLE_C)
    tau = 1.0 / float(decay_in(truth.setup.body, body, whole).rate_s[0])
    return whole, capacity / (tau * whole * body.area_m2), tau


def planned_s(truth: Truth) -> float:
    """About how long the cooling takes [s]: the time in which air and velocity go all their way."""
    return _length_s(truth, _pace(truth)[2])


def _length_s(truth: Truth, tau_s: float) -> float:
    air = truth.setup.air.temperature_C
    return tau_s * log(max(truth.start_C - air, 1.0) / max(truth.end_C - air, 0.5)) + truth.fan_late_s


def cool(truth: Truth) -> Course:
    """The course of a truth from the start to the end temperature.

    Runge–Kutta of fourth order for a body at one temperature, finite volumes for one with differences inside."""
    setup = truth.setup
    body = thermal_body(setup.body)
    area, lag = body.area_m2, setup.thermometer.lag_s
    whole, inside, tau = _pace(truth)
    length = _length_s(truth, tau)
    outside = _outside(truth, area, length)
    if whole * body.half_thickness_m / body.conductivity_W_mK > CONDUCTING:
        step, shown = conducting_course(setup.body, body, outside, truth.start_C, truth.end_C, lag, tau)
        return Course(step, shown + truth.thermometer_offset_K, np.gradient(shown, step, edge_order=2))

    def rate(time_s: float, body_C: float, sensor_C: float) -> tuple[float, float]:
        watts = outside.face_at(time_s, body_C).loss_W_m2(body_C) * area
        own = -inside * watts / body.capacity_J_K(body_C)
        return own, (body_C - sensor_C) / lag if lag > 0.0 else own

    step = min(tau / STEPS_PER_TIME_CONSTANT, lag / 5.0 if lag > 0.0 else 1e9)
    body_C = sensor_C = truth.start_C
    time = 0.0
    read, rates = [sensor_C], [rate(0.0, body_C, sensor_C)[1]]
    while sensor_C > truth.end_C - 0.5 and time < 3.0 * length + 30.0:
        a, p = rate(time, body_C, sensor_C)
        b, q = rate(time + step / 2, body_C + step / 2 * a, sensor_C + step / 2 * p)
        c, r = rate(time + step / 2, body_C + step / 2 * b, sensor_C + step / 2 * q)
        d, s = rate(time + step, body_C + step * c, sensor_C + step * r)
        body_C += step / 6 * (a + 2 * b + 2 * c + d)
        sensor_C += step / 6 * (p + 2 * q + 2 * r + s)
        time += step
        read.append(sensor_C)
        rates.append(rate(time, body_C, sensor_C)[1])
    return Course(step, np.array(read) + truth.thermometer_offset_K, np.array(rates))


def _whole_W_m2K(truth: Truth, area_m2: float, middle_C: float) -> float:
    """Convection, stem and radiation together, over the excess above the air, about half-way."""
    air = truth.setup.air
    walls = air.temperature_C if air.surroundings_C is None else air.surroundings_C
    radiated = Face(0.0, 0.0, walls, truth.setup.body.emissivity).loss_W_m2(middle_C)
    stem = truth.setup.body.stem_loss_W_K / area_m2
    return truth.h_W_m2K + stem + radiated / (middle_C - air.temperature_C)


def _outside(truth: Truth, area_m2: float, length_s: float) -> Outside:
    """What the body stands in over a run of about this length."""
    setup = truth.setup
    air = setup.air
    drift = 0.0 if air.temperature_end_C is None else air.temperature_end_C - air.temperature_C

    def coefficient(time_s: float, body_C: float, air_C: float) -> float:
        if setup.recording.kind == "still-air":
            if truth.natural_W_m2K is not None:
                return truth.natural_W_m2K(body_C, air_C)
            return float(truth.h_W_m2K * max((body_C - air_C) / (truth.start_C - air.temperature_C), 0.0) ** 0.25)
        creep = (1.0 + truth.creep_rel * min(time_s / length_s, 1.0)) ** truth.exponent
        since = time_s - truth.fan_late_s
        share = 1.0
        if since < 0.0:
            share = STILL_AIR_SHARE
        elif truth.fan_run_up_s > 0.0:
            share = 1.0 - (1.0 - STILL_AIR_SHARE) * exp(-since / truth.fan_run_up_s)
        return float(truth.h_W_m2K * creep * share)

    return Outside(
        coefficient_W_m2K=coefficient,
        air_C=lambda time_s: air.temperature_C + drift * min(time_s / length_s, 1.5),
        lost_W_m2K=setup.body.stem_loss_W_K / area_m2,
        walls_C=air.temperature_C if air.surroundings_C is None else air.surroundings_C,
        emissivity=setup.body.emissivity,
    )


@dataclass(frozen=True, slots=True)
class Display:
    """A digital display: renewed every `refresh_s` from `phase_s` on, each time with its own noise."""

    course: Course
    resolution_K: float
    refresh_s: float
    phase_s: float
    rounding: str
    noise_K: float = 0.0
    seed: int = 0
    unsteady_s: float = 0.0

    def renewal_s(self, count: Array) -> Array:
        """When renewals come [s], by their count from `phase_s` on; unsteady ones by a lot that the seed holds."""
        time = self.phase_s + count * self.refresh_s
        if self.unsteady_s == 0.0:
            return time
        lot = np.random.default_rng((self.seed, 3)).normal(size=int(self.course.length_s / self.refresh_s) + 4)
        off = self.unsteady_s * lot[np.clip(count.astype(np.intp) + 1, 0, len(lot) - 1)]
        result: Array = time + np.clip(off, -self.refresh_s / 3.0, self.refresh_s / 3.0)
        return result

    def shown(self, time_s: float) -> float:
        """The number on the display at a moment [s from the start of the cooling]."""
        return float(self.shown_at(np.array([time_s]))[0])

    def shown_at(self, time_s: Array) -> Array:
        """The numbers on the display at moments [s], same shape."""
        if self.refresh_s == 0.0:
            renewal, count = time_s, np.zeros(len(time_s))
        else:
            count = np.floor((time_s - self.phase_s) / self.refresh_s)
            count = count + (self.renewal_s(count + 1.0) <= time_s) - (self.renewal_s(count) > time_s)
            renewal = self.renewal_s(count)
        value = self.course.at(renewal)
        if self.noise_K > 0.0:
            value = value + self.noise_K * np.array(
                [np.random.default_rng((self.seed, int(k) + 1000)).normal() for k in count]
            )
        place = value / self.resolution_K
        whole = np.floor(place + 0.5) if self.rounding == "nearest" else np.floor(place + 1e-9)
        return np.round(whole * self.resolution_K, 6)

    def changes(self) -> tuple[Array, Array]:
        """Every moment [s] at which the number becomes another one, and that number; the first is at 0."""
        pace = self.refresh_s if self.refresh_s > 0.0 else 0.01
        first = self.phase_s if self.refresh_s > 0.0 else 0.0
        renewals = np.arange(first, self.course.length_s, pace)
        if self.unsteady_s > 0.0:
            renewals = self.renewal_s(np.arange(float(len(renewals))))
        times = np.concatenate([[0.0], renewals])
        times = times[np.concatenate([[True], np.diff(times) > 0.0])]
        numbers = self.shown_at(times + 1e-9)
        keep = np.concatenate([[True], np.diff(numbers) != 0.0])
        return times[keep], numbers[keep]


@dataclass(frozen=True, slots=True)
class Hand:
    """The person: mean delay and scatter of a tap [s], and faults, by the count of the change or beat.

    `late` maps a tap to how many seconds it comes too late; `doubled` taps are made twice, which counts the next
    number too, so that the person lets that change pass; `missed` changes are not tapped, and the next tap is two
    steps down; `slips` maps a typed number to how many steps it is off."""

    lag_s: float = 0.0
    jitter_s: float = 0.05
    late: dict[int, float] = field(default_factory=dict)
    slips: dict[int, int] = field(default_factory=dict)
    doubled: frozenset[int] = frozenset()
    missed: frozenset[int] = frozenset()


def display_of(truth: Truth, seed: int) -> Display:
    """The display of a bench with a phase drawn by lot."""
    meter = truth.setup.thermometer
    phase = float(np.random.default_rng(seed).uniform(0.0, max(meter.refresh_s, 1e-12)))
    return Display(
        cool(truth),
        meter.resolution_K,
        meter.refresh_s,
        phase,
        meter.rounding,
        meter.noise_K,
        seed,
        truth.unsteady_s,
    )


def record(display: Display, hand: Hand, truth: Truth, seed: int) -> Readings:
    """What the person records of a display, in the mode of the bench, down to the end temperature.

    A number that a noisy meter shows once more is not tapped again."""
    by_mode: dict[str, Callable[[Display, Hand, Truth, int], Readings]] = {"change": _tapped, "beat": _on_beats}
    return by_mode[truth.setup.recording.mode](display, hand, truth, seed)


def simulate(truth: Truth, seed: int, hand: Hand | None = None) -> Readings:
    """A whole run: course, display and hand in one."""
    if hand is None:
        recording = truth.setup.recording
        hand = Hand(recording.tap_lag_s, recording.tap_jitter_s)
    return record(display_of(truth, seed), hand, truth, seed)


def _tapped(display: Display, hand: Hand, truth: Truth, seed: int) -> Readings:
    rng = np.random.default_rng((seed, 1))
    times, numbers = display.changes()
    lowest = np.concatenate([[np.inf], np.minimum.accumulate(numbers)[:-1]])
    inside = (numbers >= truth.end_C) & (numbers < lowest)
    times, numbers = times[inside], numbers[inside]
    delays = np.maximum(hand.lag_s + hand.jitter_s * rng.normal(size=len(times)), -0.9 * display.refresh_s - 0.05)
    taps = times + delays
    for count, late in hand.late.items():
        taps[count] += late
    taps[0] = 0.0
    for count in sorted(hand.doubled):
        taps[count + 1] = taps[count] + DOUBLED_AFTER_s
    kept = [count for count in range(len(taps)) if count not in hand.missed]
    taps, numbers = taps[kept], numbers[kept]
    for k in range(1, len(taps)):
        taps[k] = max(taps[k], taps[k - 1] + 1e-3)
    return Readings(tuple(float(t) for t in taps), tuple(float(n) for n in numbers))


def _on_beats(display: Display, hand: Hand, truth: Truth, seed: int) -> Readings:
    beats = np.arange(0.0, display.course.length_s, truth.setup.recording.beat_s)
    numbers = display.shown_at(beats)
    inside = numbers >= truth.end_C
    beats, numbers = beats[inside], numbers[inside]
    for count, steps in hand.slips.items():
        numbers[count] += steps * display.resolution_K
    return Readings(tuple(float(t) for t in beats), tuple(float(n) for n in np.round(numbers, 6)))
