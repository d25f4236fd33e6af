"""A damaged journal is noticed at start, kept aside as it is, and every event that can be read is recovered."""

import random
import shutil
from dataclasses import replace

import pytest

from core.errors import JournalFault
from core.recording import recovery
from core.recording.carving import carve, prove
from core.recording.events import Decided, RunOpened, SessionOpened, to_text
from core.recording.journal import FILE_NAME
from core.recording.opening import open_journal
from core.recording.recovery import find_damage
from tests.recording.journals import WALL_TIME, journal_in, left_open, record

PAGE = 4096


@pytest.fixture(scope="module")
def two_sessions(tmp_path_factory):
    """The bytes of a journal of two sessions, closed well, and its events."""
    folder = tmp_path_factory.mktemp("sound")
    with journal_in(folder) as journal:
        for _ in range(2):
            record(journal, runs=3, taps=60)
        journal.keep(1, None, Decided("look", "a long word " * 900))
        events = journal.events()
    return (folder / FILE_NAME).read_bytes(), events


@pytest.fixture
def closed(two_sessions, tmp_path):
    """A file of such a journal, and its events."""
    data, events = two_sessions
    path = tmp_path / FILE_NAME
    path.write_bytes(data)
    return path, events


def reopened(path):
    """Open a journal, return its events, the report and whether the damaged file stands aside as it was."""
    before = {
        suffix: (path.with_name(path.name + suffix)).read_bytes()
        for suffix in ("", "-wal")
        if path.with_name(path.name + suffix).exists()
    }
    opened = open_journal(path.parent, wall_time=WALL_TIME)
    events, report = opened.journal.events(), opened.recovery
    if report is not None:
        assert opened.notes[0] == report.sentence
        for suffix, data in before.items():
            assert report.aside.with_name(report.aside.name + suffix).read_bytes() == data
        assert opened.journal.keep(1, None, Decided("keep")).number == events[-1].number + 1 if events else True
    opened.close()
    assert find_damage(path) is None
    return events, report


def made_up(kept):
    """Whether this is an opening put in place of one that was lost."""
    return isinstance(kept.event, SessionOpened | RunOpened) and kept.number in (kept.session, kept.run)


def test_a_sound_journal_is_carved_whole(closed):
    """Reading without the database gives every event, the one longer than a page too, and no other."""
    path, events = closed
    carved = carve(path)
    assert [(one.number, one.session, one.run, one.body) for one in carved.lines] == [
        (one.number, one.session, one.run, to_text(one.event)) for one in events
    ]
    assert (carved.lost, carved.unproven) == (0, 0)


def test_a_log_left_by_a_kill_is_carved_with_the_file(tmp_path):
    """The newest events stand only there."""
    left_open(tmp_path, runs=3)
    carved = carve(tmp_path / FILE_NAME)
    assert [one.number for one in carved.lines] == list(range(1, 1 + 3 * 35 + 1))
    assert carved.lost == 0
    assert find_damage(tmp_path / FILE_NAME) is None


def flip_bits(path, events, seed, count):
    """Flip so many bits, one at a time; how many were noticed and how many events were lost in all.

    What is read is the truth each time, or a part of it with a report that counts what is missing."""
    truth = {one.number: one for one in events}
    whole = path.read_bytes()
    chance = random.Random(seed)
    noticed, lost = 0, 0
    for _ in range(count):
        data = bytearray(whole)
        place = chance.randrange(len(data))
        data[place] ^= 1 << chance.randrange(8)
        path.write_bytes(data)
        read, report = reopened(path)
        if report is None:
            assert read == events, place
        else:
            assert all(truth.get(one.number) == one or made_up(one) for one in read), place
            assert len(events) - len(read) <= report.lost <= 3
            noticed, lost = noticed + 1, lost + report.lost
        for one in path.parent.glob("journal-damaged-*"):
            one.unlink()
    return noticed, lost


def test_any_flipped_bit_is_noticed_or_harms_nothing(closed):
    """At random places in a sound file."""
    path, events = closed
    noticed, _ = flip_bits(path, events, seed=5, count=15)
    assert noticed >= 5


@pytest.mark.parametrize("page", range(8))
def test_a_page_of_rubbish_costs_what_stood_on_it_and_no_more(closed, page):
    """The first page, an index page or a page of events: the others are recovered, the loss is counted."""
    path, events = closed
    data = bytearray(path.read_bytes())
    data[page * PAGE : (page + 1) * PAGE] = random.Random(page).randbytes(PAGE)
    path.write_bytes(data)
    read, report = reopened(path)
    assert report is not None
    original = set(events)
    kept = [one for one in read if one in original]
    assert len(kept) >= len(events) - 60
    assert len(events) - len(kept) == report.lost
    assert {one.session for one in kept} <= {one.session for one in read if one.number == one.session}


