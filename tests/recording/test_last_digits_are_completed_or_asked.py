"""On a beat only the last digits are typed: the number that follows is right, or the person is asked."""

import math

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from core.recording.completion import complete, nearest
from core.recording.run_state import Row


def shown_on_beats(tau_s, beat_s, step_K, refresh_s, phase, start_C=92.0, air_C=22.0):
    """What a display shows at each beat of a body that cools, down to 33 °C, as the oldest refresh allows."""
    rows, time_s = [], 0.0
    while not rows or rows[-1][1] > 33.0:
        renewed_s = math.floor((time_s - phase * refresh_s) / refresh_s) * refresh_s + phase * refresh_s
        held_C = air_C + (start_C - air_C) * math.exp(-max(renewed_s, 0.0) / tau_s)
        rows.append((time_s, round(round(held_C / step_K) * step_K, 9)))
        time_s += beat_s
    return rows


def last_digits(reading_C, step_K, count):
    """The last digits as a person reads them off the display."""
    places = max(0, -math.floor(math.log10(step_K) + 1e-9))
    return f"{reading_C:.{places}f}".replace(".", "").replace("-", "")[-count:].rjust(count, "0")


benches = {
    "tau_s": st.floats(25.0, 600.0),
    "beat_s": st.sampled_from([5.0, 7.0, 10.0]),
    "refresh_s": st.floats(0.1, 2.0),
    "phase": st.floats(0.0, 0.99),
    "skip": st.integers(0, 3),
}


@pytest.mark.parametrize(("step_K", "count"), [(1.0, 1), (1.0, 2), (0.1, 1), (0.1, 2), (0.1, 3), (0.5, 2)])
@settings(deadline=None)
@given(**benches)
def test_a_completion_that_is_certain_is_right(step_K, count, tau_s, beat_s, refresh_s, phase, skip):
    """Along a whole cooling curve, with beats passed over, no number is ever taken that was not shown."""
    shown = shown_on_beats(tau_s, beat_s, step_K, refresh_s, phase)
    kept = [Row(*shown[0], 1)]
    for index, (time_s, reading_C) in enumerate(shown[1:], start=1):
        if skip and index % 5 == skip:
            continue
        answer = complete(last_digits(reading_C, step_K, count), kept, time_s, step_K, refresh_s)
        if answer.certain:
            assert answer.candidates_C == (reading_C,)
        kept.append(Row(time_s, reading_C, index + 1))


@pytest.mark.parametrize(
    ("step_K", "count", "tau_s", "most"), [(1.0, 1, 60.0, 2), (1.0, 1, 200.0, 1), (0.1, 2, 60.0, 2)]
)
def test_a_usual_run_asks_once_or_twice(step_K, count, tau_s, most):
    """The second reading is asked, and after that hardly any."""
    shown = shown_on_beats(tau_s, 5.0, step_K, 0.5, 0.3)
    kept, asked = [Row(*shown[0], 1)], 0
    for index, (time_s, reading_C) in enumerate(shown[1:], start=1):
        answer = complete(last_digits(reading_C, step_K, count), kept, time_s, step_K, 0.5)
        asked += not answer.certain
        assert reading_C in answer.candidates_C
        kept.append(Row(time_s, reading_C, index + 1))
    assert 1 <= asked <= most


def test_the_number_typed_last_decides_between_turns():
    """87 → 82 in the beat before: a 7 now means 77; after 87 → 86 a 7 can only be meter noise or a slip."""
    falling = [Row(0.0, 87.0, 1), Row(5.0, 82.0, 2)]
    assert complete("7", falling, 10.0, 1.0).candidates_C == (77.0,)
    resting = [Row(0.0, 87.0, 1), Row(5.0, 86.0, 2)]
    assert complete("7", resting, 10.0, 1.0).candidates_C == (87.0,)


def test_digits_that_fit_nowhere_are_asked_with_the_nearest():
    """A slip of the finger gives a question, not a reading far away."""
    rows = [Row(0.0, 60.0, 1), Row(5.0, 59.0, 2)]
    answer = complete("3", rows, 10.0, 1.0)
    assert not answer.certain
    assert set(answer.candidates_C) == {63.0, 53.0}


def test_a_display_of_half_degrees_has_no_three_at_its_end():
    """Digits that this display cannot show give no number at all."""
    assert complete("3", [Row(0.0, 87.0, 1)], 5.0, 0.5).candidates_C == ()
    assert nearest("3", 87.0, 0.5) is None


@given(st.integers(-400, 1900), st.integers(1, 3), st.integers(-4, 4))
def test_nearest_finds_the_number_itself(tenths, count, off):
    """The first beat's number lies nearest to the one expected."""
    reading_C = tenths / 10
    near_C = reading_C + off / 10
    found = nearest(last_digits(reading_C, 0.1, count), near_C, 0.1)
    assert found is not None
    assert abs(found - near_C) <= abs(reading_C - near_C) + 1e-9


@given(st.floats(1e-6, 400.0), st.floats(1e-6, 4000.0), st.integers(-500, 2000), st.integers(-500, 2000))
def test_readings_that_make_no_sense_are_asked_at_once(past_s, now_s, one, other):
    """Whatever stands before, there is an answer or a question, never a long search."""
    rows = [Row(0.0, one / 10, 1), Row(past_s, other / 10, 2)]
    answer = complete("7", rows, past_s + now_s, 0.1, 0.5)
    assert len(answer.candidates_C) == 1 if answer.certain else answer.candidates_C
