"""Which correlations a bench is shown, in range or not, and that they behave as physics does."""

from dataclasses import replace
from math import hypot

import pytest
from hypothesis import given
from hypothesis import strategies as st

from core.bench.air import air_properties
from core.bench.setup import Body, Flow, Recording, Setup, Surrounding, Thermometer
from core.convection import bank
from core.convection.bank import Bank
from core.convection.correlation import Correlation
from core.convection.expected import expected, expected_for, family
from core.convection.mixed import mixed
from core.convection.natural import LAWS, combined, still_air
from core.convection.numbers import biot, film_temperature_C, grashof, nusselt, rayleigh, reynolds, richardson
from core.errors import OutOfRange

ROD = Body("cylinder", diameter_m=0.016, length_m=0.11, material="brass")
BENCH = Setup(ROD, Thermometer(1.0), Recording("change"), Surrounding(23.0), Flow(velocity_m_s=8.0))
BANK = Flow(
    velocity_m_s=6.0, arrangement="inline", pitch_transverse_m=0.025, pitch_longitudinal_m=0.025, row=3, rows=5
)


def names(expectations):
    return [one.correlation for one in expectations]


@pytest.mark.parametrize(
    ("body", "flow", "wanted"),
    [
        (ROD, Flow(velocity_m_s=8.0), ["hilpert", "zukauskas", "churchill-bernstein", "sanitjai-goldstein"]),
        (Body("sphere", diameter_m=0.025, material="brass"), Flow(velocity_m_s=8.0), ["whitaker"]),
        (
            Body("block", side_a_m=0.02, side_b_m=0.02, side_c_m=0.12, material="aluminium"),
            Flow(velocity_m_s=8.0),
            ["igarashi"],
        ),
        (ROD, BANK, ["zukauskas-bank", "grimison-bank"]),
        (Body("sphere", diameter_m=0.016, material="brass"), BANK, []),
    ],
)
def test_a_bench_is_shown_the_family_that_fits_it(body, flow, wanted):
    found = expected_for(replace(BENCH, body=body, flow=flow), 60.0)
    assert names(found) == wanted
    assert all(one.in_range for one in found)
    assert all(one.h_W_m2K > 0.0 and one.nusselt > 0.0 and 0.0 < one.band_rel <= 0.3 for one in found)


def test_the_usual_rod_is_told_some_seventy_watts():
    """16 mm at 8 m/s and 60 °C in air of 23 °C: the four say 68–87 W/(m²·K), each within the others' bands."""
    found = expected_for(BENCH, 60.0)
    values = [one.h_W_m2K for one in found]
    assert 68.0 < min(values) < max(values) < 87.0
    assert all(abs(a / b - 1.0) < hypot(0.2, 0.2) for a in values for b in values)


@pytest.mark.parametrize(
    ("body", "flow"),
    [
        (ROD, Flow(velocity_m_s=0.01)),
        (Body("sphere", diameter_m=0.3, material="brass"), Flow(velocity_m_s=12.0)),
        (Body("block", side_a_m=0.005, side_b_m=0.005, side_c_m=0.1, material="brass"), Flow(velocity_m_s=2.0)),
        (Body("block", side_a_m=0.02, side_b_m=0.03, side_c_m=0.1, material="brass"), Flow(velocity_m_s=8.0)),
        (ROD, replace(BANK, pitch_longitudinal_m=0.060)),
        (ROD, Flow(velocity_m_s=8.0, duct_height_m=0.05, duct_width_m=0.11)),
    ],
    ids=["creeping air", "huge sphere", "thin bar", "flat bar", "wide bank", "tight duct"],
)
def test_outside_its_range_a_correlation_says_so(body, flow):
    """The formula is still evaluated, but at least one author no longer answers for it."""
    found = expected_for(replace(BENCH, body=body, flow=flow), 60.0)
    assert found
    assert any(not one.in_range for one in found)
    assert all(one.nusselt > 0.0 for one in found)


def test_a_surface_beyond_the_airs_range_puts_everything_out_of_range():
    found = expected(family("cylinder", 0.016, 0.016), 0.016, 8.0, 150.0, 23.0, 101325.0)
    assert not any(one.in_range for one in found)


def test_no_stream_no_forced_expectation_and_still_air_has_its_own():
    assert expected(family("cylinder", 0.016, 0.016), 0.016, 0.0, 60.0, 23.0, 101325.0) == ()
    still = replace(BENCH, recording=Recording("change", kind="still-air"), flow=Flow())
    assert names(expected_for(still, 60.0)) == ["churchill-chu"]


