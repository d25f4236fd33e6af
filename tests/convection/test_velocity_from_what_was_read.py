"""Velocity from a Pitot tube, a flow, several readings; before and after; at the body."""

from dataclasses import replace
from math import inf, pi, sqrt

import pytest
from hypothesis import given
from hypothesis import strategies as st

from core.bench.air import air_properties
from core.bench.setup import Body, Flow, Recording, Setup, Surrounding, Thermometer
from core.convection.flow import (
    blockage,
    blockage_of,
    drift_rel,
    mean_of,
    narrowest_velocity_m_s,
    undisturbed_velocity,
    velocity_at_body,
    velocity_before_m_s,
    velocity_from_dynamic_pressure_m_s,
    velocity_from_flow_m_s,
)
from core.errors import BadSetup, OutOfRange

ROD = Body("cylinder", diameter_m=0.016, length_m=0.11, material="brass")
BENCH = Setup(ROD, Thermometer(1.0), Recording("change"), Surrounding(23.0), Flow(velocity_m_s=8.0))


def flowing(**flow):
    return replace(BENCH, flow=Flow(**flow))


@given(st.floats(1e-6, 200.0), st.floats(0.8, 1.3), st.floats(60e3, 105e3))
def test_a_slow_pitot_reading_is_bernoullis_root(dynamic, density, pressure):
    """√(2 Δp/ρ), below it by no more than a quarter of Δp/p."""
    slow = sqrt(2.0 * dynamic / density)
    mine = velocity_from_dynamic_pressure_m_s(dynamic, density, pressure)
    assert slow * (1.0 - 0.3 * dynamic / pressure) <= mine <= slow * (1.0 + 1e-12)


def test_moist_air_reads_faster_on_a_pitot_tube():
    """Lighter air needs more speed for the same pressure: 0.6 % more at 30 °C and full humidity."""
    dry, moist = (air_properties(30.0, 1e5, rh).density_kg_m3 for rh in (0.0, 1.0))
    ratio = velocity_from_dynamic_pressure_m_s(60.0, moist, 1e5) / velocity_from_dynamic_pressure_m_s(
        60.0, dry, 1e5
    )
    assert ratio == pytest.approx(1.008, abs=1e-3)


@pytest.mark.parametrize(
    ("call", "words"),
    [
        (lambda: velocity_from_dynamic_pressure_m_s(-2.0, 1.2, 1e5), "exchange the hoses"),
        (lambda: velocity_from_dynamic_pressure_m_s(2.0, 0.0, 1e5), "above zero"),
        (lambda: velocity_from_flow_m_s(0.1, 0.0, 0.15), "height and the width"),
        (lambda: mean_of([]), "at least one reading"),
        (lambda: narrowest_velocity_m_s(8.0, 0.016, 0.016, 0.03, staggered=False), "would touch"),
        (lambda: narrowest_velocity_m_s(8.0, 0.016, 0.02, 0.01, staggered=True), "would touch"),
        (lambda: blockage("cylinder", 0.15, 0.1, 0.15, 0.15), "fills the duct"),
    ],
)
def test_what_no_stream_can_be_is_refused_in_one_sentence(call, words):
    with pytest.raises(OutOfRange, match=words):
        call()


def test_flow_over_area_is_the_mean_velocity():
    assert velocity_from_flow_m_s(0.18, 0.15, 0.15) == pytest.approx(8.0)


def test_readings_are_averaged_with_their_scatter():
    """JCGM 100:2008, 4.2: u = s/√n with n − 1 degrees of freedom; one reading says nothing of scatter."""
    mean = mean_of([7.9, 8.1, 8.0, 8.2])
    assert mean.value == pytest.approx(8.05)
    assert mean.u == pytest.approx(sqrt(0.05 / 3.0 / 4.0))
    assert mean.dof == 3
    assert (mean_of([8.0]).u, mean_of([8.0]).dof) == (0.0, 0)


def test_drift_is_relative_to_the_mean_and_signed():
    assert drift_rel(8.0, 7.6) == pytest.approx(-0.4 / 7.8)
    assert drift_rel(0.0, 0.0) == 0.0


@given(st.floats(1.05, 4.0), st.floats(0.7, 4.0), st.floats(0.1, 20.0), st.booleans())
def test_the_narrowest_section_conserves_the_flow(transverse, longitudinal, velocity, staggered):
    """Velocity times the narrower of the straight gap and, staggered, the two diagonal ones is the stream's."""
    diagonal = sqrt(longitudinal**2 + (transverse / 2.0) ** 2)
    gaps = [transverse - 1.0] + ([2.0 * (diagonal - 1.0)] if staggered else [])
    if min(gaps) <= 0.0:
        with pytest.raises(OutOfRange):
            narrowest_velocity_m_s(velocity, 1.0, transverse, longitudinal, staggered)
        return
    fast = narrowest_velocity_m_s(velocity, 1.0, transverse, longitudinal, staggered)
    assert fast * min(gaps) == pytest.approx(velocity * transverse)


def test_the_diagonal_is_the_narrowest_only_in_a_close_staggered_bank():
    """2 (S_D − D) < S_T − D decides."""
    wide = narrowest_velocity_m_s(6.0, 0.0164, 0.0313, 0.0343, staggered=True)
    assert wide == narrowest_velocity_m_s(6.0, 0.0164, 0.0313, 0.0343, staggered=False)
    close = narrowest_velocity_m_s(6.0, 0.0164, 0.05, 0.012, staggered=True)
    assert close > narrowest_velocity_m_s(6.0, 0.0164, 0.05, 0.012, staggered=False)


