"""How long a tap takes until it is kept, against a bare insert into a bare table with the same durability; and how
long a large journal takes to be checked at start.

python -m tests.trials.tap_commit_time [TAPS]
"""

import sqlite3
import sys
import tempfile
import time
from contextlib import closing
from functools import partial
from itertools import pairwise
from pathlib import Path

from core.recording.events import SessionOpened, Tapped
from core.recording.journal import FILE_NAME
from core.recording.opening import open_journal
from core.recording.recovery import find_damage
from core.recording.tally import Tally
from tests.recording.journals import RUN, WALL_TIME


def quantiles(times):
    """Median and 99th centile in milliseconds."""
    times = sorted(times)
    return 1e3 * times[len(times) // 2], 1e3 * times[len(times) * 99 // 100]


def bare_inserts(path, count):
    """One committed insert after the other, nothing around it."""
    with closing(sqlite3.connect(path, isolation_level=None)) as db:
        db.execute("PRAGMA journal_mode = WAL")
        db.execute("PRAGMA synchronous = FULL")
        db.execute("CREATE TABLE tap (number INTEGER PRIMARY KEY, stamp_s REAL)")
        moments = [time.perf_counter()]
        for tap in range(count):
            db.execute("INSERT INTO tap (stamp_s) VALUES (?)", (tap * 0.1,))
            moments.append(time.perf_counter())
    return [late - early for early, late in pairwise(moments)]


def taps(folder, count):
    """Taps through the tally into the journal, in runs of 400."""
    times = []
    with closing(open_journal(folder, wall_time=WALL_TIME)) as opened:
        journal = opened.journal
        session = journal.open_session(SessionOpened("Timed", WALL_TIME)).number
        for _ in range(count // 400):
            run = journal.open_run(session, RUN).number
            tally = Tally(0.1, partial(journal.keep, session, run))
            tally.first(90.0, 0.0)
            for tap in range(1, 401):
                began = time.perf_counter()
                tally.tap(tap * 0.1)
                times.append(time.perf_counter() - began)
    return times


if __name__ == "__main__":
    count = int(sys.argv[1]) if len(sys.argv) > 1 else 2000
    with tempfile.TemporaryDirectory(dir=Path.cwd()) as scratch:
        bare = quantiles(bare_inserts(Path(scratch) / "bare.sqlite", count))
        kept = quantiles(taps(Path(scratch), count))
        print(f"bare insert   median {bare[0]:.2f} ms, 99th centile {bare[1]:.2f} ms")
        print(f"tap to kept   median {kept[0]:.2f} ms, 99th centile {kept[1]:.2f} ms")
        print(f"ratio         median {kept[0] / bare[0]:.2f}, 99th centile {kept[1] / bare[1]:.2f}")
        with closing(open_journal(Path(scratch), wall_time=WALL_TIME)) as opened:
            for _ in range(150):
                opened.journal.keep_all(1, 2, [Tapped(0.1 * tap, 1) for tap in range(1000)])
        began = time.perf_counter()
        find_damage(Path(scratch) / FILE_NAME)
        print(f"check at start of a journal of 150,000 events: {time.perf_counter() - began:.2f} s")
