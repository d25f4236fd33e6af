"""The simulated bench: physics against other ways to work it out, the display and the hand as they are told."""

from dataclasses import replace
from functools import cache
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.integrate import solve_ivp

from core.bench.body import thermal_body
from core.bench.setup import Body, Flow, Recording, Setup, Surrounding, Thermometer
from core.cooling.finite_volume import decay_in
from core.cooling.simulator import Display, Hand, Truth, cool, display_of, planned_s, simulate

ROD = Body("cylinder", diameter_m=0.016, length_m=0.11, material="brass", emissivity=0.4, stem_loss_W_K=0.01)
BENCH = Setup(
    ROD,
    Thermometer(1.0, refresh_s=0.5, lag_s=2.0),
    Recording("change"),
    Surrounding(23.0, temperature_end_C=25.0, surroundings_C=19.0),
    Flow(velocity_m_s=8.0),
)
EVERYTHING = Truth(BENCH, 60.0, creep_rel=-0.1, exponent=0.6, fan_late_s=5.0, fan_run_up_s=3.0)


length_s = cache(planned_s)


def outside(truth, t):
    """Air temperature and coefficient at a time, written out once more."""
    air, share = truth.setup.air, min(t / length_s(truth), 1.0)
    at = air.temperature_C + (air.temperature_end_C - air.temperature_C) * min(t / length_s(truth), 1.5)
    run_up = 0.12 if t < truth.fan_late_s else 1.0 - 0.88 * np.exp(-(t - truth.fan_late_s) / truth.fan_run_up_s)
    return at, truth.h_W_m2K * run_up * (1.0 + truth.creep_rel * share) ** truth.exponent


def loss_W_m2(truth, t, face_C):
    body, (air_C, h) = truth.setup.body, outside(truth, t)
    stem = body.stem_loss_W_K / thermal_body(body).area_m2
    fourth = (face_C + 273.15) ** 4 - (truth.setup.air.surroundings_C + 273.15) ** 4
    return (h + stem) * (face_C - air_C) + 5.670374419e-8 * body.emissivity * fourth


def by_library(truth, rings, times):
    """The same bench by SciPy's stiff integrator over rings of a long cylinder, one of them for a lumped body."""
    body, lag = thermal_body(truth.setup.body), truth.setup.thermometer.lag_s
    edges = body.half_thickness_m * np.linspace(0.0, 1.0, rings + 1)
    middles, volumes = (edges[1:] + edges[:-1]) / 2, (edges[1:] ** 2 - edges[:-1] ** 2) / 2
    k = body.conductivity_W_mK
    skin = (edges[-1] - middles[-1]) / k if rings > 1 else 0.0

    def rate(t, state):
        ring, sensor = state[:-1], state[-1]
        flow = np.zeros(rings + 1)
        flow[1:-1] = k * edges[1:-1] * (ring[:-1] - ring[1:]) / np.diff(middles)
        face = ring[-1]
        for _ in range(4):
            face = ring[-1] - skin * loss_W_m2(truth, t, face)
        flow[-1] = edges[-1] * loss_W_m2(truth, t, face)
        heat = body.density_kg_m3 * np.array([body.specific_heat_J_kgK(one) for one in ring])
        return [*((flow[:-1] - flow[1:]) / (volumes * heat)), (ring[0] - sensor) / lag]

    first = [truth.start_C] * (rings + 1)
    return solve_ivp(rate, (0.0, times[-1]), first, "BDF", times, rtol=1e-7, atol=1e-7, max_step=2.0).y[-1]


@pytest.mark.parametrize(("conductivity", "rings"), [(500.0, 1), (4.0, 50)], ids=["lumped", "conducting"])
def test_a_body_cools_as_a_library_integrates_it(conductivity, rings):
    """Radiation to colder walls, stem, drifting air, creeping velocity, a late fan, c(T) and a lagging sensor at
    once. (A lumped course is slowed by the small difference that conduction makes even then: 0.1 %.)"""
    truth = replace(EVERYTHING, setup=replace(BENCH, body=replace(ROD, conductivity_W_mK=conductivity)))
    course = cool(truth)
    times = np.linspace(0.0, 0.95 * course.length_s, 50)
    assert course.at(times) == pytest.approx(by_library(truth, rings, times), abs=0.03)


@pytest.mark.parametrize(
    "body",
    [
        Body("sphere", diameter_m=0.04, exposed="all"),
        Body("cylinder", diameter_m=0.03, length_m=0.05, exposed="side"),
        Body("cylinder", diameter_m=0.03, length_m=0.05, exposed="side+end", axial_offset_m=-0.01),
        Body("cylinder", diameter_m=0.03, length_m=0.05, exposed="all", position="surface"),
        Body("block", side_a_m=0.03, side_b_m=0.02, side_c_m=0.05, exposed="all", axial_offset_m=0.01),
    ],
    ids=lambda body: f"{body.shape} {body.exposed} {body.position}",
)
def test_in_steady_air_a_conducting_body_decays_by_its_modes(body):
    body = replace(body, density_kg_m3=1400.0, heat_capacity_J_kgK=1200.0, conductivity_W_mK=2.0, emissivity=0.0)
    truth = Truth(replace(BENCH, body=body, thermometer=Thermometer(1.0), air=Surrounding(23.0)), 40.0)
    course = cool(truth)
    times = np.linspace(0.1, 0.98, 50) * course.length_s
    steady = 23.0 + 67.0 * decay_in(body, thermal_body(body), 40.0).at(times)
    assert course.at(times) == pytest.approx(steady, abs=0.01)


