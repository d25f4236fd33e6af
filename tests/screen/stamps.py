"""How far the stamps of taps are from the moments at which the pointer and key events were injected.

`python tests/screen/stamps.py 2000` sends so many, 1 to 10 a second, first with the loop at rest, then while it
is hogged for 50 ms at a time, and prints median and 99th centile of the error in ms and how many were told."""

from __future__ import annotations

import os
import random
import subprocess
import sys
import tempfile
import time
from pathlib import Path
from typing import Any

sys.path[:0] = [str(Path(__file__).parent), str(Path(__file__).resolve().parents[2])]
from window import ROOT, Hand, virtual_screen  # noqa: E402  the folder of this script is not a package

HOG_S = 0.05


def listener(trace: Path, hog: bool) -> None:
    """Runs in a process of its own: a bare window with the app's own stamp source, telling each stamp."""
    from mobileapp.__main__ import prepare_environment

    prepare_environment((640, 480))
    os.environ["COOLTALLY_TRACE"] = str(trace)
    from kivy.app import App
    from kivy.clock import Clock
    from kivy.core.window import Window
    from kivy.uix.widget import Widget

    from mobileapp.device.stamps import best_source
    from mobileapp.trace import Trace

    tell = Trace(str(trace))

    class Bare(App):
        def build(self) -> Widget:
            return Widget()

        def on_start(self) -> None:
            source = best_source(on_android=False)
            Window.bind(on_touch_down=lambda _window, touch: self.told(source.touch(touch)))
            Window.bind(on_key_down=lambda *_args: self.told(source.key()))
            if hog:
                Clock.schedule_interval(lambda _dt: self.hog(), 2 * HOG_S)
            Clock.schedule_once(lambda _dt: tell("ready"), 0.3)

        def hog(self) -> None:
            end = time.monotonic() + HOG_S
            while time.monotonic() < end:
                sum(range(500))

        def told(self, stamp: Any) -> bool:
            tell("stamp", stamp=stamp.time_s, source=stamp.source)
            return True

    Bare().run()


def measure(count: int, hog: bool, fastest_per_s: float = 10.0, seed: int = 1) -> dict[str, Any]:
    """Send taps, every third by a key; returns errors [s] sorted, and what was lost or doubled."""
    import json

    lot = random.Random(seed)
    with virtual_screen("640x480") as display, tempfile.TemporaryDirectory() as folder:
        trace = Path(folder) / "trace.jsonl"
        clean = {name: value for name, value in os.environ.items() if not name.startswith(("KIVY", "SDL"))}
        process = subprocess.Popen(
            [sys.executable, __file__, "--listen", str(trace), *(["--hog"] if hog else [])],
            cwd=ROOT,
            env=clean | {"DISPLAY": display, "HOME": folder, "SDL_AUDIODRIVER": "dummy"},
        )
        try:
            _wait_for_line(trace, 1, 20.0)
            hand = Hand(display)
            hand.move(300, 200)
            sent: list[float] = []
            for i in range(count):
                start = time.monotonic()
                sent.append(hand.key("space", 0.02) if i % 3 == 0 else hand.tap(0.02))
                pause = lot.uniform(1 / fastest_per_s, min(1.0, 3 / fastest_per_s))
                time.sleep(max(0.0, start + pause - time.monotonic()))
            _wait_for_line(trace, count + 1, 5.0)
        finally:
            process.kill()
            process.wait()
        told = [json.loads(line) for line in trace.read_text().splitlines()][1:]
    stamps = [one["stamp"] for one in told]
    errors = sorted(abs(a - b) for a, b in zip(stamps, sent, strict=False))
    late = sorted(one["t"] - moment for one, moment in zip(told, sent, strict=False))
    return {
        "sent": count,
        "told": len(stamps),
        "sources": sorted({one["source"] for one in told}),
        "errors_s": errors,
        "dispatch_s": late,
    }


def _wait_for_line(path: Path, number: int, longest_s: float) -> None:
    end = time.monotonic() + longest_s
    while time.monotonic() < end:
        if path.exists() and path.read_text().count("\n") >= number:
            return
        time.sleep(0.02)


def centile(values: list[float], share: float) -> float:
    return values[min(len(values) - 1, int(share * len(values)))]


def main() -> int:
    if "--listen" in sys.argv:
        listener(Path(sys.argv[sys.argv.index("--listen") + 1]), "--hog" in sys.argv)
        return 0
    count = int(sys.argv[1]) if len(sys.argv) > 1 else 2000
    for hog in (False, True):
        found = measure(count, hog)
        errors, late = found["errors_s"], found["dispatch_s"]
        state = "hogged 50 ms" if hog else "at rest"
        print(
            f"{state:12s} sent {found['sent']} told {found['told']} {found['sources']}; "
            f"stamp error ms: median {1e3 * centile(errors, 0.5):.2f}, 99 % {1e3 * centile(errors, 0.99):.2f}, "
            f"worst {1e3 * errors[-1]:.2f}; loop late ms: median {1e3 * centile(late, 0.5):.1f}, "
            f"99 % {1e3 * centile(late, 0.99):.1f}",
            flush=True,
        )
    return 0


if __name__ == "__main__":
    sys.exit(main())
