"""A rehearsal from start to end by an outside hand that follows the display.

`python tests/screen/follow.py 20` runs as many, each with its own draw, and says how often h lay within its own
U95 of the truth."""

from __future__ import annotations

import json
import random
import sys
import tempfile
import time
from pathlib import Path
from typing import Any

sys.path[:0] = [str(Path(__file__).parent), str(Path(__file__).resolve().parents[2])]
from window import AppInWindow, virtual_screen  # noqa: E402  the folder of this script is not a package

MEAN_DELAY_S, SCATTER_S = 0.09, 0.03
LAST_C = 42


def rehearse(app: AppInWindow, seed: int, last_C: int = LAST_C) -> list[float]:
    """Start a rehearsal and tap at each change of the display down to `last_C`, with a hand's own delay; where the
    display jumps by two or three, the key for as many steps is used. Returns when each was sent."""
    hand = random.Random(seed)
    app.go("Rehearse", "rehearsal")
    app.go("To the pad", "record")
    app.point(app.target("", "Pad"))
    waited_for = int(app.target("", "Pad")["text"])
    shown = int(app.named("display")[-1]["text"])
    for _late in range(waited_for - shown + 1):
        app.press("−1")
    app.point(app.target("", "Pad"))
    sent: list[float] = []
    while shown > last_C:
        event = app.wait_for("display", lambda one: bool(one["text"]))
        steps = shown - int(event["text"])
        delay_s = max(0.02, hand.gauss(MEAN_DELAY_S, SCATTER_S))
        time.sleep(max(0.0, event["t"] + delay_s - time.monotonic()))
        sent.append(app.hand.tap() if steps == 1 else app.hand.key(str(steps)))
        shown -= steps
    return sent


def end_run(app: AppInWindow) -> dict[str, Any]:
    """Hold the end and wait for the answer."""
    app.hold("End", 1.3)
    return app.wait_for("answer")


def truth_of(app: AppInWindow) -> float:
    """The true h of the newest rehearsal, out of the journal."""
    opened = [one for one in app.journal() if one["kind"] == "run opened"]
    return float(json.loads(opened[-1]["truth"])["h_W_m2K"])


def main() -> int:
    count = int(sys.argv[1]) if len(sys.argv) > 1 else 20
    inside = 0
    with virtual_screen() as display:
        for seed in range(count):
            with tempfile.TemporaryDirectory() as folder:
                app = AppInWindow(display, Path(folder))
                taps = len(rehearse(app, seed))
                answer = end_run(app)
                truth = truth_of(app)
                app.close()
            off = answer["h"] - truth
            inside += abs(off) <= answer["U95"]
            print(
                f"{seed:3d}  {taps} taps  h {answer['h']:.2f} ± {answer['U95']:.2f}, true {truth:.2f}, "
                f"off {100 * off / truth:+.2f} %  {answer['verdict']}: {answer['reason']}",
                flush=True,
            )
    print(f"within U95: {inside} of {count}")
    return 0


if __name__ == "__main__":
    sys.exit(main())
