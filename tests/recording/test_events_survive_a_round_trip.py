"""An event written and read is the same event; what is not one is refused in words; the form stays as it is."""

import json
import typing
from dataclasses import fields

import pytest
from hypothesis import given
from hypothesis import strategies as st

from core.errors import JournalFault
from core.recording import events
from core.recording.events import Event, Foreign, RunOpened, Tapped, Undone, from_text, to_text

VALUES = {
    "str": st.text(st.characters(exclude_categories=["Cs"])),
    "bool": st.booleans(),
    "int": st.integers(-(2**53), 2**53),
    "float": st.floats(allow_nan=False, allow_infinity=False),
    "None": st.none(),
}
KNOWN = [one for one in typing.get_args(Event) if one is not Foreign]


def any_event(kind):
    """An event of a kind with any values that its fields name."""
    named = {
        one.name: st.one_of([VALUES[name] for name in one.type.split(" | ")]) for one in fields(kind)
    }
    return st.builds(kind, **named)


@given(st.one_of([any_event(kind) for kind in KNOWN]))
def test_every_event_reads_back_as_it_was(event):
    """JSON and back, on one line."""
    text = to_text(event)
    assert from_text(text) == event
    assert "\n" not in text


def test_the_form_in_the_journal_is_this_one():
    """Journals of before must stay readable: the words and their order do not move."""
    assert to_text(Tapped(12.5, 2)) == '{"kind": "tapped", "stamp_s": 12.5, "steps": 2}'
    assert to_text(Undone(13.0, 7)) == '{"kind": "undone", "stamp_s": 13.0, "event": 7}'
    line = (
        '{"kind": "run opened", "run_kind": "measured", "setup_toml": "", "wall_time": "2026-03-04", '
        '"stamp_source": "loop", "stamp_halfwidth_s": 0.002, "slept_s": 0.0, "seed": null, "truth": ""}'
    )
    assert from_text(line) == RunOpened("measured", "", "2026-03-04", "loop", 0.002)


@pytest.mark.parametrize(
    "line",
    [
        '{"kind": "whistled", "stamp_s": 1.0, "tune": [1, 2]}',
        '{"kind": "tapped", "stamp_s": 1.0, "steps": 1, "pressure_N": 2.5}',
        '{"stamp_s": 1.0,   "kind": "whistled"}',
    ],
)
def test_an_event_of_a_newer_version_passes_through_untouched(line):
    """A kind or a field that is not known here comes out as it went in, to the letter."""
    event = from_text(line)
    assert isinstance(event, Foreign)
    assert to_text(event) == line


@pytest.mark.parametrize(
    "line",
    [
        "",
        "tapped",
        "[1, 2]",
        "17",
        '{"stamp_s": 1.0}',
        '{"kind": "tapped", "stamp_s": 1.0}',
        '{"kind": "tapped", "stamp_s": "1.0", "steps": 1}',
        '{"kind": "tapped", "stamp_s": NaN, "steps": 1}',
        '{"kind": "tapped", "stamp_s": 1.0, "steps": true}',
        '{"kind": "tapped", "stamp_s": null, "steps": 1}',
        '{"kind": "decided", "decision": 3}',
        "[" * 20000,
    ],
)
def test_what_is_no_event_is_refused_in_one_sentence(line):
    """Never another error than the journal's own."""
    with pytest.raises(JournalFault) as refusal:
        from_text(line)
    assert str(refusal.value).startswith(("A line of the journal", "An event "))


@given(st.one_of(st.text(), st.recursive(st.none() | st.integers() | st.text(), st.lists).map(json.dumps)))
def test_any_line_is_an_event_or_refused(line):
    """Nothing else comes out of reading."""
    try:
        from_text(line)
    except JournalFault:
        return


def test_kinds_are_told_apart_by_their_words():
    """No two kinds share their word in the journal."""
    words = [one.kind for one in KNOWN]
    assert len(set(words)) == len(words) == len(events._KINDS)
