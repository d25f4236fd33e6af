"""A damaged journal: noticed, put aside as it is, and every event that can be read brought into a fresh file."""

from __future__ import annotations

import os
import sqlite3
from contextlib import closing, suppress
from dataclasses import dataclass
from pathlib import Path

from core.errors import JournalFault
from core.recording.carving import Carved, carve, commits_beyond
from core.recording.events import BenchDescribed, RunOpened, SessionOpened, from_text, to_text
from core.recording.journal import SEED, Journal, Line, connect, faults, has_events, link, told

SIDE_FILES = ("-wal", "-shm")
MAGIC = b"SQLite format 3\0"
OUT_OF_REACH = ("SQLITE_CANTOPEN", "SQLITE_IOERR", "SQLITE_FULL", "SQLITE_READONLY", "SQLITE_BUSY")


@dataclass(frozen=True, slots=True)
class Recovery:
    """What was found damaged and what was saved. `aside` is where the damaged file stands, untouched.

    `lost` events are known to be missing; `unproven` ones were read, but their checksum could not be tried."""

    fault: str
    aside: Path
    events: int
    lost: int
    unproven: int

    @property
    def sentence(self) -> str:
        """The report for the person."""
        lost = "nothing is known to be lost" if not self.lost else f"{self.lost} could not be read"
        return (
            f"The journal was damaged ({self.fault}). {self.events} events were recovered, {lost}; "
            f"the damaged file is kept as {self.aside.name}."
        )


def find_damage(path: Path) -> str | None:
    """What is wrong with a journal file, in a few words; None for a sound one. Nothing in the file is changed.

    Raises
    ------
    JournalFault : the file is out of reach, so that nothing can be said of it.
    """
    with faults("read", path):
        with path.open("rb") as file:
            head = file.read(len(MAGIC))
        log = path.with_name(path.name + "-wal")
        log_bytes = log.read_bytes() if log.exists() else b""
    if not head and not log_bytes:
        return None
    if head != MAGIC:
        return "its beginning is gone"
    try:
        with closing(connect(path, read_only=True)) as db:
            return _damage_inside(path, db, log_bytes)
    except sqlite3.Error as fault:
        if (getattr(fault, "sqlite_errorname", "") or "").startswith(OUT_OF_REACH):
            raise told("read", path, fault) from fault
        return str(fault)[:80]
    except (UnicodeError, TypeError, ValueError) as fault:
        return str(fault)[:80]


def _damage_inside(path: Path, db: sqlite3.Connection, log: bytes) -> str | None:
    words = str(db.execute("PRAGMA integrity_check(1)").fetchone()[0])
    if words != "ok":
        return words.splitlines()[-1][:80]
    if not has_events(db):
        with faults("read", path):
            return "its table of events is gone" if carve(path).lines else None
    chain = SEED
    for number, session, run, body, sealed in db.execute(
        "SELECT number, session, run, body, chain FROM event ORDER BY number"
    ):
        chain = link(chain, number, session, run, body)
        if chain != sealed:
            return f"event {number} does not fit its checksum"
    index = path.with_name(path.name + "-shm")
    if log and index.exists() and commits_beyond(log, index.read_bytes()) > 1:
        return "the log beside it breaks off in its middle"
    return None


def recover(path: Path, fault: str, wall_time: str) -> Recovery:
    """Copy a damaged journal aside and put a fresh one with every event that can be read at its place.

    Cut at any moment, it is either to be done again or finished by `finish`.

    Raises
    ------
    JournalFault : the disk does not take the copies; the damaged file stands as it was.
    """
    with faults("recovered", path):
        carved = carve(path)
        aside = free_name(path, "damaged", wall_time)
        for suffix in ("", *SIDE_FILES):
            source = path.with_name(path.name + suffix)
            if source.exists():
                _copy(source, aside.with_name(aside.name + suffix))
        fresh = path.with_name(path.name + ".recovering")
        remove(fresh)
        with closing(Journal.on(fresh)) as journal:
            journal.restore(completed(carved, wall_time))
        fresh.replace(_recovered(path))
        _sync_names(path.parent)
        finish(path)
    return Recovery(fault, aside, len(carved.lines), carved.lost, carved.unproven)


def finish(path: Path) -> None:
    """Put a recovered journal, if there is one, in its place."""
    recovered = _recovered(path)
    if recovered.exists():
        with faults("recovered", path):
            for suffix in SIDE_FILES:
                path.with_name(path.name + suffix).unlink(missing_ok=True)
            recovered.replace(path)


def completed(carved: Carved, wall_time: str) -> list[Line]:
    """The lines that were read, with openings in place of lost ones, so that what is in them is listed."""
    lines = {one.number: one for one in carved.lines}
    bench = ""
    for one in carved.lines:
        event = from_text(one.body)
        if isinstance(event, BenchDescribed | RunOpened):
            bench = event.setup_toml
            break
    for one in carved.lines:
        event = from_text(one.body)
        if isinstance(event, BenchDescribed | RunOpened):
            bench = event.setup_toml
        if one.session not in lines:
            opened = to_text(SessionOpened("Recovered session", wall_time))
            lines[one.session] = Line(one.session, one.session, None, opened, "")
        if one.run is not None and one.run not in lines:
            opened = to_text(RunOpened("measured", bench, wall_time, "unknown", 0.0))
            lines[one.run] = Line(one.run, one.session, one.run, opened, "")
    return [lines[number] for number in sorted(lines)]


def remove(path: Path) -> None:
    """Take away a file that was only half made, with what SQLite put beside it."""
    for suffix in ("", *SIDE_FILES):
        path.with_name(path.name + suffix).unlink(missing_ok=True)


def free_name(path: Path, why: str, wall_time: str) -> Path:
    """A name beside the journal that no file has yet."""
    stamp = "".join(c for c in wall_time if c.isalnum())
    for count in range(1000):
        name = f"journal-{why}-{stamp}{f'-{count}' if count else ''}.sqlite"
        if not path.with_name(name).exists():
            return path.with_name(name)
    raise JournalFault(f"There are too many files named journal-{why}-… in {path.parent}; move them away.")


def _recovered(path: Path) -> Path:
    return path.with_name(path.name + ".recovered")


def _sync_names(folder: Path) -> None:
    """Force the names in a folder to the disk, where the system lets a folder be opened."""
    with suppress(OSError):
        handle = os.open(folder, os.O_RDONLY)
        try:
            os.fsync(handle)
        finally:
            os.close(handle)


def _copy(source: Path, target: Path) -> None:
    with target.open("xb") as file:
        file.write(source.read_bytes())
        file.flush()
        os.fsync(file.fileno())
