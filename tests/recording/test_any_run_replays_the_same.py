"""Whatever a person does, the events alone give the same run again, and what is derived stays in order."""

from itertools import pairwise

from hypothesis import given, settings
from hypothesis import strategies as st

from core.recording.events import from_text, to_text
from core.recording.run_state import derive
from core.recording.tally import Confirmed, Question, Tally
from tests.recording.journals import memory_keeper

moments = st.one_of(st.floats(0.0, 30.0), st.sampled_from([1.0, 1.0000005, 1.000002, 1.000003, 5.0]))
inputs = st.one_of(
    st.tuples(st.just("tap"), moments, st.integers(0, 3)),
    st.tuples(st.just("typed"), moments, st.integers(20, 95)),
    st.tuples(st.just("last_digits"), moments, st.sampled_from(["0", "7", "42"])),
    st.tuples(st.just("answer"), moments, st.integers(0, 1)),
    st.tuples(st.just("skip"), moments, st.none()),
    st.tuples(st.just("mark"), moments, st.sampled_from(["body in", "fan on"])),
    st.tuples(st.just("undo"), moments, st.none()),
)


def act(tally, what, moment, value):
    """One input of a person; returns the tally's answer."""
    if what == "tap":
        return tally.tap(moment, value)
    if what == "typed":
        return tally.typed(float(value), moment)
    if what == "last_digits":
        return tally.last_digits(value, moment)
    if what == "answer":
        question = tally.view.question
        return tally.answer(question.candidates_C[min(value, len(question.candidates_C) - 1)] if question else 0.0)
    if what == "mark":
        return tally.mark(value, moment)
    return getattr(tally, what)(moment)


@settings(deadline=None, max_examples=150)
@given(st.lists(inputs, max_size=40), st.integers(0, 40))
def test_events_alone_give_the_run_again(steps, stopped_at):
    """Derived at once, derived tap by tap, or taken up in the middle by a fresh tally: one run; times rise."""
    keep, kept = memory_keeper()
    tally = Tally(1.0, keep)
    for place, step in enumerate(steps):
        if place == stopped_at:
            tally = Tally(1.0, keep, tuple(kept))
        before = len(kept)
        answer = act(tally, *step)
        assert len(kept) - before == isinstance(answer, Confirmed)
        assert isinstance(answer, Question) == (len(kept) == before and tally.view.question is answer)
    assert tally.state == derive(kept, 1.0)
    written = [type(one)(one.number, 1, 1, from_text(to_text(one.event))) for one in kept]
    assert derive(written, 1.0) == tally.state
    times = tally.state.readings.time_s
    assert all(late > early for early, late in pairwise(times))


@settings(deadline=None)
@given(st.lists(inputs, max_size=25), inputs.filter(lambda step: step[0] not in ("undo", "answer")))
def test_undo_leaves_the_run_as_it_was_before(steps, last):
    """For every entry after every beginning."""
    keep, _ = memory_keeper()
    tally = Tally(1.0, keep)
    for step in steps:
        act(tally, *step)
    was = tally.state
    if isinstance(act(tally, *last), Confirmed):
        assert isinstance(tally.undo(99.0), Confirmed)
    now = tally.state
    assert (now.rows, now.marks, now.skipped) == (was.rows, was.marks, was.skipped)
