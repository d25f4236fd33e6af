"""Flip single bits of a journal at random places, and count what was noticed and what it cost.

python -m tests.trials.flip_bits [COUNT] [SEED]
"""

import sys
import tempfile
import time
from pathlib import Path

from core.recording.journal import FILE_NAME
from tests.recording.journals import journal_in, record
from tests.recording.test_damage_is_noticed_and_recovered import flip_bits

if __name__ == "__main__":
    count = int(sys.argv[1]) if len(sys.argv) > 1 else 1000
    seed = int(sys.argv[2]) if len(sys.argv) > 2 else 1
    began = time.monotonic()
    with tempfile.TemporaryDirectory() as folder:
        with journal_in(Path(folder)) as journal:
            record(journal, runs=6, taps=60)
            events = journal.events()
        noticed, lost = flip_bits(Path(folder) / FILE_NAME, events, seed, count)
    print(f"{count} flipped bits in a journal of {len(events)} events: {noticed} noticed, the others harm nothing")
    print(f"{lost} events lost in all, each counted in the report; 0 read wrongly; {time.monotonic() - began:.0f} s")