def test_still_air_follows_a_law_that_is_handed_in():
    still = replace(BENCH, recording=Recording("change", kind="still-air"), air=Surrounding(23.0))
    given_law = Truth(still, 8.0, natural_W_m2K=lambda body_C, air_C: 8.0 * (max(body_C - air_C, 0.0) / 67.0) ** 0.25)
    times = np.linspace(0.0, 600.0, 30)
    assert cool(given_law).at(times) == pytest.approx(cool(Truth(still, 8.0)).at(times), abs=1e-9)


EVEN = cool(Truth(replace(BENCH, thermometer=Thermometer(1.0)), 60.0))


@settings(max_examples=40, deadline=None)
@given(
    st.sampled_from([1.0, 0.5, 0.1]), st.floats(0.1, 2.5), st.floats(0.0, 1.0), st.sampled_from(["nearest", "down"]),
    st.floats(0.0, 0.2),
)  # fmt: skip
def test_a_display_shows_the_rounded_temperature_of_its_last_renewal(step, refresh, share, rounding, noise):
    display = Display(EVEN, step, refresh, share * refresh, rounding, noise, seed=5)
    for time in (0.3, 7.77, 41.0):
        shown = display.shown(time)
        assert shown == display.shown(time)
        assert shown / step == pytest.approx(round(shown / step), abs=1e-6)
        oldest, newest = EVEN.at(np.array([max(time - refresh, 0.0), time]))
        slack = step / 2 + 5 * noise + 1e-6
        off = step / 2 if rounding == "down" else 0.0
        assert newest - slack <= shown + off <= oldest + slack


def test_between_two_changes_the_number_stands():
    display = display_of(Truth(BENCH, 60.0), seed=3)
    times, numbers = display.changes()
    for (from_s, to_s), number in zip(pairwise(times), numbers[:-1], strict=True):
        assert set(display.shown_at(np.linspace(from_s + 1e-6, to_s - 1e-6, 7))) == {number}


@pytest.mark.parametrize("unsteady_s", [0.0, 0.02, 0.1])
def test_an_unsteady_display_renews_itself_off_its_beat_by_that_much(unsteady_s):
    """Moments at which a fine display changes lie about the beat, and it stands still between them."""
    fine = replace(BENCH, thermometer=Thermometer(0.01, refresh_s=1.0))
    display = display_of(Truth(fine, 60.0, unsteady_s=unsteady_s), seed=3)
    times, numbers = display.changes()
    off = (times[1:] - display.phase_s + 0.5) % 1.0 - 0.5
    assert len(off) > 150
    assert np.std(off) == pytest.approx(unsteady_s, rel=0.15, abs=1e-9)
    for (from_s, to_s), number in zip(pairwise(times), numbers[:-1], strict=True):
        assert set(display.shown_at(np.linspace(from_s + 1e-6, to_s - 1e-6, 5))) == {number}


def test_the_same_seed_gives_the_same_run_and_another_seed_another():
    truth = Truth(BENCH, 60.0)
    assert simulate(truth, 4) == simulate(truth, 4) != simulate(truth, 5)


def test_taps_follow_the_changes_by_the_hands_delay():
    truth = Truth(BENCH, 60.0)
    readings = simulate(truth, 8, Hand(lag_s=0.25, jitter_s=0.04))
    times, numbers = display_of(truth, 8).changes()
    first = dict(zip(numbers[::-1], times[::-1], strict=True))
    delays = [t - first[n] for t, n in zip(readings.time_s[1:], readings.reading_C[1:], strict=True)]
    assert np.mean(delays) == pytest.approx(0.25, abs=0.02)
    assert np.std(delays) == pytest.approx(0.04, abs=0.015)
    assert readings.time_s[0] == 0.0


def test_late_doubled_and_missed_taps_are_where_they_were_put():
    truth = Truth(BENCH, 60.0)
    clean = simulate(truth, 8)
    hand = Hand(late={5: 2.0}, doubled=frozenset({10}), missed=frozenset({20}))
    faulty = simulate(truth, 8, hand)
    assert faulty.time_s[5] == pytest.approx(clean.time_s[5] + 2.0)
    assert faulty.time_s[11] == pytest.approx(clean.time_s[10] + 0.15)
    assert faulty.reading_C[:20] == clean.reading_C[:20]
    assert faulty.reading_C[19] - faulty.reading_C[20] == 2.0
    assert len(faulty) == len(clean) - 1


def test_a_flickering_number_is_tapped_once():
    noisy = replace(BENCH, thermometer=Thermometer(0.1, refresh_s=0.5, noise_K=0.08))
    readings = simulate(Truth(noisy, 20.0), 2)
    assert np.all(np.diff(readings.reading_C) < 0.0)


def test_slips_of_typed_numbers_are_steps_of_the_display():
    beats = replace(BENCH, recording=Recording("beat", beat_s=5.0))
    clean, slipped = (simulate(Truth(beats, 60.0), 1, hand) for hand in (Hand(), Hand(slips={3: -1})))
    assert slipped.reading_C[3] == clean.reading_C[3] - 1.0
    assert slipped.reading_C[:3] + slipped.reading_C[4:] == clean.reading_C[:3] + clean.reading_C[4:]
