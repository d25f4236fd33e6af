"""The tally: what a touch, a typed number, a mark or an undo comes to, and what is refused and why."""

from itertools import pairwise

import pytest

from core.errors import JournalFault
from core.recording.events import BeatSkipped, Marked, RunEnded, Tapped, Typed, Undone
from core.recording.tally import DEAD_TIME_S, Confirmed, Question, Refused, Tally
from tests.recording.journals import memory_keeper


@pytest.fixture
def kept():
    return []


@pytest.fixture
def tally(kept):
    keep, _ = memory_keeper()

    def and_note(event):
        kept.append(event)
        return keep(event)

    started = Tally(1.0, and_note)
    started.first(90.0, 100.0)
    return started


def numbers(tally):
    """The readings as (seconds from the first, number)."""
    readings = tally.state.readings
    return list(zip(readings.time_s, readings.reading_C, strict=True))


def test_a_tap_is_one_step_of_the_display_down():
    """On a display of 0.1 °C too, without a speck of rounding after a hundred taps."""
    keep, _ = memory_keeper()
    tally = Tally(0.1, keep)
    tally.first(90.0, 0.0)
    for tap in range(1, 101):
        assert isinstance(tally.tap(tap * 0.5), Confirmed)
    assert numbers(tally)[-1] == (50.0, 80.0)
    assert numbers(tally)[37] == (18.5, 86.3)


def test_two_and_three_steps_and_a_typed_number_up(tally):
    """A display that jumps is followed in one touch; one that rises by typing."""
    tally.tap(101.0, 2)
    tally.tap(102.0, 3)
    tally.typed(86.0, 103.0)
    tally.tap(104.0)
    assert numbers(tally) == [(0.0, 90.0), (1.0, 88.0), (2.0, 85.0), (3.0, 86.0), (4.0, 85.0)]
    assert tally.view.next_C == 84.0


def test_a_tap_before_the_first_number_is_refused():
    """There is nothing to count down from."""
    keep, kept = memory_keeper()
    answer = Tally(1.0, keep).tap(1.0)
    assert isinstance(answer, Refused)
    assert answer.reason == "early"
    assert not kept


def test_a_palm_counts_once_and_ten_taps_a_second_all_count(tally):
    """Contacts a few milliseconds apart are one; a fast finger with unsteady rhythm loses nothing."""
    assert isinstance(tally.tap(101.0), Confirmed)
    for later in (0.0, 0.004, 0.012, 0.03):
        answer = tally.tap(101.0 + later)
        assert isinstance(answer, Refused)
        assert answer.reason == "contact"
    unsteady = [110.0 + 0.1 * tap + 0.045 * (tap % 2) for tap in range(40)]
    assert min(b - a for a, b in pairwise(unsteady)) > DEAD_TIME_S
    assert all(isinstance(tally.tap(stamp), Confirmed) for stamp in unsteady)
    assert tally.view.readings == 42


def test_a_palm_that_starts_the_run_counts_once(tally):
    """The touch of the first number is a touch like any other."""
    answer = tally.tap(100.005)
    assert isinstance(answer, Refused)
    assert answer.reason == "contact"
    assert tally.view.readings == 1


def test_a_stamp_that_goes_back_is_refused(tally):
    """A tap belongs after the last reading."""
    tally.tap(105.0)
    answer = tally.tap(104.0)
    assert isinstance(answer, Refused)
    assert answer.reason == "order"
    assert tally.view.readings == 2


@pytest.mark.parametrize("stamp", [float("nan"), float("inf")])
def test_a_clock_without_time_counts_nothing(tally, kept, stamp):
    """Every kind of input is refused then."""
    before = len(kept)
    answers = [tally.tap(stamp), tally.typed(80.0, stamp), tally.mark("fan on", stamp), tally.skip(stamp)]
    answers += [tally.undo(stamp), tally.last_digits("8", stamp), tally.end(stamp)]
    assert all(isinstance(answer, Refused) and answer.sentence for answer in answers)
    assert len(kept) == before


@pytest.mark.parametrize(
    ("reading", "reason"), [(89.5, "entry"), (350.0, "range"), (-80.0, "range"), (float("nan"), "range")]
)
def test_a_number_that_the_display_cannot_show_is_refused(tally, reading, reason):
    """Between its steps, or far outside."""
    answer = tally.typed(reading, 101.0)
    assert isinstance(answer, Refused)
    assert answer.reason == reason


@pytest.mark.parametrize("steps", [0, -1])
def test_a_tap_of_no_step_is_refused(tally, steps):
    """Up is typed, not tapped."""
    assert isinstance(tally.tap(101.0, steps), Refused)
    assert tally.view.readings == 1


