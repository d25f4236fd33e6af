"""What is written is there again, in its order; nothing is changed or deleted; one program writes, others read."""

import hashlib
import os
import sqlite3
from contextlib import closing

import pytest

from core.errors import JournalFault
from core.recording import opening
from core.recording.events import Foreign, SessionOpened, Tapped
from core.recording.journal import APPLICATION_ID, FILE_NAME, Journal
from core.recording.opening import open_journal
from core.recording.recovery import find_damage
from tests.recording.journals import WALL_TIME, journal_in, left_open, record


def fingerprints(folder):
    """Every file but the lock, by its content."""
    files = (one for one in folder.iterdir() if one.name != opening.LOCK_NAME)
    return {one.name: hashlib.sha256(one.read_bytes()).hexdigest() for one in files}


def test_sessions_and_runs_are_listed_as_they_were_made(tmp_path):
    """Closed and opened again, all is there, and numbering goes on."""
    with journal_in(tmp_path) as journal:
        first = record(journal, runs=2)
        second = record(journal, runs=3)
        before = journal.events()
    with journal_in(tmp_path) as journal:
        assert [one.session for one in journal.sessions()] == [first, second]
        assert len(journal.runs(first)) == 2
        assert len(journal.runs(second)) == 3
        assert journal.events() == before
        run = journal.runs(second)[1].number
        of_run = journal.events(run=run)
        assert {one.run for one in of_run} == {run}
        assert of_run == tuple(one for one in before if one.run == run)
        kept = journal.keep(second, run, Tapped(400.0, 1))
        assert kept.number == before[-1].number + 1
        assert journal.events(run=run)[-1] == kept


def test_a_new_journal_is_empty(tmp_path):
    """And of this version."""
    with journal_in(tmp_path) as journal:
        assert journal.sessions() == ()
        assert journal.events() == ()
    assert find_damage(tmp_path / FILE_NAME) is None


@pytest.mark.parametrize(
    "statement", ["DELETE FROM event", "UPDATE event SET body = '{}'", "DELETE FROM event WHERE number = 3"]
)
def test_no_row_is_changed_or_deleted(tmp_path, statement):
    """The file itself refuses, whoever asks."""
    with journal_in(tmp_path) as journal:
        record(journal)
    with closing(sqlite3.connect(tmp_path / FILE_NAME)) as db, pytest.raises(sqlite3.IntegrityError):
        db.execute(statement)


def test_a_second_window_says_so_and_only_reads(tmp_path):
    """It sees what the first one writes meanwhile, and can write when it is opened after the first has closed."""
    first = open_journal(tmp_path, wall_time=WALL_TIME)
    session = record(first.journal)
    second = open_journal(tmp_path, wall_time=WALL_TIME)
    assert "Another window" in second.notes[0]
    assert second.journal.read_only
    assert second.journal.events() == first.journal.events()
    first.journal.keep(session, None, Tapped(1.0, 1))
    assert second.journal.events() == first.journal.events()
    with pytest.raises(JournalFault, match="reading only"):
        second.journal.keep(session, None, Tapped(2.0, 1))
    with pytest.raises(JournalFault, match="reading only"):
        second.journal.keep_all(session, None, [Tapped(2.0, 1)])
    second.close()
    first.close()
    third = open_journal(tmp_path, wall_time=WALL_TIME)
    assert not third.notes
    assert not third.journal.read_only
    third.close()


def test_an_event_of_a_newer_version_is_read_but_never_written(tmp_path):
    """It stands in the list as what it is."""
    with journal_in(tmp_path) as journal:
        session = record(journal)
        with pytest.raises(JournalFault):
            journal.keep(session, None, Foreign('{"kind": "whistled"}'))


def test_a_newer_journal_is_refused_untouched(tmp_path):
    """Not a byte of any file is other afterwards."""
    with journal_in(tmp_path) as journal:
        record(journal)
    with closing(sqlite3.connect(tmp_path / FILE_NAME, isolation_level=None)) as db:
        db.execute(f"PRAGMA user_version = {opening.VERSION + 1}")
    before = fingerprints(tmp_path)
    with pytest.raises(JournalFault, match="newer Cooltally"):
        open_journal(tmp_path, wall_time=WALL_TIME)
    assert fingerprints(tmp_path) == before


