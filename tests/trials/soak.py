"""Hundreds of rehearsals in one and the same app, tapped through by real pointer and key events.

    python -m tests.trials.soak [RUNS] [LAST_C]

prints, every tenth run, the time gone, the resident memory and the open handles of the app, and at the end how much
memory a run has cost over the second half, when everything has been loaded. The runs go into one session, which is
kept open; each rehearsal is followed down to LAST_C (70 if left out), answered, kept, and left."""

import sys
import tempfile
import time
from pathlib import Path

import numpy as np

sys.path.insert(0, str(Path(__file__).resolve().parents[1] / "screen"))
from follow import end_run, rehearse
from window import AppInWindow, virtual_screen

EVERY = 10


def resident_MiB(pid: int) -> float:
    """Resident memory of a process."""
    status = Path(f"/proc/{pid}/status").read_text()
    return next(int(line.split()[1]) / 1024 for line in status.splitlines() if line.startswith("VmRSS"))


def handles(pid: int) -> int:
    """Open files, pipes and sockets of a process."""
    return sum(1 for _ in Path(f"/proc/{pid}/fd").iterdir())


def one_run(app: AppInWindow, seed: int, last_C: int) -> int:
    """A rehearsal from the home screen and back to it; how many taps were sent."""
    sent = rehearse(app, seed, last_C)
    end_run(app)
    app.press("Keep")
    while app.named("screen")[-1]["name"] != "home":
        app.hand.key("Escape")
        app.wait_for("screen")
    app.events = app.events[-200:]
    return len(sent)


def main(runs: int, last_C: int) -> None:
    told, begin, taps = [], time.monotonic(), 0
    with virtual_screen() as display, tempfile.TemporaryDirectory() as folder:
        app = AppInWindow(display, Path(folder))
        for run in range(1, runs + 1):
            taps += one_run(app, run, last_C)
            told.append((run, resident_MiB(app.process.pid), handles(app.process.pid)))
            if run % EVERY == 0 or run == runs:
                gone = time.monotonic() - begin
                print(f"run {run:4d}  {gone:6.0f} s  {taps:5d} taps  {told[-1][1]:6.1f} MiB  {told[-1][2]} handles",
                      flush=True)  # fmt: skip
        kept = sum(one["kind"] in ("tapped", "typed") for one in app.journal())
        app.close()
    later = np.array(told[len(told) // 2 :])
    per_run = np.polyfit(later[:, 0], later[:, 1], 1)[0] if len(later) > 2 else float("nan")
    print(f"taps sent {taps}, in the journal {kept}; memory over the second half: {1024 * per_run:+.1f} KiB a run; "
          f"handles from {int(later[:, 2].min())} to {int(later[:, 2].max())}")  # fmt: skip


if __name__ == "__main__":
    words = [int(word) for word in sys.argv[1:]]
    main(*(words + [200, 70][len(words) :]))
