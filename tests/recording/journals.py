"""Journals for the tests: sessions, runs and taps as an evening at the bench leaves them."""

import itertools
import os
from contextlib import contextmanager

from core.recording.events import Decided, Marked, RunEnded, RunOpened, SessionOpened, Tapped, Typed
from core.recording.opening import open_journal

WALL_TIME = "2026-03-04T05:06:07+01:00"
BENCH = "[body]\nshape = 'cylinder'\n" + "# a long remark\n" * 60
RUN = RunOpened("measured", BENCH, WALL_TIME, "event watch", 0.0005)


@contextmanager
def journal_in(folder):
    """An open journal, closed afterwards."""
    opened = open_journal(folder, wall_time=WALL_TIME)
    try:
        yield opened.journal
    finally:
        opened.close()


def record(journal, *, runs=2, taps=30):
    """A session with some runs; returns its number."""
    session = journal.open_session(SessionOpened("Evening with a brass rod", WALL_TIME)).number
    for _ in range(runs):
        run = journal.open_run(session, RUN).number
        journal.keep(session, run, Typed(100.0, 90.0))
        journal.keep(session, run, Marked(100.5, "fan on"))
        for tap in range(taps):
            journal.keep(session, run, Tapped(101.0 + 1.5 * tap, 1))
        journal.keep(session, run, RunEnded(300.0))
        journal.keep(session, run, Decided("keep", "steady"))
    return session


def left_open(folder, **what):
    """Record in a process that is gone before it could close the journal: the log still stands beside it."""
    child = os.fork()
    if child == 0:
        record(open_journal(folder, wall_time=WALL_TIME).journal, **what)
        os._exit(0)
    _, status = os.waitpid(child, 0)  # asserts outside of test files are gone in optimised mode
    if status:
        raise ChildProcessError(f"the process that was to leave its journal open ended with status {status}")


def stamps():
    """Seconds on a clock, a tenth apart."""
    return (100.0 + tick / 10 for tick in itertools.count())


def memory_keeper():
    """A stand-in for the journal: numbers events and keeps them in a list, which it returns beside itself."""
    from core.recording.events import Kept

    kept = []

    def keep(event):
        kept.append(Kept(len(kept) + 1, 1, 1, event))
        return kept[-1]

    return keep, kept
