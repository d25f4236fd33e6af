"""Rounding, alignment and ticks of the figures on the screen."""

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from mobileapp import words
from mobileapp.figures import POINT_SPACE, aligned, clock_time, number, significant, with_uncertainty
from mobileapp.widgets.ticks import decade_ticks, round_ticks, tick_text


@pytest.fixture(autouse=True)
def _english():
    words.use("en")
    yield
    words.use("en")


@pytest.mark.parametrize(
    ("value", "u", "shown"),
    [
        (102.34, 2.14, ("102.3", "2.1")),
        (151.2, 11.2, ("151", "11")),
        (62.31, 0.996, ("62.3", "1.0")),
        (None, 1.0, ("—", "—")),
        (float("nan"), 1.0, ("—", "—")),
    ],
)
def test_value_and_uncertainty_end_at_the_same_place(value, u, shown):
    assert with_uncertainty(value, u) == shown


def test_german_writes_a_comma():
    words.use("de")
    assert with_uncertainty(102.34, 2.14) == ("102,3", "2,1")
    assert number(-0.5, 1) == "−0,5"


def test_no_minus_before_a_rounded_zero():
    assert number(-0.004, 1) == "0.0"


def test_significant_digits():
    assert significant(23.456, 2) == "23"
    assert significant(0.00234, 2) == "0.0023"


def test_minutes_and_seconds():
    assert clock_time(187.4) == "3:07"


def test_decimal_marks_stand_in_one_line():
    """Flush right, every text has the same number of places behind where its mark stands or would stand."""
    padded = aligned(["62.31", "102.3", "151", "—"])

    def behind(text):
        for mark in (".", POINT_SPACE):
            if mark in text:
                return len(text) - text.index(mark)
        return 0

    assert {behind(text) for text in padded} == {3}


@given(
    low=st.floats(-1e6, 1e6, allow_nan=False),
    span=st.floats(1e-6, 1e6, allow_nan=False),
    wanted=st.integers(2, 12),
)
def test_ticks_are_round_numbers_inside_the_axis(low, span, wanted):
    high = low + span
    if high <= low:
        return
    ticks, decimals = round_ticks(low, high, wanted)
    slack = 1e-6 * span + 1e-9 * abs(low)
    assert all(low - slack <= tick <= high + slack for tick in ticks)
    if span > 1e-9 * abs(low) * 1e3 and len(ticks) >= 2:
        step = ticks[1] - ticks[0]
        mantissa = step / 10 ** math.floor(math.log10(step * (1 + 1e-6)))
        assert min(abs(mantissa - m) for m in (1, 2, 5, 10)) < 1e-3 or span / max(abs(low), 1) < 1e-6
    assert len({tick_text(tick, decimals) for tick in ticks}) == len(ticks)


def test_a_logarithmic_axis_has_decades():
    assert decade_ticks(900, 110_000, 6) == [1000, 2000, 5000, 10_000, 20_000, 50_000, 100_000]