def test_a_number_entered_late_moves_the_taps_after_it(tally):
    """The touch came in time, its number later: it was two steps, so what followed lies one lower."""
    tally.tap(101.0)
    tally.tap(102.0)
    tally.typed(88.0, 101.0)
    assert numbers(tally) == [(0.0, 90.0), (1.0, 88.0), (2.0, 87.0)]
    tally.typed(89.0, 100.5)
    assert numbers(tally) == [(0.0, 90.0), (0.5, 89.0), (1.0, 88.0), (2.0, 87.0)]


def test_undo_takes_back_the_last_entry_whatever_it_was(tally, kept):
    """Back through a tap, a mark, a skip and a late number; nothing is taken out of the journal."""
    tally.tap(101.0)
    tally.mark("fan on", 101.5)
    tally.skip(102.0)
    tally.typed(89.0, 100.5)
    for left in ([90.0, 89.0], [90.0, 89.0], [90.0, 89.0], [90.0]):
        assert isinstance(tally.undo(110.0), Confirmed)
        assert [number for _, number in numbers(tally)] == left
    assert tally.state.marks == ()
    assert tally.state.skipped == 0
    assert [type(event) for event in kept] == [Typed, Tapped, Marked, BeatSkipped, Typed] + [Undone] * 4


def test_undo_with_nothing_left_says_so(tally):
    """After the first number is gone the run waits again."""
    tally.undo(101.0)
    assert tally.view.state == "waiting"
    answer = tally.undo(102.0)
    assert isinstance(answer, Refused)
    assert answer.reason == "nothing"
    assert isinstance(tally.first(88.0, 103.0), Confirmed)


def test_marks_are_no_readings(tally):
    """They may also come before the first number."""
    keep, _ = memory_keeper()
    early = Tally(1.0, keep)
    early.mark("body in", 50.0)
    early.first(90.0, 60.0)
    early.mark("fan on", 61.0)
    assert early.view.marks == ("body in", "fan on")
    assert numbers(early) == [(0.0, 90.0)]


def test_after_the_end_nothing_counts(tally, kept):
    """Each input is refused with the reason."""
    assert isinstance(tally.end(120.0), Confirmed)
    assert isinstance(kept[-1], RunEnded)
    for answer in (tally.tap(121.0), tally.typed(80.0, 121.0), tally.undo(121.0), tally.end(122.0)):
        assert isinstance(answer, Refused)
        assert answer.reason == "ended"
    assert tally.view.state == "ended"
    assert not tally.view.can_undo


def test_what_the_journal_did_not_take_does_not_count():
    """No confirmation, no reading, the reason in words; and the next tap counts when the disk is well again."""
    keep, _ = memory_keeper()
    sick = False

    def sometimes(event):
        if sick:
            raise JournalFault("journal.sqlite could not be written: the disk is full.")
        return keep(event)

    tally = Tally(1.0, sometimes)
    tally.first(90.0, 100.0)
    sick = True
    answer = tally.tap(101.0)
    assert isinstance(answer, Refused)
    assert answer.reason == "journal"
    assert "full" in answer.sentence
    assert tally.view.readings == 1
    sick = False
    assert tally.tap(102.0) == Confirmed(2, 89.0)


def test_a_doubtful_number_is_asked_and_answered(tally, kept):
    """The second beat has no fall before it: the person says which number it is, and no other."""
    asked = tally.last_digits("4", 105.0)
    assert isinstance(asked, Question)
    assert 84.0 in asked.candidates_C
    assert tally.view.question == asked
    assert len(kept) == 1
    assert isinstance(tally.answer(83.0), Refused)
    assert isinstance(tally.answer(84.0), Confirmed)
    assert tally.view.question is None
    assert isinstance(tally.last_digits("9", 110.0), Confirmed)
    assert numbers(tally) == [(0.0, 90.0), (5.0, 84.0), (10.0, 79.0)]


def test_undo_drops_an_open_question_first(tally):
    """The number before it stays."""
    tally.last_digits("4", 105.0)
    tally.undo(106.0)
    assert tally.view.question is None
    assert tally.view.readings == 1


def test_a_beat_passed_over_is_noted_and_the_next_one_counts(tally):
    """Nothing is made up for it."""
    tally.typed(85.0, 105.0)
    tally.skip(110.0)
    assert isinstance(tally.last_digits("6", 115.0), Confirmed)
    assert numbers(tally) == [(0.0, 90.0), (5.0, 85.0), (15.0, 76.0)]
    assert tally.view.skipped == 1


@pytest.mark.parametrize("digits", ["", "x", "1.2", "²", "-1"])
def test_only_digits_are_last_digits(tally, digits):
    """Anything else is refused, in words."""
    answer = tally.last_digits(digits, 105.0)
    assert isinstance(answer, Refused)
    assert answer.sentence
