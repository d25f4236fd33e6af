"""What the app itself costs while a run goes on: stamps, frames, start and memory.

`python tests/screen/in_use.py 2000` sends so many taps into the real app, 10 a second at first and 1 a second at the
end of each run of 400 readings of 0.1 °C, every third by a key; with live fits and plot, and with both left out. It
prints how far the stamps are from the moments of sending, how long frames take (what the loop works from one sleep
to the next) with more than 300 readings, and how long a cold start takes from the process to a tap that counts."""

from __future__ import annotations

import os
import sys
import tempfile
import time
from pathlib import Path
from typing import Any

import numpy as np

sys.path[:0] = [str(Path(__file__).parent), str(Path(__file__).resolve().parents[2])]
from window import AppInWindow, virtual_screen  # noqa: E402  the folder of this script is not a package

START_C, AIR_C, STEP_K, TIME_CONSTANT_S = 85.0, 40.0, 0.1, 45.0
READINGS = 400
MANY = 300  # readings from which on frames are counted
STARTS = 5


def inside(arguments: list[str], refit: bool) -> int:
    """The app, with a run begun on a fine display, and its frames written down beside the trace."""
    from mobileapp import __main__ as begin

    begin.prepare_environment((1280, 800))
    from kivy.base import EventLoop
    from kivy.clock import Clock

    from core.bench.setup import Body, Flow, Recording, Setup, Surrounding, Thermometer
    from mobileapp.app import CooltallyApp
    from mobileapp.recorder import Recorder

    bench = Setup(
        Body("cylinder", diameter_m=0.016, length_m=0.11, material="brass"),
        Thermometer(resolution_K=STEP_K, refresh_s=0.05),
        Recording("change"),
        Surrounding(AIR_C),
        Flow(velocity_m_s=10.0),
    )
    if not refit:
        Recorder._refit = lambda _recorder: None
    slept = [0.0]
    wait, idle = Clock.idle, EventLoop.idle
    frames = Path(os.environ["COOLTALLY_TRACE"]).with_name("frames").open("w")

    def waited() -> Any:
        start = time.perf_counter()
        result = wait()
        slept[0] += time.perf_counter() - start
        return result

    def idled() -> Any:
        start, before = time.perf_counter(), slept[0]
        result = idle()
        frames.write(f"{time.monotonic()} {time.perf_counter() - start - (slept[0] - before)}\n")
        return result

    Clock.idle, EventLoop.idle = waited, idled

    class WithRun(CooltallyApp):
        def on_start(self) -> None:
            super().on_start()
            session = self.model.new_session("Stamps")
            self.model.save_setup(bench)
            self.model.recorder.begin(session, bench)
            self.navigator.go("record")

    WithRun(data=Path(arguments[arguments.index("--data") + 1])).run()
    return 0


def one_run(display: str, refit: bool) -> tuple[list[float], int, list[float]]:
    """Errors of the stamps [s], taps that were not told once, and times of frames with many readings [s]."""
    with tempfile.TemporaryDirectory() as folder:
        how = "--inside" if refit else "--inside-bare"
        app = AppInWindow(display, Path(folder), start=(sys.executable, __file__, how))
        app.point(app.target("", "Pad"))
        excess_K, sent = START_C - AIR_C, []
        begun = due = time.monotonic()
        for count in range(READINGS):
            time.sleep(max(0.0, due - time.monotonic()))
            sent.append(app.hand.key("space", 0.02) if count % 3 == 2 else app.hand.tap(0.02))
            due += STEP_K / (excess_K / TIME_CONSTANT_S)
            excess_K -= STEP_K
        app.wait_for("tap", longest_s=2.0) if len(app.named("tap")) < READINGS else None
        told = app.named("tap")
        frames = [line.split() for line in (Path(folder) / "frames").read_text().splitlines()[:-1]]
        app.close()
    errors = [abs(one["stamp"] - moment) for one, moment in zip(told, sent, strict=False)]
    busy = [float(spent) for at, spent in frames if sent[MANY] < float(at) < sent[-1]]
    assert begun <= sent[0]
    return errors, abs(len(told) - len(sent)), busy


def cold_start(display: str) -> float:
    """Seconds from the start of the process to a tap that counts, on an app that was left in the middle of a run."""
    with tempfile.TemporaryDirectory() as folder:
        app = AppInWindow(display, Path(folder), start=(sys.executable, __file__, "--inside"))
        app.point(app.target("", "Pad"))
        app.hand.tap()
        app.wait_for("tap")
        app.kill()
        begun = time.monotonic()
        app = AppInWindow(display, Path(folder))
        while not app.named("tap"):
            app.hand.tap(0.01)
            time.sleep(0.04)
        first = app.named("tap")[0]["t"] - begun
        app.close()
    return float(first)


def centiles(values: list[float]) -> str:
    median, most = 1e3 * np.percentile(values, [50, 99])
    return f"median {median:.2f} ms, 99 % {most:.2f} ms"


def main(taps: int) -> None:
    with virtual_screen() as display:
        for refit in (True, False):
            runs = [one_run(display, refit) for _ in range(max(1, taps // READINGS))]
            errors = [error for run in runs for error in run[0]]
            name = "with live fit and plot" if refit else "without them"
            below = 100 * np.mean(np.array(errors) < 2e-3)
            print(f"{name}: {len(errors)} taps, lost or doubled {sum(run[1] for run in runs)}, stamp error "
                  f"{centiles(errors)}, below 2 ms {below:.2f} %", flush=True)  # fmt: skip
            print(f"  frames with more than {MANY} readings: {centiles([t for run in runs for t in run[2]])}",
                  flush=True)  # fmt: skip
        starts = [cold_start(display) for _ in range(STARTS)]
        print(f"cold start to a tap that counts: {min(starts):.2f} to {max(starts):.2f} s")


if __name__ == "__main__":
    if sys.argv[1].startswith("--inside"):
        sys.exit(inside(sys.argv[2:], refit=sys.argv[1] == "--inside"))
    main(int(sys.argv[1]))
