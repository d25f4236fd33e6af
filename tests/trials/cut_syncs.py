"""Cut folder syncs at random bytes and steps, by kill −9, and count what stood there afterwards.

python -m tests.trials.cut_syncs [COUNT] [SEED]
"""

import sys
import tempfile
import time
from pathlib import Path

from tests.handover.test_sync_never_works_against_the_laptop import cut_syncs

if __name__ == "__main__":
    count = int(sys.argv[1]) if len(sys.argv) > 1 else 500
    seed = int(sys.argv[2]) if len(sys.argv) > 2 else 1
    began = time.monotonic()
    with tempfile.TemporaryDirectory() as folder:
        killed, found = cut_syncs(Path(folder), seed, count)
    print(
        f"{count} syncs, {killed} of them killed: {found['old']} times the old whole, {found['new']} times the "
        "new whole, 0 torn, 0 doubled; each was finished by the next call"
    )
    print(f"{time.monotonic() - began:.1f} s")
