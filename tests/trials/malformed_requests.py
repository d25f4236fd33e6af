"""Throw malformed requests at the local hand-over; count what it answers, and its memory and handles.

python -m tests.trials.malformed_requests [COUNT] [SEED]
"""

import os
import sys
import time

from core.handover.archive import zipped
from core.handover.share_server import ShareServer
from tests.handover.sessions import session_of
from tests.handover.test_share_gives_the_zip_and_nothing_else import HOST, OPEN_HANDED, fetch, throw_malformed

if __name__ == "__main__":
    count = int(sys.argv[1]) if len(sys.argv) > 1 else 10_000
    seed = int(sys.argv[2]) if len(sys.argv) > 2 else 1
    name, data = zipped(session_of(2))
    server = ShareServer.open(name, data, HOST, bounds=OPEN_HANDED)
    handles = len(os.listdir("/proc/self/fd"))  # noqa: PTH208  counted, not walked
    began = time.monotonic()
    heard, before, after = throw_malformed(server, count, seed)
    seconds = time.monotonic() - began
    server.renew()
    served = fetch(server)[2] == data
    print(f"{count} malformed requests in {seconds:.1f} s; by status (0: cut): {dict(sorted(heard.items()))}")
    print(f"memory {before:.1f} MB before, {after:.1f} MB after; the zip is served after it: {served}")
    server.close()
    print(f"file handles {handles} before, {len(os.listdir('/proc/self/fd'))} after closing")  # noqa: PTH208
