"""Cut exports at random bytes and steps, by kill −9, and count what stood in the folder afterwards.

python -m tests.trials.cut_exports [COUNT] [SEED]
"""

import sys
import tempfile
import time
from pathlib import Path

from tests.handover.test_export_is_whole_and_exact import cut_exports

if __name__ == "__main__":
    count = int(sys.argv[1]) if len(sys.argv) > 1 else 500
    seed = int(sys.argv[2]) if len(sys.argv) > 2 else 1
    began = time.monotonic()
    with tempfile.TemporaryDirectory() as folder:
        killed, (old, new) = cut_exports(Path(folder) / "out", seed, count)
    print(
        f"{count} exports, {killed} of them killed: {old} times the old whole, {new} times the new whole, 0 torn"
    )
    print(f"{time.monotonic() - began:.1f} s")
