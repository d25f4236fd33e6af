"""What a person notices of the air properties: humidity that is carried along, refusals, smoothness, speed."""

from math import nan
from time import perf_counter

import pytest
from hypothesis import given
from hypothesis import strategies as st

from core.bench.air import air_properties, saturation_pressure_Pa, vapour_fraction
from core.errors import OutOfRange

temperatures = st.floats(-10.0, 120.0)
pressures = st.floats(60e3, 105e3)


def test_warm_air_beside_the_body_keeps_the_vapour_of_the_room():
    """Room air of 23 °C and 60 % warmed to 57 °C holds the same vapour, about 11 % of saturation there."""
    pressure = 101325.0
    x = vapour_fraction(23.0, pressure, 0.6)
    same = x / vapour_fraction(57.0, pressure, 1.0)
    assert 0.08 < same < 0.12
    carried = air_properties(57.0, pressure, 0.6, 23.0).density_kg_m3
    assert carried == pytest.approx(air_properties(57.0, pressure, same).density_kg_m3, rel=1e-5)
    assert air_properties(57.0, pressure, 0.6).density_kg_m3 == pytest.approx(0.967 * carried, rel=1e-3)


@pytest.mark.parametrize(
    ("inputs", "words"),
    [
        ((-10.5, 1e5), "temperature of -10 to 120 °C, not -10.5 °C"),
        ((120.5, 1e5), "temperature"),
        ((20.0, 1013.25), "pressure of 60000 to 105000 Pa, not 1013.25 Pa"),
        ((20.0, 1e5, 40.0), "relative humidity of 0 to 1, not 40"),
        ((20.0, 1e5, -0.1), "relative humidity"),
        ((nan, 1e5), "temperature"),
        ((20.0, nan), "pressure"),
        ((60.0, 1e5, 0.5, 130.0), "temperature of the humidity reading"),
        ((120.0, 101325.0, 0.9), "cannot have a relative humidity of 0.9"),
        ((10.0, 101325.0, 0.9, 30.0), "condenses when cooled to 10 °C"),
    ],
)
def test_what_no_air_can_be_is_refused_in_one_sentence(inputs, words):
    with pytest.raises(OutOfRange, match=words):
        air_properties(*inputs)


@given(temperatures, pressures, st.floats(0.0, 1.0))
def test_every_state_of_air_has_sensible_properties(temperature, pressure, humidity):
    """All positive, consistent with each other, Pr between steam's and dry air's; or refused as impossible."""
    try:
        air = air_properties(temperature, pressure, humidity)
    except OutOfRange:
        assert humidity * saturation_pressure_Pa(temperature) * 1.01 > pressure
        return
    assert air.kinematic_viscosity_m2_s * air.density_kg_m3 == pytest.approx(air.viscosity_Pa_s)
    assert air.prandtl == pytest.approx(air.viscosity_Pa_s * air.heat_capacity_J_kgK / air.conductivity_W_mK)
    assert 0.68 < air.prandtl < 1.1
    assert 0.3 < air.density_kg_m3 < 1.4


@given(temperatures.filter(lambda t: t < 45.0), pressures, st.floats(0.0, 0.99))
def test_moister_air_is_lighter_and_holds_more_heat(temperature, pressure, humidity):
    drier = air_properties(temperature, pressure, humidity)
    moister = air_properties(temperature, pressure, humidity + 0.01)
    assert moister.density_kg_m3 < drier.density_kg_m3
    assert moister.heat_capacity_J_kgK > drier.heat_capacity_J_kgK


def test_properties_have_no_step_where_the_humidity_starts():
    """A trace of vapour changes nothing: dry and moist air are one formula."""
    dry, trace = air_properties(40.0, 95e3, 0.0), air_properties(40.0, 95e3, 1e-9)
    for name in dry.__slots__:
        assert getattr(trace, name) == pytest.approx(getattr(dry, name), rel=1e-8)


def test_a_call_is_fast_enough_for_a_monte_carlo():
    """200 000 draws in a few seconds: well under 100 µs a call on a busy machine (about 15 µs on a free one)."""
    times = []
    for _ in range(20):
        start = perf_counter()
        for _ in range(50):
            air_properties(57.0, 101325.0, 0.4, 23.0)
        times.append((perf_counter() - start) / 50)
    assert min(times) < 100e-6
