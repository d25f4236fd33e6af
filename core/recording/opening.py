"""Opening a journal with care: one writer, no newer file touched, damage recovered; else for reading."""

from __future__ import annotations

import errno
import os
import sqlite3
from contextlib import closing
from dataclasses import dataclass
from pathlib import Path
from typing import IO

from core.errors import JournalFault
from core.recording.carving import carve, newest_version
from core.recording.journal import (
    APPLICATION_ID,
    FILE_NAME,
    VERSION,
    Journal,
    connect,
    faults,
    statements,
    told,
    transaction,
)
from core.recording.recovery import Recovery, completed, find_damage, finish, free_name, recover, remove

LOCK_NAME = "journal.lock"
READ_ONLY = "Here you can read, not record."

MIGRATIONS: dict[int, str] = {}
"""SQL that lifts a journal from the version of its key to the next one."""


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

    A second program on the same journal gets it for reading only, and so does the first where the disk is full or
    does not let itself be written. A file of a newer version is refused untouched. An older one is copied aside
    first and then lifted. A damaged one is copied aside as it is, and every event that can still be read goes into
    a fresh file.

    Parameters
    ----------
    folder : the data folder; it exists
    wall_time : date and time of day, ISO 8601, for the name of a file put aside

    Raises
    ------
    JournalFault : the journal is newer, or can neither be read nor made.
    """
    path = folder / FILE_NAME
    _refuse_newer(path)
    try:
        lock = _take_lock(folder)
    except OSError as fault:
        return _for_reading(path, wall_time, str(told("opened for writing", path, fault)))
    if lock is None:
        return _for_reading(path, wall_time, "Another window has this journal open.", in_use=True)
    try:
        return _for_writing(path, wall_time, lock)
    except JournalFault as fault:
        lock.close()
        return _for_reading(path, wall_time, str(fault))
    except BaseException:
        lock.close()
        raise


def _for_writing(path: Path, wall_time: str, lock: IO[str]) -> Opened:
    recovery = None
    notes: list[str] = []
    finish(path)
    if path.exists():
        fault = find_damage(path)
        if fault is not None:
            recovery = recover(path, fault, wall_time)
            notes.append(recovery.sentence)
        else:
            notes += _lift(path, wall_time)
    return Opened(Journal.on(path), recovery, tuple(notes), lock)


def _for_reading(path: Path, wall_time: str, why: str, *, in_use: bool = False) -> Opened:
    """The journal as it stands; as a copy in memory where it is damaged or cannot be opened in its place."""
    if not path.exists():
        raise JournalFault(why)
    try:
        damaged = not in_use and find_damage(path) is not None
        journal = None if damaged else Journal.on(path, read_only=True)
    except JournalFault:
        journal = None
    if journal is None:
        with faults("read", path):
            journal = Journal.of(path, completed(carve(path), wall_time))
    return Opened(journal, None, (f"{why} {READ_ONLY}",), None)


def _refuse_newer(path: Path) -> None:
    """Refuse a journal that a newer version has written, before anything opens it as a database."""
    if not path.exists():
        return
    log = path.with_name(path.name + "-wal")
    with faults("read", path), path.open("rb") as file:
        version = newest_version(file.read(100), log.read_bytes() if log.exists() else b"", APPLICATION_ID)
    if version > VERSION:
        raise JournalFault(
            f"{path.name} was written by a newer Cooltally (format {version}, this one reads up to {VERSION}); "
            "use that one, or another data folder. The file was not touched."
        )


def _lift(path: Path, wall_time: str) -> list[str]:
    """Bring an older journal to this version, step by step, after copying it aside."""
    with faults(f"brought to format {VERSION}", path), closing(connect(path, read_only=False)) as db:
        version = int(db.execute("PRAGMA user_version").fetchone()[0])
        if version in (0, VERSION):
            return []
        backup = free_name(path, f"format-{version}", wall_time)
        _back_up(db, backup)
        for step in range(version, VERSION):
            lift(db, MIGRATIONS[step], step + 1)
    return [f"The journal was brought from format {version} to {VERSION}; the old one is kept as {backup.name}."]


def _back_up(db: sqlite3.Connection, target: Path) -> None:
    part = target.with_name(target.name + ".part")
    remove(part)
    with closing(sqlite3.connect(part)) as copy:
        db.backup(copy)
    part.replace(target)


def lift(db: sqlite3.Connection, script: str, version: int) -> None:
    """One step forward: the script and the new version number in one transaction."""
    with transaction(db):
        for statement in statements(script):
            db.execute(statement)
        db.execute(f"PRAGMA user_version = {version}")


def _take_lock(folder: Path) -> IO[str] | None:
    """The lock of the journal's one writer; None where another holds it.

    Raises
    ------
    OSError : the folder does not let itself be written.
    """
    file = (folder / LOCK_NAME).open("a")
    try:
        if os.name == "nt":
            import msvcrt

            msvcrt.locking(file.fileno(), msvcrt.LK_NBLCK, 1)  # type: ignore[attr-defined,unused-ignore]
        else:
            import fcntl

            fcntl.flock(file, fcntl.LOCK_EX | fcntl.LOCK_NB)
    except OSError as fault:
        file.close()
        if fault.errno in (errno.EWOULDBLOCK, errno.EAGAIN, errno.EACCES, errno.EDEADLK):
            return None
        raise
    return file
