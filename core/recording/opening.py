"""Opening a journal with care: one writer, no newer file touched, damage noticed, put aside and recovered."""

from __future__ import annotations

import os
import shutil
import sqlite3
from contextlib import closing, suppress
from dataclasses import dataclass
from pathlib import Path
from typing import IO

from core.errors import JournalFault
from core.recording.events import BenchDescribed, Kept, RunOpened, SessionOpened, from_text
from core.recording.journal import (
    APPLICATION_ID,
    FILE_NAME,
    SEED,
    VERSION,
    Journal,
    connect,
    link,
    statements,
    transaction,
)

LOCK_NAME = "journal.lock"
SIDE_FILES = ("", "-wal", "-shm")

MIGRATIONS: dict[int, str] = {}
"""SQL that lifts a journal from the version of its key to the next one."""


@dataclass(frozen=True, slots=True)
class Recovery:
    """What was found damaged and what was saved. `aside` is where the damaged file stands, untouched."""

    fault: str
    aside: Path
    events: int
    lost: int

    @property
    def sentence(self) -> str:
        """The report for the person."""
        lost = "nothing is known to be lost" if not self.lost else f"{self.lost} could not be read"
        return (
            f"The journal was damaged ({self.fault}). {self.events} events were recovered, {lost}; "
            f"the damaged file is kept as {self.aside.name}."
        )


@dataclass(frozen=True, slots=True)
class Opened:
    """An open journal, and what there is to tell of it. `lock` is held as long as the journal is in use."""

    journal: Journal
    recovery: Recovery | None
    notes: tuple[str, ...]
    lock: IO[str] | None

    def close(self) -> None:
        """Close the journal and let another program write it."""
        self.journal.close()
        if self.lock is not None:
            self.lock.close()


def open_journal(folder: Path, *, wall_time: str) -> Opened:
    """Open the journal of a data folder, making it where there is none.

    A second program on the same journal gets it for reading only. A file of a newer version is refused untouched.
    An older one is copied aside first and then lifted. A damaged one is moved aside as it is, and every event
    that can still be read goes into a fresh file.

    Parameters
    ----------
    folder : the data folder; it exists
    wall_time : date and time of day, ISO 8601, for the name of a file put aside

    Raises
    ------
    JournalFault : the journal is newer, or can neither be read nor replaced.
    """
    path = folder / FILE_NAME
    _refuse_newer(path)
    lock = _take_lock(folder)
    if lock is None:
        if not path.exists():
            raise JournalFault(
                f"{folder} cannot be written, so no journal can be made there; choose another folder."
            )
        note = "Another window has this journal open, or its folder cannot be written: you can read, not record."
        return Opened(Journal(path, read_only=True), None, (note,), None)
    try:
        recovery = None
        notes: list[str] = []
        if path.exists():
            fault = find_damage(path)
            if fault is not None:
                recovery = recover(path, fault, wall_time)
                notes.append(recovery.sentence)
            else:
                notes += _lift(path, wall_time)
        return Opened(Journal(path), recovery, tuple(notes), lock)
    except BaseException:
        lock.close()
        raise


def find_damage(path: Path) -> str | None:
    """What is wrong with a journal file, in a few words; None for a sound one."""
    try:
        with closing(connect(path, read_only=False)) as db:
            words = db.execute("PRAGMA quick_check").fetchone()[0]
            if words != "ok":
                return str(words).splitlines()[0][:80]
            chain = SEED
            for number, session, run, body, sealed in db.execute(
                "SELECT number, session, run, body, chain FROM event ORDER BY number"
            ):
                chain = link(chain, number, session, run, body)
                if chain != sealed:
                    return f"event {number} does not fit its checksum"
    except sqlite3.OperationalError as fault:
        if "no such table" in str(fault):
            return None if path.stat().st_size == 0 or _is_ours(path) else "it holds no events"
        return str(fault)[:80]
    except (sqlite3.Error, UnicodeError, TypeError, ValueError) as fault:
        return str(fault)[:80]
    return None


def recover(path: Path, fault: str, wall_time: str) -> Recovery:
    """Move a damaged journal aside and put every event that can be read into a fresh one at its place."""
    aside = _aside(path, "damaged", wall_time)
    for suffix in SIDE_FILES:
        source = path.with_name(path.name + suffix)
        if source.exists():
            source.rename(aside.with_name(aside.name + suffix))
    saved, lost = _readable(aside)
    saved += _openings_for(saved, wall_time)
    fresh = path.with_name(path.name + ".recovering")
    _remove(fresh)
    with closing(Journal(fresh)) as journal:
        journal.restore(sorted(saved, key=lambda one: one.number))
    with closing(connect(fresh, read_only=False)) as db:
        db.execute("PRAGMA wal_checkpoint(TRUNCATE)")
    fresh.replace(path)
    _remove(fresh)
    return Recovery(fault, aside, len(saved), lost)