def test_a_newer_journal_whose_program_was_killed_is_refused_untouched(tmp_path):
    """Its format number then stands only in the log beside it."""
    left_open(tmp_path)
    child = os.fork()
    if child == 0:
        db = sqlite3.connect(tmp_path / FILE_NAME, isolation_level=None)
        db.execute(f"PRAGMA user_version = {opening.VERSION + 1}")
        os._exit(0)
    os.waitpid(child, 0)
    before = fingerprints(tmp_path)
    assert int.from_bytes((tmp_path / FILE_NAME).read_bytes()[60:64], "big") <= opening.VERSION
    with pytest.raises(JournalFault, match="newer Cooltally"):
        open_journal(tmp_path, wall_time=WALL_TIME)
    assert fingerprints(tmp_path) == before


def test_an_older_journal_is_copied_aside_and_lifted(tmp_path, monkeypatch):
    """Two steps forward, all events kept, the old file whole beside it; the second time there is nothing to do."""
    with journal_in(tmp_path) as journal:
        record(journal)
        before = journal.events()
    monkeypatch.setattr(opening, "VERSION", 3)
    steps = {1: "ALTER TABLE event ADD COLUMN hand TEXT;\n", 2: "CREATE TABLE remark (words TEXT);\n"}
    monkeypatch.setattr(opening, "MIGRATIONS", steps)
    opened = open_journal(tmp_path, wall_time=WALL_TIME)
    assert opened.journal.events() == before
    assert "format 1 to 3" in opened.notes[0]
    opened.close()
    (backup,) = tmp_path.glob("journal-format-1-*.sqlite")
    with closing(sqlite3.connect(backup)) as old:
        assert old.execute("PRAGMA user_version").fetchone() == (1,)
        assert old.execute("SELECT count(*) FROM event").fetchone() == (len(before),)
    again = open_journal(tmp_path, wall_time=WALL_TIME)
    assert not again.notes
    again.close()


def test_a_step_forward_that_fails_leaves_the_old_journal(tmp_path, monkeypatch):
    """Half of a step is never left; the journal can be read meanwhile, and the reason is told."""
    with journal_in(tmp_path) as journal:
        record(journal)
        before = journal.events()
    monkeypatch.setattr(opening, "VERSION", 2)
    monkeypatch.setattr(opening, "MIGRATIONS", {1: "CREATE TABLE remark (words TEXT);\nSELECT no_such_thing();\n"})
    opened = open_journal(tmp_path, wall_time=WALL_TIME)
    assert opened.journal.read_only
    assert opened.journal.events() == before
    assert "format 2" in opened.notes[0]
    opened.close()
    with closing(sqlite3.connect(tmp_path / FILE_NAME)) as db:
        assert db.execute("PRAGMA user_version").fetchone() == (1,)
        assert not db.execute("SELECT 1 FROM sqlite_master WHERE name = 'remark'").fetchone()


def test_several_events_are_kept_all_or_none(tmp_path):
    """A number that JSON cannot hold in the middle: nothing of it stays, and writing goes on."""
    with journal_in(tmp_path) as journal:
        session = record(journal)
        before = journal.events()
        with pytest.raises(ValueError, match="JSON"):
            journal.keep_all(session, None, [Tapped(1.0, 1), Tapped(float("nan"), 1)])
        assert journal.events() == before
        journal.keep_all(session, None, [Tapped(1.0, 1), Tapped(2.0, 1)])
        assert len(journal.events()) == len(before) + 2
    assert find_damage(tmp_path / FILE_NAME) is None


def test_the_file_says_whose_it_is(tmp_path):
    """Application id and format number stand in its header."""
    with closing(Journal.on(tmp_path / FILE_NAME)) as journal:
        journal.open_session(SessionOpened("a", WALL_TIME))
    head = (tmp_path / FILE_NAME).read_bytes()[:100]
    assert int.from_bytes(head[68:72], "big") == APPLICATION_ID
    assert int.from_bytes(head[60:64], "big") == opening.VERSION


def test_a_folder_that_cannot_be_made_is_refused_in_words(tmp_path):
    """No journal, no folder: one sentence."""
    with pytest.raises(JournalFault, match="could not be opened"):
        open_journal(tmp_path / "gone", wall_time=WALL_TIME)
