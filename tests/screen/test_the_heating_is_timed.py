"""The clock of the heating, the battery and the way back from the background, without a window."""

import pytest

from mobileapp import words
from mobileapp.device.battery import NoBattery, PlyerBattery
from mobileapp.heating import Heating


class Hands:
    """A clock that is set by hand."""

    now = 100.0

    def now_s(self):
        return self.now


@pytest.fixture(autouse=True)
def _english():
    words.use("en")
    yield
    words.use("en")


def test_the_first_heating_counts_up_and_the_next_one_counts_down_to_its_length():
    hands = Hands()
    heating = Heating(hands)
    assert heating.words() == ""
    heating.begin()
    hands.now += 125.0
    assert heating.words() == "In the water for 2:05."
    assert not heating.is_due()
    heating.end(first_reading_s=hands.now + 15.0)
    assert heating.words() == "Last time it took 2:20."
    hands.now += 600.0
    heating.begin()
    hands.now += 80.0
    assert heating.words() == "In the water for 1:20. As long as last time in 1:00."
    assert not heating.is_due()
    hands.now += 61.0
    assert heating.words().endswith("That is as long as last time.")
    assert [heating.is_due() for _look in range(3)] == [True, False, False]


def test_a_heating_without_a_run_leaves_the_usual_length_alone():
    hands = Hands()
    heating = Heating(hands)
    heating.begin()
    heating.end(None)
    assert heating.words() == ""
    heating.begin()
    heating.end(first_reading_s=50.0)
    assert heating.words() == ""


@pytest.mark.parametrize(
    ("status", "left"),
    [
        ({"isCharging": False, "percentage": 12.0}, 12.0),
        ({"isCharging": True, "percentage": 12.0}, None),
        ({"isCharging": False, "percentage": None}, None),
        ({}, None),
    ],
)
def test_the_battery_is_only_a_word_where_it_can_be_read(status, left):
    battery = type("Told", (), {"status": status})()
    assert PlyerBattery(battery).percent_left() == left
    assert NoBattery().percent_left() is None