def test_blockage_is_that_of_the_wind_tunnel_formula():
    """Allen and Vincenti by hand: q = 0.1, C_D = 1.2 gives 1 + 0.03 + 0.0082; a third of the width, of q too."""
    spanning = blockage("cylinder", 0.015, 0.15, 0.15, 0.15)
    assert (spanning.ratio, spanning.factor) == (pytest.approx(0.1), pytest.approx(1.0382))
    assert blockage("cylinder", 0.015, 0.05, 0.15, 0.15).ratio == pytest.approx(0.1 / 3.0)
    ball = blockage("sphere", 0.05, 0.05, 0.15, 0.15)
    assert ball.ratio == pytest.approx(pi / 4.0 / 9.0)
    assert ball.factor == pytest.approx(sqrt(1.0 + 2.5 * 0.45 * pi / 36.0))
    assert not blockage("block", 0.06, 0.15, 0.15, 0.15).in_range


@given(st.sampled_from(["cylinder", "block", "sphere"]), st.floats(0.001, 0.12), st.floats(0.01, 0.3))
def test_walls_only_ever_speed_the_stream_up_and_more_the_larger_the_body(shape, across, span):
    span = across if shape == "sphere" else span
    one, larger = blockage(shape, across, span, 0.15, 0.15), blockage(shape, 1.1 * across, span, 0.15, 0.15)
    assert 1.0 < one.factor < larger.factor


def test_each_of_the_four_ways_to_a_velocity_comes_out_alike():
    """8 m/s stated, read several times, as dynamic pressure of the bench's moist air, as flow over the duct."""
    density = air_properties(23.0, 101325.0, 0.4).density_kg_m3
    ways = (
        flowing(velocity_m_s=8.0),
        flowing(velocity_readings_m_s=(7.9, 8.1, 8.0)),
        flowing(dynamic_pressure_Pa=0.5 * density * 64.0),
        flowing(flow_m3_s=0.18, duct_height_m=0.15, duct_width_m=0.15),
    )
    for setup in ways:
        assert undisturbed_velocity(setup).value_m_s == pytest.approx(8.0, rel=2e-4)
        assert undisturbed_velocity(setup).u_m_s > 0.0


def test_uncertainty_of_the_velocity_follows_the_way_it_was_got():
    """Stated: as stated. Readings: scatter joins the instrument. Pitot: half the relative u of Δp. Flow: u/A."""
    assert undisturbed_velocity(flowing(velocity_m_s=8.0, velocity_u_m_s=0.2)).u_m_s == 0.2
    read = undisturbed_velocity(flowing(velocity_readings_m_s=(7.8, 8.2), velocity_u_m_s=0.15))
    assert read.u_m_s == pytest.approx(sqrt(0.2**2 + 0.15**2))
    assert read.dof == pytest.approx((0.25 / 0.2) ** 4)
    assert undisturbed_velocity(flowing(velocity_readings_m_s=(8.0,))).dof == inf
    pitot = undisturbed_velocity(flowing(dynamic_pressure_Pa=38.0, dynamic_pressure_u_Pa=0.76))
    assert pitot.u_m_s / pitot.value_m_s == pytest.approx(0.01, rel=1e-3)
    still = undisturbed_velocity(flowing(dynamic_pressure_Pa=0.0, dynamic_pressure_u_Pa=0.5))
    assert (still.value_m_s, still.u_m_s) == (0.0, pytest.approx(0.457, abs=0.01))
    duct = flowing(flow_m3_s=0.18, flow_u_m3_s=0.0045, duct_height_m=0.15, duct_width_m=0.15)
    assert undisturbed_velocity(duct).u_m_s == pytest.approx(0.2)


def test_before_and_after_are_averaged_and_the_drift_counted():
    """8.0 then 7.6: 7.8, and a rectangular distribution between the two joins the uncertainty."""
    setup = flowing(velocity_m_s=8.0, velocity_end_m_s=7.6, velocity_u_m_s=0.1)
    run = undisturbed_velocity(setup)
    assert run.value_m_s == pytest.approx(7.8)
    assert run.u_m_s == pytest.approx(sqrt(0.1**2 + 0.4**2 / 12.0))
    assert velocity_before_m_s(setup) == 8.0


def test_velocity_at_the_body_takes_bank_or_duct_into_account():
    assert velocity_at_body(BENCH) == 8.0
    ducted = flowing(velocity_m_s=8.0, duct_height_m=0.15, duct_width_m=0.15)
    found = blockage_of(ducted)
    assert found.ratio == pytest.approx(0.016 * 0.11 / 0.15**2)
    assert velocity_at_body(ducted) == pytest.approx(8.0 * found.factor)
    height_only = blockage_of(flowing(velocity_m_s=8.0, duct_height_m=0.15))
    assert height_only.ratio == pytest.approx(0.016 / 0.15)
    bank = flowing(
        velocity_m_s=6.0, arrangement="inline", pitch_transverse_m=0.024, pitch_longitudinal_m=0.024, row=3, rows=5
    )
    assert velocity_at_body(bank) == pytest.approx(18.0)
    assert blockage_of(bank) is None


@pytest.mark.parametrize(
    ("flow", "words"),
    [
        ({}, "says nothing of the velocity"),
        ({"flow_m3_s": 0.1}, "needs duct_height_m and duct_width_m"),
        ({"velocity_m_s": 6.0, "arrangement": "inline"}, "needs pitch_transverse_m"),
    ],
)
def test_a_setup_without_its_velocity_is_refused(flow, words):
    with pytest.raises(BadSetup, match=words):
        velocity_at_body(flowing(**flow))