def test_touching_tubes_are_refused():
    with pytest.raises(OutOfRange, match="would touch"):
        family("cylinder", 0.016, 0.016, "inline", 0.016, 0.03)
    with pytest.raises(OutOfRange, match="would touch"):
        family("cylinder", 0.016, 0.016, "staggered", 0.02, 0.01)


def test_the_humidity_of_the_room_is_carried_to_the_film():
    """The expectation takes the room's vapour, not its relative humidity, to the film: moist air changes h by
    less than 1 %, where the same relative humidity at film temperature would change it by more."""
    laws = family("cylinder", 0.016, 0.016)[:1]
    dry, moist = (expected(laws, 0.016, 8.0, 90.0, 25.0, 101325.0, rh)[0].h_W_m2K for rh in (0.0, 0.9))
    assert 0.0 < abs(moist / dry - 1.0) < 0.01


def all_laws():
    tubes = [bank.correlations(Bank(staggered, 1.6, 1.6, 5, 3)) for staggered in (False, True)]
    singles = [family(shape, 0.02, 0.02) for shape in ("cylinder", "sphere", "block")]
    return [law for laws in (*singles, *tubes) for law in laws]


@pytest.mark.parametrize("law", all_laws(), ids=lambda law: law.name)
def test_heat_transfer_rises_with_the_stream_over_the_whole_range(law: Correlation):
    """No correlation falls by more than a table's rounding, or steps up by more than 18 %, from the start of its
    range to 3e5; the largest step is Žukauskas's staggered bank at 2e5."""
    low, high = law.reynolds_range
    Re, previous = max(low, 10.0), None
    while Re < min(high, 3e5):
        value = law.nusselt(Re, 0.7, 1.0)
        if previous is not None:
            assert 0.97 * previous < value < 1.18 * 1.05**0.84 * previous
        previous, Re = value, 1.05 * Re


@pytest.mark.parametrize("law", all_laws(), ids=lambda law: law.name)
def test_every_correlation_names_its_source_and_who_states_its_band(law: Correlation):
    assert law.source
    assert law.band_source
    assert law.name == law.name.lower()
    assert law.at == ("stream" if law.wall != "none" else "film")


@given(st.floats(0.005, 0.04), st.floats(4.0, 14.0), st.floats(30.0, 95.0), st.floats(10.0, 28.0))
def test_the_four_cylinder_laws_stay_within_each_others_bands_on_any_bench(diameter, velocity, surface, air):
    found = expected(family("cylinder", diameter, diameter), diameter, velocity, surface, air, 101325.0)
    values = [one.h_W_m2K for one in found if one.in_range]
    assert len(values) >= 3
    assert max(values) / min(values) < 1.3


def test_a_row_gets_more_the_deeper_it_stands_until_the_fourth():
    """Žukauskas's factors by difference: first row 0.70 in line, 0.64 staggered, 1 from the fourth on."""
    for staggered, first in ((False, 0.70), (True, 0.64)):
        table = bank.ZUKAUSKAS_ROWS, bank.ZUKAUSKAS_MEAN[staggered]
        factors = [bank.row_factor(row, *table) for row in range(1, 12)]
        assert factors[0] == first
        assert factors == sorted(factors)
        assert factors[3:] == [1.0] * 8


@pytest.mark.parametrize("staggered", [False, True])
def test_local_rows_average_to_the_published_mean(staggered):
    """Without the cap at 1 the local factors sum to the mean's table by construction; with it the sum stays within
    5 %, a fourth of the row's band."""
    for table in (
        (bank.ZUKAUSKAS_ROWS, bank.ZUKAUSKAS_MEAN[staggered]),
        (bank.GRIMISON_ROWS, bank.GRIMISON_MEAN[staggered]),
    ):
        for rows in range(1, 9):
            mean = sum(bank.row_factor(row, *table) for row in range(1, rows + 1)) / rows
            assert mean == pytest.approx(bank.mean_factor(rows, *table), rel=0.05)


def test_one_heated_row_has_a_wider_band_than_the_bank_and_says_which_row():
    row, whole = (bank.correlations(Bank(False, 1.6, 1.6, 5, one)) for one in (3, None))
    assert row[0].band_rel == pytest.approx(hypot(0.15, 0.13))
    assert whole[0].band_rel == 0.15
    assert row[0].source.endswith("row 3")
    assert whole[0].source.endswith("mean of the bank")


