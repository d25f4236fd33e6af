"""Kill a process that taps fast, at a random moment, and compare what it was told with what the journal holds."""

import random
import subprocess
import sys
import time
from contextlib import closing
from pathlib import Path

from core.recording.opening import open_journal
from core.recording.run_state import derive
from tests.recording.journals import WALL_TIME
from tests.recording.tapping import RESOLUTION_K

ROOT = Path(__file__).resolve().parents[2]


def tapping(folder, *how, **environment):
    """A process that taps into the journal of a folder."""
    return subprocess.Popen(
        [sys.executable, "-m", "tests.recording.tapping", str(folder), *map(str, how)],
        cwd=ROOT,
        stdout=subprocess.PIPE,
        env={"PATH": "/usr/bin:/bin", "HOME": str(folder), **environment},
    )


def told(process):
    """What a process that is gone was told: the confirmed (event number, reading), and the refusals."""
    lines = process.stdout.read().decode().splitlines()
    process.stdout.close()
    words = [line.split(" ", 1) for line in lines if line]
    confirmed = [rest.split() for word, rest in words if word == "confirmed" and len(rest.split()) == 2]
    return [(int(n), float(c)) for n, c in confirmed], [rest for word, rest in words if word == "refused"]


def kept(folder):
    """What the journal holds of the run: (event number, reading), and whether it told of damage."""
    with closing(open_journal(folder, wall_time=WALL_TIME)) as opened:
        events = opened.journal.events()
        run = next(one.number for one in events if one.number == one.run)
        state = derive(opened.journal.events(run=run), RESOLUTION_K)
        return [(row.event, row.reading_C) for row in state.rows], opened.recovery


def kill_once(folder, seed):
    """One kill; returns how many taps were confirmed, how many of them are lost, and how many are there that
    were not confirmed."""
    process = tapping(folder, "fast")
    first = process.stdout.readline().split()
    time.sleep(random.Random(seed).uniform(0.0, 0.4))
    process.kill()
    process.wait()
    confirmed, _ = told(process)
    confirmed.insert(0, (int(first[1]), float(first[2])))
    rows, recovery = kept(folder)
    if recovery is not None:
        raise AssertionError(recovery.sentence)
    lost = set(confirmed) - set(rows)
    return len(confirmed), len(lost), len(set(rows) - set(confirmed))
