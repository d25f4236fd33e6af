"""Kill a tapping process at random moments, very often, and count confirmed taps that are lost.

python -m tests.trials.kill_while_tapping [COUNT]
"""

import sys
import tempfile
import time
from pathlib import Path

from tests.recording.killing import kill_once

if __name__ == "__main__":
    count = int(sys.argv[1]) if len(sys.argv) > 1 else 300
    began = time.monotonic()
    total, lost, unconfirmed, opened = 0, 0, 0, 0
    for seed in range(count):
        with tempfile.TemporaryDirectory() as folder:
            one, gone, extra = kill_once(Path(folder), seed)
        total, lost, unconfirmed, opened = total + one, lost + gone, unconfirmed + extra, opened + 1
    print(f"{count} kills, {total} taps confirmed, {lost} of them lost; the journal opened {opened} times")
    print(f"{unconfirmed} taps kept whose confirmation the kill cut off; {time.monotonic() - began:.0f} s")
