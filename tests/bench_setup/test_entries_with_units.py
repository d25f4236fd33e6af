"""What a person types with its unit becomes SI; a number is shown with the digits that its u gives."""

from contextlib import suppress

import pytest
from hypothesis import given
from hypothesis import strategies as st

from core.bench.setup_check import descriptions
from core.bench.units import FACTORS, grouped, in_digits, parse_entry, with_u
from core.errors import BadSetup


@pytest.mark.parametrize(
    ("entry", "unit", "value"),
    [
        ("16 mm", "m", 0.016),
        ("16mm", "m", 0.016),
        ("0.63 in", "m", 0.016002),
        ("0,63 in", "m", 0.016002),
        ('0.625"', "m", 0.015875),
        ("1 ft", "m", 0.3048),
        ("0,016", "m", 0.016),
        (".5", "m", 0.5),
        ("5.", "m", 5.0),
        ("90 °F", "°C", 290 / 9),
        ("-40 °F", "°C", -40.0),
        ("−40 °C", "°C", -40.0),
        ("273.15 K", "°C", 0.0),
        ("0.9 °F", "K", 0.5),
        ("1 °C", "K", 1.0),
        ("1500 fpm", "m/s", 7.62),
        ("1 500 ft/min", "m/s", 7.62),
        ("36 km/h", "m/s", 10.0),
        ("10 kn", "m/s", 18520 / 3600),
        ("3 mmH2O", "Pa", 29.41995),
        ("1 inH2O", "Pa", 249.08891),
        ("760 mmHg", "Pa", 101325.0144354),
        ("1013,25 hPa", "Pa", 101325.0),
        ("1 psi", "Pa", 6894.757293168361),
        ("360 m3/h", "m³/s", 0.1),
        ("100 cfm", "m³/s", 0.0471947443),
        ("8,5 g/cm3", "kg/m³", 8500.0),
        ("1 Btu/(lb·°F)", "J/(kg·K)", 4186.8),
        ("1 Btu/(h·ft·°F)", "W/(m·K)", 1.730734666),
        ("189 g", "kg", 0.189),
        ("1 lb", "kg", 0.45359237),
        ("40 %", "", 0.4),
        ("20 mW/K", "W/K", 0.02),
        ("2 min", "s", 120.0),
        ("1.6e-2", "m", 0.016),
    ],
)
def test_an_entry_becomes_its_value_in_si(entry, unit, value):
    """Number and unit, with a decimal comma or point; values from NIST SP 811 (2008), appendix B.8."""
    assert parse_entry(entry, unit) == pytest.approx(value, rel=1e-9, abs=1e-12)


def test_a_number_alone_is_taken_in_the_unit_of_the_field():
    """A form that shows millimetres takes a bare number as millimetres, to the last digit."""
    assert parse_entry("16", "m", "mm") == 0.016
    assert parse_entry("68", "°C", "°F") == 20.0


@pytest.mark.parametrize(
    ("entry", "unit", "hint"),
    [
        ("", "m", "number"),
        ("mm", "m", "number"),
        ("1,500 fpm", "m/s", "1.500 or 1500"),
        ("3 x", "m", "mm"),
        ("3 kg", "m", "mm"),
        ("1.2.3", "m", "unit"),
        ("1e999", "m", "large"),
        ("nan", "m", "number"),
        ("inf", "m", "number"),
        ("--1", "m", "number"),
        ("٣ mm", "m", "number"),
    ],
)
def test_an_entry_that_cannot_be_meant_is_refused(entry, unit, hint):
    """No number, a foreign unit, or a comma that could group thousands: one sentence says what to type."""
    with pytest.raises(BadSetup, match=hint):
        parse_entry(entry, unit)


@given(st.text(max_size=30), st.sampled_from([*FACTORS, "°C"]))
def test_any_entry_is_read_or_refused(entry, unit):
    """Whatever is typed gives a finite number or a refusal."""
    with suppress(BadSetup):
        assert abs(parse_entry(entry, unit)) < float("inf")


def test_every_unit_of_a_setup_can_be_typed():
    """Each field's own unit is one that an entry knows."""
    for section in ("body", "thermometer", "recording", "air", "flow", "limits"):
        for key, one in descriptions(section).items():
            if one.kind in ("number", "numbers"):
                assert parse_entry(f"1 {one.unit}".strip(), one.unit) == 1.0, (section, key)


@pytest.mark.parametrize(
    ("value", "u", "text"),
    [
        (102.34, 1.67, "102.3 ± 1.7"),
        (102.34, 0.0996, "102.34 ± 0.10"),
        (99.96, 0.996, "100.0 ± 1.0"),
        (12345.6, 123.4, "12 350 ± 120"),
        (1e5, 25_000, "100 000 ± 25 000"),
        (0.000123456, 1.2e-7, "0.000 123 46 ± 0.000 000 12"),
        (-3.2, 0.1, "−3.20 ± 0.10"),
        (-0.001, 0.1, "0.00 ± 0.10"),
        (1234.4, 12, "1234 ± 12"),
        (5.0, 0.0, "5.000"),
        (5.0, None, "5.000"),
        (None, 1.0, "—"),
        (float("nan"), 1.0, "—"),
    ],
)
def test_a_value_has_the_digits_of_its_uncertainty(value, u, text):
    """Two significant digits of uncertainty, the value to the same place (JCGM 100:2008, 7.2.6)."""
    assert with_u(value, u).replace("\N{NARROW NO-BREAK SPACE}", " ") == text


@given(st.floats(-1e12, 1e12), st.floats(1e-9, 1e9))
def test_the_shown_value_is_within_half_a_last_digit(value, u):
    """Rounding never moves a value by more than half a unit of the uncertainty's second digit."""
    shown, spread = with_u(value, u).replace("\N{NARROW NO-BREAK SPACE}", "").replace("−", "-").split(" ± ")
    decimals = len(spread.partition(".")[2])
    step = 10.0**-decimals if decimals else 10.0 ** (len(spread) - 2)
    assert abs(float(shown) - value) <= 0.5 * step * (1 + 1e-9) + 1e-9 * abs(value)
    assert float(spread) == pytest.approx(u, rel=0.051)


def test_digits_are_grouped_in_threes():
    """Threes on both sides of the point, four digits together, a true minus."""
    assert grouped("-1234567.12345") == "−1 234 567.123 45".replace(" ", "\N{NARROW NO-BREAK SPACE}")
    assert grouped("1234.1234") == "1234.1234"
    assert [in_digits(value) for value in (0.0, None, 57.0, 0.00123, 1.834e-7)] == [
        "0",
        "—",
        "57.0",
        "0.001 23".replace(" ", "\N{NARROW NO-BREAK SPACE}"),
        "1.83·10⁻⁷",
    ]