def test_a_file_cut_short_gives_what_is_left(closed):
    """As after a copy that broke off."""
    path, events = closed
    data = path.read_bytes()
    path.write_bytes(data[: len(data) * 2 // 3 + 11])
    read, report = reopened(path)
    assert report is not None
    assert len(read) > len(events) / 3
    assert all(one in events or made_up(one) for one in read)


@pytest.mark.parametrize("content", [b"", b"not a journal at all\n" * 300, b"\0" * 5000])
def test_a_file_of_something_else_is_put_aside_and_a_fresh_one_begun(tmp_path, content):
    """Only a file of no bytes is taken for a new one."""
    path = tmp_path / FILE_NAME
    path.write_bytes(content)
    read, report = reopened(path)
    assert read == ()
    assert (report is None) == (not content)


def test_a_word_changed_by_hand_is_noticed(closed):
    """The database is sound, the checksum is not: that event is left out and named as lost."""
    path, events = closed
    data = path.read_bytes()
    changed = data.replace(b'"stamp_s": 117.5', b'"stamp_s": 118.5', 1)
    assert changed != data
    path.write_bytes(changed)
    assert "checksum" in find_damage(path)
    read, report = reopened(path)
    assert len(read) == len(events) - 1 == report.events
    assert report.lost == 1
    assert "1 could not be read" in report.sentence


def test_a_checksum_that_is_damaged_alone_costs_nothing(closed):
    """The next event's checksum proves the event before it."""
    path, events = closed
    data = bytearray(path.read_bytes())
    place = data.index(b'"stamp_s": 117.5') + 40
    while not data[place : place + 24].isalnum():
        place += 1
    data[place] = ord("0") if data[place] != ord("0") else ord("1")
    path.write_bytes(data)
    read, report = reopened(path)
    assert report is not None
    assert read == events


@pytest.mark.parametrize("number", [40, 200])
def test_an_event_whose_number_is_damaged_goes_back_to_its_place(closed, number):
    """Its checksum tells which number it had."""
    path, _ = closed
    sound = carve(path).lines
    wrong = [replace(one, number=8561) if one.number == number else one for one in sound]
    carved = prove(wrong)
    assert carved.lines == sound
    assert (carved.lost, carved.unproven) == (0, 0)


def test_a_log_damaged_in_its_middle_loses_nothing(tmp_path):
    """SQLite stops at the first bad frame; the later ones are read all the same."""
    left_open(tmp_path, runs=2, taps=40)
    path = tmp_path / FILE_NAME
    whole = {one.number for one in carve(path).lines}
    log = path.with_name(path.name + "-wal")
    data = bytearray(log.read_bytes())
    frame = PAGE + 24
    data[32 + 30 * frame + 24 : 32 + 30 * frame + 24 + PAGE] = b"\xff" * PAGE
    log.write_bytes(data)
    read, report = reopened(path)
    assert report is not None
    assert {one.number for one in read} == whole
    assert report.lost == 0


def test_a_log_torn_at_its_end_is_no_damage(tmp_path):
    """That is what a power cut leaves: the event being written was not confirmed."""
    left_open(tmp_path)
    path = tmp_path / FILE_NAME
    whole = len(carve(path).lines)
    log = path.with_name(path.name + "-wal")
    log.write_bytes(log.read_bytes()[:-1500])
    read, report = reopened(path)
    assert report is None
    assert len(read) == whole - 1


@pytest.mark.parametrize("cut", range(12))
def test_a_recovery_that_is_cut_off_is_done_again(closed, monkeypatch, cut):
    """Killed at any of its steps, the next start finishes it: nothing lost, the damaged file still there."""
    path, _ = closed
    data = bytearray(path.read_bytes())
    data[:PAGE] = bytes(PAGE)
    path.write_bytes(data)
    expected, _ = reopened_in_copy(path)

    steps = iter(range(cut))

    def or_cut(original):
        def step(*args, **options):
            if next(steps, None) is None:
                raise KeyboardInterrupt
            return original(*args, **options)

        return step

    with monkeypatch.context() as patched:
        for name in ("_copy", "remove", "carve", "free_name"):
            patched.setattr(recovery, name, or_cut(getattr(recovery, name)))
        for name in ("replace", "unlink"):
            patched.setattr(type(path), name, or_cut(getattr(type(path), name)))
        try:
            open_journal(path.parent, wall_time=WALL_TIME).close()
        except KeyboardInterrupt:
            assert next(steps, None) is None
    opened = open_journal(path.parent, wall_time=WALL_TIME)
    assert [one.event for one in opened.journal.events()] == [one.event for one in expected]
    opened.close()
    assert any(one.read_bytes() == bytes(data) for one in path.parent.glob("journal-damaged-*.sqlite"))


def reopened_in_copy(path):
    """What a recovery without a cut gives."""
    folder = path.parent / "copy"
    folder.mkdir()
    shutil.copyfile(path, folder / FILE_NAME)
    result = reopened(folder / FILE_NAME)
    shutil.rmtree(folder)
    return result


def test_damage_that_cannot_be_copied_aside_is_still_read(closed, monkeypatch):
    """Where the disk takes no copy the journal is shown as far as it can be read, and stands as it was."""
    path, events = closed
    data = bytearray(path.read_bytes())
    data[:PAGE] = bytes(PAGE)
    path.write_bytes(data)

    def full(_source, _target):
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(recovery, "_copy", full)
    opened = open_journal(path.parent, wall_time=WALL_TIME)
    assert opened.journal.read_only
    assert "the disk is full" in opened.notes[0]
    assert len(opened.journal.events()) >= len(events) - 60
    with pytest.raises(JournalFault):
        opened.journal.keep(1, None, Decided("keep"))
    opened.close()
    assert path.read_bytes() == bytes(data)
