"""The journal: every event in one SQLite file that only ever grows.

One commit an event, write-ahead log, synchronous FULL: the log is flushed to the disk before the commit returns,
so that what was acknowledged survives a kill and a power cut; NORMAL would lose the last commits in a power cut
(sqlite.org/pragma.html#pragma_synchronous). Where a file system has no write-ahead log, EXTRA does the same for
SQLite's rollback journal. Each row carries a checksum chained to the row before it, so that damage inside a
well-formed file is noticed too. Triggers refuse to change or delete a row."""

from __future__ import annotations

import errno
import hashlib
import sqlite3
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path

from core.errors import JournalFault
from core.recording.events import Event, Foreign, Kept, RunOpened, SessionOpened, from_text, to_text

FILE_NAME = "journal.sqlite"
APPLICATION_ID = 0x436F6F6C
VERSION = 1
PAGE_SIZE = 4096
SEED = "cooltally"

_SCHEMA = f"""
CREATE TABLE event (
    number INTEGER PRIMARY KEY,
    session INTEGER NOT NULL,
    run INTEGER,
    body TEXT NOT NULL,
    chain TEXT NOT NULL
) STRICT;
CREATE INDEX event_by_run ON event (run, number);
CREATE TRIGGER event_never_changes BEFORE UPDATE ON event BEGIN SELECT RAISE(ABORT, 'events never change'); END;
CREATE TRIGGER event_never_goes BEFORE DELETE ON event BEGIN SELECT RAISE(ABORT, 'events are never deleted'); END;
PRAGMA application_id = {APPLICATION_ID};
PRAGMA user_version = {VERSION};
"""


@dataclass(frozen=True, slots=True)
class Line:
    """One row of the file as it stands there."""

    number: int
    session: int
    run: int | None
    body: str
    chain: str


class Journal:
    """An open journal. `core.recording.opening.open_journal` checks a file first, then makes one of these."""

    def __init__(self, path: Path, db: sqlite3.Connection, *, read_only: bool) -> None:
        self.path, self.read_only = path, read_only
        self._db = db
        last = db.execute("SELECT number, chain FROM event ORDER BY number DESC LIMIT 1").fetchone()
        self._number: int = last[0] if last else 0
        self._chain: str = last[1] if last else SEED

    @classmethod
    def on(cls, path: Path, *, read_only: bool = False) -> Journal:
        """The journal in a file, which is made where there is none.

        Raises
        ------
        JournalFault : the file does not let itself be opened so.
        """
        with faults("opened", path):
            db = connect(path, read_only=read_only)
            try:
                if not read_only and not has_events(db):
                    _lay_out(db)
                return cls(path, db, read_only=read_only)
            except BaseException:
                db.close()
                raise

    @classmethod
    def of(cls, path: Path, lines: Sequence[Line]) -> Journal:
        """A copy in memory, for reading only, of the lines of a file that cannot be opened as a database."""
        db = sqlite3.connect(":memory:", isolation_level=None)
        _lay_out(db)
        journal = cls(path, db, read_only=True)
        journal.restore(lines)
        return journal

    def open_session(self, event: SessionOpened) -> Kept:
        """Begin a session; its number is that of this event."""
        return self._append(None, None, event)

    def open_run(self, session: int, event: RunOpened) -> Kept:
        """Begin a run in a session; its number is that of this event."""
        return self._append(session, 0, event)

    def keep(self, session: int, run: int | None, event: Event) -> Kept:
        """Write one event durably.

        Raises
        ------
        JournalFault : the disk did not take it; nothing of it counts.
        """
        return self._append(session, run, event)

    def keep_all(self, session: int, run: int | None, events: Sequence[Event]) -> None:
        """Write several events durably, all or none, as when a finished run is taken in from elsewhere."""
        if self.read_only:
            raise JournalFault(f"{self.path.name} is open for reading only, so nothing can be recorded here.")
        number, chain = self._number, self._chain
        with faults("written", self.path), transaction(self._db):
            for event in events:
                number += 1
                body = to_text(event)
                chain = link(chain, number, session, run, body)
                self._insert(Line(number, session, run, body, chain))
        self._number, self._chain = number, chain

    def events(self, *, session: int | None = None, run: int | None = None) -> tuple[Kept, ...]:
        """The events of a session or a run, or all of them, in their order."""
        where = [f"{column} = ?" for column, value in (("session", session), ("run", run)) if value is not None]
        query = "SELECT number, session, run, body FROM event"
        if where:
            query += " WHERE " + " AND ".join(where)
        with faults("read", self.path):
            rows = self._db.execute(
                query + " ORDER BY number", [value for value in (session, run) if value is not None]
            ).fetchall()
        return tuple(Kept(number, of, in_run, from_text(body)) for number, of, in_run, body in rows)

    def sessions(self) -> tuple[Kept, ...]:
        """The opening events of all sessions, oldest first."""
        return self._openings("number = session")

    def runs(self, session: int) -> tuple[Kept, ...]:
        """The opening events of the runs of a session, oldest first."""
        return self._openings("number = run AND session = ?", session)

    def restore(self, lines: Sequence[Line]) -> None:
        """Write what was recovered from another file, with the numbers that it had, into this empty one."""
        with faults("written", self.path), transaction(self._db):
            for one in lines:
                self._chain = link(self._chain, one.number, one.session, one.run, one.body)
                self._insert(Line(one.number, one.session, one.run, one.body, self._chain))
                self._number = one.number

    def close(self) -> None:
        """Close the file; what was kept stays kept."""
        self._db.close()

    def _openings(self, where: str, *values: int) -> tuple[Kept, ...]:
        with faults("read", self.path):
            rows = self._db.execute(
                f"SELECT number, session, run, body FROM event WHERE {where} ORDER BY number", values
            ).fetchall()
        return tuple(Kept(number, of, run, from_text(body)) for number, of, run, body in rows)

    def _append(self, session: int | None, run: int | None, event: Event) -> Kept:
        """`session` None opens a session, `run` 0 opens a run: their numbers are the event's own."""
        if self.read_only:
            raise JournalFault(f"{self.path.name} is open for reading only, so nothing can be recorded here.")
        if isinstance(event, Foreign):
            raise JournalFault("An event of a newer version can be read but not written.")
        number = self._number + 1
        kept = Kept(number, session or number, number if run == 0 else run, event)
        body = to_text(event)
        chain = link(self._chain, kept.number, kept.session, kept.run, body)
        with faults("written", self.path), transaction(self._db):
            self._insert(Line(kept.number, kept.session, kept.run, body, chain))
        self._number, self._chain = number, chain
        return kept

    def _insert(self, line: Line) -> None:
        self._db.execute(
            "INSERT INTO event (number, session, run, body, chain) VALUES (?, ?, ?, ?, ?)",
            (line.number, line.session, line.run, line.body, line.chain),
        )


