"""What a start costs beside a bare window of the same library, in the same run.

python3 buildspec/dev.py bench [ROUNDS]     needs a screen or Xvfb"""

from __future__ import annotations

import argparse
import json
import os
import statistics
import subprocess
import sys
import tempfile
import time
from pathlib import Path

from dev import ROOT

BARE = """
from kivy.config import Config
for name, value in (("multisamples", "0"), ("width", "1280"), ("height", "800")): Config.set("graphics", name, value)
from kivy.app import App
from kivy.clock import Clock
from kivy.uix.label import Label
class Bare(App):
    def build(self): return Label(text="bare")
    def on_start(self): Clock.schedule_once(told, 0)
def told(_dt):
    import json, os, time
    with open(os.environ["COOLTALLY_TRACE"], "a") as file:
        file.write(json.dumps({"t": time.monotonic(), "event": "ready"}) + "\\n")
Bare().run()
"""
APP = "import sys; from mobileapp.__main__ import main; main(['--data', sys.argv[1]])"
DEMO = APP.replace("[1]]", "[1], '--demo']")
KINDS = {"bare window": BARE, "app": APP, "app with the demo": DEMO}
SETTLE_S = 3.0
MOST_ROUNDS = 1000


def _resident_mb(process: int) -> float:
    for line in Path(f"/proc/{process}/status").read_text().splitlines():
        if line.startswith("VmRSS"):
            return int(line.split()[1]) / 1024
    return float("nan")


def started(source: str, display: str) -> tuple[float, float]:
    """Seconds from the start of the process to the first frame after everything stands, and memory [MB] later."""
    with tempfile.TemporaryDirectory() as folder:
        trace = Path(folder) / "trace"
        surroundings = {
            **os.environ,
            "DISPLAY": display,
            "HOME": folder,
            "KIVY_HOME": f"{folder}/kivy",
            "KIVY_NO_ARGS": "1",
            "KIVY_NO_CONFIG": "1",
            "KIVY_NO_FILELOG": "1",
            "KIVY_WINDOW": "sdl2",
            "SDL_AUDIODRIVER": "dummy",
            "COOLTALLY_TRACE": str(trace),
            "PYTHONPATH": str(ROOT),
        }
        script = Path(folder) / "start.py"
        script.write_text(source)
        began = time.monotonic()
        words = [sys.executable, str(script), f"{folder}/data"]
        log = Path(folder) / "log"
        with (
            log.open("w") as told,
            subprocess.Popen(words, env=surroundings, cwd=folder, stdout=told, stderr=told) as process,
        ):
            try:
                ready = _ready(trace, process, log)
                time.sleep(SETTLE_S)  # what is loaded after the first frame is there by now
                return ready - began, _resident_mb(process.pid)
            finally:
                process.kill()


def _ready(trace: Path, process: subprocess.Popen, log: Path) -> float:
    while process.poll() is None:
        if trace.exists():
            for line in trace.read_text().splitlines():
                if '"ready"' in line and line.endswith("}"):
                    return float(json.loads(line)["t"])
        time.sleep(0.002)
    raise SystemExit(f"The window did not open: {log.read_text()[-400:]}")


def _count(word: str) -> int:
    if not (word.isascii() and word.isdigit() and 1 <= int(word) <= MOST_ROUNDS):
        raise argparse.ArgumentTypeError(f"'{word}' is no whole number from 1 to {MOST_ROUNDS}; give e.g. 5")
    return int(word)


def main() -> int:
    """The table: medians over the rounds, each kind once a round."""
    parser = argparse.ArgumentParser(prog="dev.py bench", description="What a start costs beside a bare window.")
    parser.add_argument("rounds", nargs="?", type=_count, default=5, help="starts of each kind")
    rounds = parser.parse_args().rounds
    sys.path.insert(0, str(ROOT / "tests" / "screen"))
    from window import virtual_screen

    measured: dict[str, list[tuple[float, float]]] = {name: [] for name in KINDS}
    with virtual_screen() as display:
        for source in KINDS.values():
            started(source, display)  # fills the caches
        for _round in range(rounds):
            for name, source in KINDS.items():
                measured[name].append(started(source, display))
    bare_s = statistics.median(seconds for seconds, _memory in measured["bare window"])
    print(f"{'':20} start s   ratio   memory MB   ({rounds} rounds, medians)")
    for name, values in measured.items():
        seconds = statistics.median(value[0] for value in values)
        memory = statistics.median(value[1] for value in values)
        print(f"{name:20} {seconds:7.2f} {seconds / bare_s:7.2f} {memory:11.0f}")
    return 0


if __name__ == "__main__":
    sys.exit(main())