def _openings_for(saved: list[Kept], wall_time: str) -> list[Kept]:
    """Openings in place of lost ones, so that what was recovered in them is listed."""
    present = {one.number for one in saved}
    made: dict[int, Kept] = {}
    for one in saved:
        if one.session not in present:
            made[one.session] = Kept(one.session, one.session, None, SessionOpened("Recovered session", wall_time))
        if one.run is not None and one.run not in present:
            benches = [
                other.event.setup_toml
                for other in saved
                if other.session == one.session and isinstance(other.event, BenchDescribed | RunOpened)
            ]
            made[one.run] = Kept(
                one.run,
                one.session,
                one.run,
                RunOpened("measured", benches[0] if benches else "", wall_time, "unknown", 0.0),
            )
    return list(made.values())


def _remove(path: Path) -> None:
    for suffix in SIDE_FILES:
        path.with_name(path.name + suffix).unlink(missing_ok=True)


def _readable(damaged: Path) -> tuple[list[Kept], int]:
    """Events that can be read one by one, and how many numbers up to the highest one cannot."""
    saved: list[Kept] = []
    highest = 0
    with suppress(sqlite3.Error, UnicodeError):
        copy = damaged.with_name(damaged.name + ".reading")
        for suffix in ("", "-wal"):
            source = damaged.with_name(damaged.name + suffix)
            if source.exists():
                shutil.copyfile(source, copy.with_name(copy.name + suffix))
        try:
            with closing(connect(copy, read_only=False)) as db:
                db.execute("PRAGMA writable_schema = ON")
                highest = _highest(db)
                before: str | None = SEED
                for number in range(1, highest + 1):
                    kept, before = _one(db, number, before)
                    if kept is not None:
                        saved.append(kept)
        finally:
            _remove(copy)
    return saved, highest - len(saved)


def _highest(db: sqlite3.Connection) -> int:
    with suppress(sqlite3.Error, TypeError, ValueError):
        return int(db.execute("SELECT max(number) FROM event").fetchone()[0] or 0)
    return 0


def _one(db: sqlite3.Connection, number: int, before: str | None) -> tuple[Kept | None, str | None]:
    """One event, if it can be read and fits its checksum, and the checksum for the next one.

    `before` is the checksum of the row before, None where that row could not be read."""
    with suppress(sqlite3.Error, JournalFault, UnicodeError, TypeError, ValueError):
        row = db.execute("SELECT session, run, body, chain FROM event WHERE number = ?", (number,)).fetchone()
        if row is not None:
            session, run, body, chain = row
            if before is not None and link(before, number, session, run, body) != chain:
                return None, str(chain)
            return Kept(number, int(session), run, from_text(body)), str(chain)
    return None, None


def _aside(path: Path, why: str, wall_time: str) -> Path:
    stamp = "".join(c for c in wall_time if c.isalnum())
    for count in range(1000):
        name = f"journal-{why}-{stamp}{f'-{count}' if count else ''}.sqlite"
        if not path.with_name(name).exists():
            return path.with_name(name)
    raise JournalFault(f"There are too many files named journal-{why}-… in {path.parent}; move them away.")


def _version(path: Path) -> tuple[int, int]:
    """Application id and schema version, read from the file's header without opening it as a database
    (sqlite.org/fileformat.html#the_database_header: bytes 68 and 60)."""
    with path.open("rb") as file:
        header = file.read(100)
    if len(header) < 100:
        return 0, 0
    return int.from_bytes(header[68:72], "big"), int.from_bytes(header[60:64], "big")


def _is_ours(path: Path) -> bool:
    return _version(path)[0] in (0, APPLICATION_ID)


def _refuse_newer(path: Path) -> None:
    if not path.exists():
        return
    try:
        application, version = _version(path)
    except OSError as fault:
        raise JournalFault(f"{path} cannot be read: {fault.strerror}; check its permissions.") from fault
    if application == APPLICATION_ID and version > VERSION:
        raise JournalFault(
            f"{path.name} was written by a newer Cooltally (format {version}, this one reads up to {VERSION}); "
            "use that one, or another data folder. The file was not touched."
        )


def _lift(path: Path, wall_time: str) -> list[str]:
    """Bring an older journal to this version, step by step, after copying it aside."""
    with closing(connect(path, read_only=False)) as db:
        version = int(db.execute("PRAGMA user_version").fetchone()[0])
        if version in (0, VERSION):
            return []
        backup = _aside(path, f"format-{version}", wall_time)
        with closing(sqlite3.connect(backup)) as copy:
            db.backup(copy)
        for step in range(version, VERSION):
            lift(db, MIGRATIONS[step], step + 1)
    return [f"The journal was brought from format {version} to {VERSION}; the old one is kept as {backup.name}."]


def lift(db: sqlite3.Connection, script: str, version: int) -> None:
    """One step forward: the script and the new version number in one transaction."""
    with transaction(db):
        for statement in statements(script):
            db.execute(statement)
        db.execute(f"PRAGMA user_version = {version}")


def _take_lock(folder: Path) -> IO[str] | None:
    """The lock of the journal's one writer; None where another holds it or the folder cannot be written."""
    try:
        file = (folder / LOCK_NAME).open("a")
    except OSError:
        return None
    try:
        if os.name == "nt":
            import msvcrt

            msvcrt.locking(file.fileno(), msvcrt.LK_NBLCK, 1)  # type: ignore[attr-defined,unused-ignore]
        else:
            import fcntl

            fcntl.flock(file, fcntl.LOCK_EX | fcntl.LOCK_NB)
    except OSError:
        file.close()
        return None
    return file