def connect(path: Path, *, read_only: bool) -> sqlite3.Connection:
    """A connection with the durability that this module promises."""
    mode = "ro" if read_only else "rwc"
    db = sqlite3.connect(f"{path.absolute().as_uri()}?mode={mode}", uri=True, isolation_level=None, timeout=2.0)
    if not read_only:
        try:
            db.execute(f"PRAGMA page_size = {PAGE_SIZE}")
            mode = db.execute("PRAGMA journal_mode = WAL").fetchone()[0]
            db.execute(f"PRAGMA synchronous = {'FULL' if mode == 'wal' else 'EXTRA'}")
        except BaseException:
            db.close()
            raise
    return db


def link(before: str, number: int, session: int, run: int | None, body: str) -> str:
    """The checksum of a row, chained to the row before it."""
    text = f"{before}|{number}|{session}|{run}|{body}"
    return hashlib.sha256(text.encode()).hexdigest()[:24]


def statements(script: str) -> list[str]:
    """The statements of a script, one by one, so that they fit in one transaction."""
    whole, part = [], ""
    for line in script.splitlines():
        part += line + "\n"
        if sqlite3.complete_statement(part):
            whole.append(part)
            part = ""
    return whole


def has_events(db: sqlite3.Connection) -> bool:
    """Whether the table of events is there."""
    return bool(db.execute("SELECT 1 FROM sqlite_master WHERE type = 'table' AND name = 'event'").fetchone())


def _lay_out(db: sqlite3.Connection) -> None:
    with transaction(db):
        for statement in statements(_SCHEMA):
            db.execute(statement)


@contextmanager
def transaction(db: sqlite3.Connection) -> Iterator[None]:
    """All of it or nothing."""
    db.execute("BEGIN IMMEDIATE")
    try:
        yield
        db.execute("COMMIT")
    except BaseException:
        if db.in_transaction:
            db.execute("ROLLBACK")
        raise


@contextmanager
def faults(done: str, path: Path) -> Iterator[None]:
    """Turn what SQLite or the system says into a JournalFault: the file could not be `done`."""
    try:
        yield
    except (sqlite3.Error, OSError) as fault:
        raise told(done, path, fault) from fault


def told(done: str, path: Path, fault: sqlite3.Error | OSError) -> JournalFault:
    """A fault of SQLite or the system in words: the file could not be `done`, why, and what to do."""
    why = _plain(fault) if isinstance(fault, sqlite3.Error) else _plain_system(fault)
    return JournalFault(f"{path.name} could not be {done}: {why}")


FULL = "the disk is full; free some space, nothing that was confirmed is lost."
CLOSED = "the disk or folder does not let itself be written; check its permissions."
FAULTY = "the disk reports a fault; copy the journal away and use another disk."


def _plain(fault: sqlite3.Error) -> str:
    name = getattr(fault, "sqlite_errorname", "") or ""
    if name.startswith(("SQLITE_FULL", "SQLITE_IOERR_SHMSIZE")):
        return FULL
    if name.startswith(("SQLITE_READONLY", "SQLITE_CANTOPEN")):
        return CLOSED
    if name.startswith("SQLITE_IOERR"):
        return FAULTY
    if name.startswith("SQLITE_BUSY"):
        return "another program holds it; close that one."
    return f"{fault}."


def _plain_system(fault: OSError) -> str:
    if fault.errno in (errno.ENOSPC, errno.EDQUOT):
        return FULL
    if fault.errno in (errno.EACCES, errno.EPERM, errno.EROFS):
        return CLOSED
    if fault.errno == errno.EIO:
        return FAULTY
    return f"{fault.strerror or fault}."
