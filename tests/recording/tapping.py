"""A process of its own that taps into a journal and tells on its output what was confirmed to it.

python -m tests.recording.tapping FOLDER fast           taps until it is killed
python -m tests.recording.tapping FOLDER fault NAME     taps, meets a failing disk (faulty_disk.c), taps on
python -m tests.recording.tapping FOLDER fill BALLAST   taps till the disk is full, deletes BALLAST, taps on
"""

import itertools
import os
import sys
from functools import partial
from pathlib import Path

from core.recording.events import SessionOpened
from core.recording.opening import open_journal
from core.recording.tally import Confirmed, Tally
from tests.recording.journals import RUN, WALL_TIME

RESOLUTION_K = 1e-4  # so that a fast hand does not reach the end of the display


def tell(word, *rest):
    """One line, out before anything else happens."""
    os.write(1, " ".join([word, *map(str, rest)]).encode() + b"\n")


def tap(tally, stamp_s):
    """One tap; what it came to is told."""
    answer = tally.tap(stamp_s)
    if isinstance(answer, Confirmed):
        tell("confirmed", answer.number, answer.reading_C)
    else:
        tell("refused", answer.sentence)
    return isinstance(answer, Confirmed)


def main(folder, how, detail=""):
    """Begin a run and tap in the way that is asked for."""
    journal = open_journal(Path(folder), wall_time=WALL_TIME).journal
    session = journal.open_session(SessionOpened("Tapping", WALL_TIME)).number
    run = journal.open_run(session, RUN).number
    tally = Tally(RESOLUTION_K, partial(journal.keep, session, run))
    first = tally.first(90.0, 0.0)
    tell("confirmed", first.number, first.reading_C)
    stamps = (0.1 * tick for tick in itertools.count(1))
    if how == "fast":
        for stamp in stamps:
            tap(tally, stamp)
    for stamp in itertools.islice(stamps, 20):
        tap(tally, stamp)
    if how == "fault":
        os.environ["DISK_FAULT"] = detail
        for stamp in itertools.islice(stamps, 6):
            tap(tally, stamp)
        del os.environ["DISK_FAULT"]
    else:
        while tap(tally, next(stamps)):
            pass
        tap(tally, next(stamps))
        Path(detail).unlink()
    for stamp in itertools.islice(stamps, 20):
        tap(tally, stamp)
    os._exit(0)


if __name__ == "__main__":
    main(*sys.argv[1:])