def test_a_deep_bank_is_the_limit_of_many_rows():
    deep, twenty = (bank.correlations(Bank(True, 1.6, 1.5, rows)) for rows in (None, 20))
    assert deep[0].nusselt(1e4, 0.7, 1.0) == twenty[0].nusselt(1e4, 0.7, 1.0)


def test_grimison_outside_his_table_is_held_at_its_edge_and_flagged():
    _, _, within = bank.grimison_constants(Bank(False, 1.6, 1.6))
    assert within
    C, m, outside = bank.grimison_constants(Bank(False, 4.0, 3.0))
    assert not outside
    assert (C, m) == (pytest.approx(0.286), pytest.approx(0.608))
    assert not bank.grimison_constants(Bank(True, 1.3, 0.9))[2]


def test_dimensionless_numbers_by_hand():
    assert film_temperature_C(90.0, 20.0) == 55.0
    assert reynolds(8.0, 0.016, 16e-6) == pytest.approx(8000.0)
    assert nusselt(80.0, 0.016, 0.0256) == pytest.approx(50.0)
    assert biot(80.0, 0.008, 115.0) == pytest.approx(0.005565, rel=1e-3)
    assert grashof(60.0, 20.0, 0.016, 17e-6) == pytest.approx(9.80665 / 313.15 * 40.0 * 0.016**3 / 17e-6**2)
    assert rayleigh(2e4, 0.7) == pytest.approx(1.4e4)
    assert richardson(2e4, 8000.0) == pytest.approx(3.125e-4)


@pytest.mark.parametrize("shape", ["cylinder", "sphere", "block"])
def test_still_air_takes_a_few_watts_and_more_from_a_hotter_body(shape):
    """A bench rod in still air: 5–15 W/(m²·K); the three laws differ by no more than shape and band allow."""
    warm, hot = (still_air(shape, 0.016, 0.016, one, 23.0, 101325.0, 0.4) for one in (40.0, 90.0))
    assert 4.0 < warm.h_W_m2K < hot.h_W_m2K < 15.0
    assert hot.correlation == LAWS[shape].name


def test_still_air_laws_of_bar_and_cylinder_agree_at_the_same_perimeter():
    """Lienhard's one law for all bodies against Churchill and Chu's cylinder, within both bands: 20 %."""
    film = air_properties(55.0, 101325.0)
    assert film.prandtl == pytest.approx(0.70, abs=0.01)
    for side in (0.02, 0.04, 0.08):
        bar = still_air("block", side, side, 90.0, 20.0, 101325.0)
        tube = still_air("cylinder", 4.0 * side / 3.14159, 0.0, 90.0, 20.0, 101325.0)
        assert bar.h_W_m2K == pytest.approx(tube.h_W_m2K, rel=0.2)


@given(st.floats(0.1, 200.0), st.floats(0.1, 200.0))
def test_forced_and_natural_convection_join_without_adding_up(forced, natural):
    """Not below the larger, not above 19 % more than it (both alike, n = 4)."""
    larger = max(forced, natural)
    assert larger <= combined(forced, natural) * (1.0 + 1e-12)
    assert combined(forced, natural) <= 2.0**0.25 * larger * (1.0 + 1e-12)


def test_buoyancy_has_no_say_at_bench_speeds_and_rules_in_creeping_air():
    """A 16 mm rod at 90 °C: at 8 m/s Ri is under 1e-3 and buoyancy adds less than 0.1 %; at 0.1 m/s Ri is above 1
    and the published rule adds a good deal."""
    for velocity, low, high, least, most in ((8.0, 0.0, 1e-3, 0.0, 1e-3), (0.1, 1.0, 10.0, 0.05, 1.0)):
        laws = family("cylinder", 0.016, 0.016)
        forced = expected(laws, 0.016, velocity, 90.0, 23.0, 101325.0)[2].h_W_m2K
        found = mixed("cylinder", 0.016, 0.016, velocity, forced, 90.0, 23.0, 101325.0)
        assert low < found.richardson < high
        assert least < found.added_rel < most
        assert found.natural_h_W_m2K == still_air("cylinder", 0.016, 0.016, 90.0, 23.0, 101325.0).h_W_m2K
