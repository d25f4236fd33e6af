"""The app in a real window on a virtual screen, driven from outside with real pointer and key events.

Nothing sleeps for a fixed time: every step waits for what the app's trace says."""

from __future__ import annotations

import ctypes
import json
import os
import signal
import sqlite3
import subprocess
import sys
import time
from collections.abc import Callable, Iterator
from contextlib import closing, contextmanager
from pathlib import Path
from typing import Any

ROOT = Path(__file__).resolve().parents[2]
LOOK_EVERY_S = 0.003
SETTLED_S = 0.25  # a changed layout is told within two looks of 0.1 s: after this it stands still


@contextmanager
def virtual_screen(size: str = "1280x800") -> Iterator[str]:
    """A virtual screen of its own, on a free display number."""
    reading, writing = os.pipe()
    server = subprocess.Popen(
        ["Xvfb", "-displayfd", str(writing), "-screen", "0", f"{size}x24", "-nolisten", "tcp"],
        pass_fds=[writing],
        stderr=subprocess.DEVNULL,
    )
    os.close(writing)
    try:
        with os.fdopen(reading) as told:
            yield f":{told.readline().strip()}"
    finally:
        server.terminate()
        server.wait()


class Hand:
    """Pointer and keys of the virtual screen, through XTEST."""

    def __init__(self, display: str) -> None:
        self._x, self._xtest = ctypes.CDLL("libX11.so.6"), ctypes.CDLL("libXtst.so.6")
        self._x.XOpenDisplay.restype = ctypes.c_void_p
        self._x.XStringToKeysym.restype = ctypes.c_ulong
        self._display = ctypes.c_void_p(self._x.XOpenDisplay(display.encode()))

    def move(self, x: float, y: float) -> None:
        self._xtest.XTestFakeMotionEvent(self._display, -1, int(x), int(y), 0)
        self._x.XFlush(self._display)

    def button(self, down: bool) -> float:
        """Press or lift; returns the moment at which it was sent."""
        sent_s = time.monotonic()
        self._xtest.XTestFakeButtonEvent(self._display, 1, int(down), 0)
        self._x.XFlush(self._display)
        return sent_s

    def tap(self, hold_s: float = 0.012) -> float:
        sent_s = self.button(True)
        time.sleep(hold_s)
        self.button(False)
        return sent_s

    def key(self, name: str, hold_s: float = 0.012) -> float:
        symbol = ctypes.c_ulong(self._x.XStringToKeysym(name.encode()))
        code = self._x.XKeysymToKeycode(self._display, symbol)
        sent_s = time.monotonic()
        self._xtest.XTestFakeKeyEvent(self._display, code, 1, 0)
        self._x.XFlush(self._display)
        time.sleep(hold_s)
        self._xtest.XTestFakeKeyEvent(self._display, code, 0, 0)
        self._x.XFlush(self._display)
        return sent_s


class AppInWindow:
    """The app as a process of its own, its trace, and a hand on its screen."""

    def __init__(
        self,
        display: str,
        folder: Path,
        *arguments: str,
        size: str = "1280x800",
        start: tuple[str, ...] = (sys.executable, "-m", "mobileapp"),
        at: Path = ROOT,
        **more_environment: str,
    ) -> None:
        self.folder = folder
        self._trace = folder / "trace.jsonl"
        self._trace.unlink(missing_ok=True)
        self._log = (folder / "app.log").open("a")
        environment = {name: value for name, value in os.environ.items() if not name.startswith(("KIVY", "SDL"))}
        environment |= {
            "DISPLAY": display,
            "HOME": str(folder),
            "KIVY_HOME": str(folder / "kivy"),
            "SDL_AUDIODRIVER": "dummy",
            "COOLTALLY_TRACE": str(self._trace),
        } | more_environment
        self.data = folder / "data"
        command = [*start, "--data", str(self.data), "--size", size, *arguments]
        self.process = subprocess.Popen(
            command, cwd=at, env=environment, stdout=self._log, stderr=subprocess.STDOUT
        )
        self.hand = Hand(display)
        self._file: Any = None
        self._begun = ""
        self.events: list[dict[str, Any]] = []
        self.wait_for("ready")

    # ------------------------------------------------------------------ what the app tells

    def read(self) -> list[dict[str, Any]]:
        """The events that came since the last look."""
        if self._file is None:
            if not self._trace.exists():
                return []
            self._file = self._trace.open()
        *whole, self._begun = (self._begun + self._file.read()).split("\n")  # a long line comes in pieces
        fresh = [json.loads(line) for line in whole]
        self.events += fresh
        return fresh

    def wait_for(
        self, event: str, matches: Callable[[dict[str, Any]], bool] = lambda _e: True, longest_s: float = 60.0
    ) -> dict[str, Any]:
        """The first event of this name, from now on, that matches."""
        end = time.monotonic() + longest_s
        while time.monotonic() < end:
            for one in self.read():
                if one["event"] == event and matches(one):
                    return one
            if self.process.poll() is not None:
                raise AssertionError(f"the app ended: {(self.folder / 'app.log').read_text()[-2000:]}")
            time.sleep(LOOK_EVERY_S)
        seen = [one["event"] for one in self.events[-8:]]
        raise AssertionError(f"no {event!r} within {longest_s} s; the last events were {seen}")

    def named(self, event: str) -> list[dict[str, Any]]:
        """All events of a name so far."""
        self.read()
        return [one for one in self.events if one["event"] == event]

    def target(self, text: str, kind: str = "", longest_s: float = 60.0) -> dict[str, Any]:
        """Where something that can be touched stands, once it is there."""
        end = time.monotonic() + longest_s
        while time.monotonic() < end:
            layouts = self.named("targets")
            settled = bool(layouts) and time.monotonic() - layouts[-1]["t"] > SETTLED_S
            for one in layouts[-1]["targets"] if settled else []:
                if text in one["text"] and kind in one["kind"]:
                    return dict(one)
            time.sleep(0.02)
        raise AssertionError(f"nothing called {text!r} can be touched")

    def journal(self) -> list[dict[str, Any]]:
        """The events that the journal holds on the disk, read beside the app."""
        path = self.data / "journal.sqlite"
        with closing(sqlite3.connect(f"{path.as_uri()}?mode=ro", uri=True)) as db:
            return [json.loads(body) for (body,) in db.execute("SELECT body FROM event ORDER BY number")]

    # ------------------------------------------------------------------ what a person does

    def point(self, target: dict[str, Any]) -> None:
        self.hand.move(target["x"] + target["w"] / 2, target["y"] + target["h"] / 2)

    def press(self, text: str, kind: str = "") -> None:
        """Press the button with this text."""
        self.point(self.target(text, kind))
        self.hand.tap(0.03)

    def go(self, text: str, screen: str) -> None:
        """Press a button that leads to a screen, and wait until that screen has told its layout."""
        self.press(text)
        self.wait_for("screen", lambda one: one["name"] == screen)
        self.wait_for("targets")

    def hold(self, text: str, seconds: float) -> None:
        self.point(self.target(text))
        self.hand.button(True)
        time.sleep(seconds)
        self.hand.button(False)

    # ------------------------------------------------------------------ the end

    def kill(self) -> None:
        """As a power cut would end it."""
        self.process.send_signal(signal.SIGKILL)
        self.process.wait()

    def close(self) -> None:
        self.process.terminate()
        self.process.wait()
        self._log.close()
