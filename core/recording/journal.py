"""The journal: every event in one SQLite file that only ever grows.

One commit an event, write-ahead log, synchronous FULL: the log is flushed to the disk before the commit returns,
so that what was acknowledged survives a kill and a power cut (sqlite.org/pragma.html#pragma_synchronous). Each
row carries a checksum chained to the row before it, so that damage inside a well-formed file is noticed too.
Triggers refuse to change or delete a row."""

from __future__ import annotations

import hashlib
import sqlite3
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from pathlib import Path

from core.errors import JournalFault
from core.recording.events import Event, Foreign, Kept, RunOpened, SessionOpened, from_text, to_text

FILE_NAME = "journal.sqlite"
APPLICATION_ID = 0x436F6F6C
VERSION = 1
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


class Journal:
    """An open journal. Made by `core.recording.opening.open_journal`, which checks the file first."""

    def __init__(self, path: Path, *, read_only: bool = False) -> None:
        self.path = path
        self.read_only = read_only
        with _faults("opened", path):
            self._db = connect(path, read_only=read_only)
            if not read_only and not _tables(self._db):
                with transaction(self._db):
                    for statement in statements(_SCHEMA):
                        self._db.execute(statement)
            last = self._db.execute("SELECT number, chain FROM event ORDER BY number DESC LIMIT 1").fetchone()
        self._number: int = last[0] if last else 0
        self._chain: str = last[1] if last else SEED

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
        with _faults("written", self.path), transaction(self._db):
            for event in events:
                number += 1
                body = to_text(event)
                chain = link(chain, number, session, run, body)
                self._insert(Kept(number, session, run, event), body, chain)
        self._number, self._chain = number, chain

    def events(self, *, session: int | None = None, run: int | None = None) -> tuple[Kept, ...]:
        """The events of a session or a run, or all of them, in their order."""
        where = [f"{column} = ?" for column, value in (("session", session), ("run", run)) if value is not None]
        query = "SELECT number, session, run, body FROM event"
        if where:
            query += " WHERE " + " AND ".join(where)
        with _faults("read", self.path):
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

    def restore(self, events: Sequence[Kept]) -> None:
        """Write events recovered from another file, with the numbers that they had, into this empty one."""
        with _faults("written", self.path), transaction(self._db):
            for one in events:
                body = to_text(one.event)
                self._chain = link(self._chain, one.number, one.session, one.run, body)
                self._insert(one, body, self._chain)
                self._number = one.number

    def close(self) -> None:
        """Close the file; what was kept stays kept."""
        self._db.close()

    def _openings(self, where: str, *values: int) -> tuple[Kept, ...]:
        with _faults("read", self.path):
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
        with _faults("written", self.path), transaction(self._db):
            self._insert(kept, body, chain)
        self._number, self._chain = number, chain
        return kept

    def _insert(self, kept: Kept, body: str, chain: str) -> None:
        self._db.execute(
            "INSERT INTO event (number, session, run, body, chain) VALUES (?, ?, ?, ?, ?)",
            (kept.number, kept.session, kept.run, body, chain),
        )


def connect(path: Path, *, read_only: bool) -> sqlite3.Connection:
    """A connection with the durability that this module promises."""
    mode = "ro" if read_only else "rwc"
    db = sqlite3.connect(f"{path.absolute().as_uri()}?mode={mode}", uri=True, isolation_level=None, timeout=2.0)
    if not read_only:
        db.execute("PRAGMA journal_mode = WAL")
        db.execute("PRAGMA synchronous = FULL")
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


def _tables(db: sqlite3.Connection) -> bool:
    return bool(db.execute("SELECT 1 FROM sqlite_master WHERE type = 'table' AND name = 'event'").fetchone())


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
def _faults(done: str, path: Path) -> Iterator[None]:
    try:
        yield
    except sqlite3.Error as fault:
        raise JournalFault(f"{path.name} could not be {done}: {_plain(fault)}") from fault


def _plain(fault: sqlite3.Error) -> str:
    name = getattr(fault, "sqlite_errorname", "") or ""
    if name.startswith("SQLITE_FULL"):
        return "the disk is full; free some space, nothing that was confirmed is lost."
    if name.startswith(("SQLITE_READONLY", "SQLITE_CANTOPEN")):
        return "the disk or folder does not let itself be written; check its permissions."
    if name.startswith("SQLITE_IOERR"):
        return "the disk reports a fault; copy the journal away and use another disk."
    if name.startswith("SQLITE_BUSY"):
        return "another program holds it; close that one."
    return f"{fault}."
