"""When a tap happened, as opposed to when the loop got round to it.

Four sources, the best that the device offers is taken at start:

- `platform event time`: Android's own time of the touch event, in 1 ms steps, from the kernel's monotonic clock.
- `window server time`: the X server's time of the event, in 1 ms steps, from the same clock; heard through the
  window library's event watch, so that a busy loop does not shift it.
- `event watch`: the window library's own stamp, taken when the event enters its queue.
- `loop`: the time at which the loop read the event; as good as the loop is quick.

A stamp that lies in the future, or too long before its dispatch, is replaced by the loop's and marked as such; no
tap is ever lost for want of a stamp."""

from __future__ import annotations

import ctypes
import ctypes.util
import os
import sys
import time
from collections import OrderedDict, deque
from pathlib import Path
from typing import Any

from mobileapp.device.ports import Stamp

OLDEST_S = 0.5  # a stamp further back than this belongs to another event
LOOP_HALFWIDTH_S = 0.004  # one turn of the loop at 200 frames a second, poll and sleep
WATCH_HALFWIDTH_S = 0.002
EVENT_TIME_HALFWIDTH_S = 0.0005  # clocks that count whole milliseconds

_KEY_DOWN, _MOUSE_DOWN, _SYSTEM, _FINGER_DOWN = 0x300, 0x401, 0x201, 0x700
_X_KEY_PRESS, _X_BUTTON_PRESS = 2, 4
_ENABLE = 1


class LoopStamp:
    """The loop's own time: for touches the time at which the event was read, for keys the dispatch."""

    name = "loop"
    halfwidth_s = LOOP_HALFWIDTH_S

    def start(self) -> None:
        return None

    def touch(self, touch: Any) -> Stamp:
        age_s = max(0.0, time.time() - float(touch.time_start))
        now_s = time.monotonic()
        return Stamp(now_s - age_s if age_s < OLDEST_S else now_s, self.halfwidth_s, self.name)

    def key(self) -> Stamp:
        return Stamp(time.monotonic(), self.halfwidth_s, self.name)

    def forget(self) -> None:
        return None


def plausible(stamp_s: float, now_s: float) -> bool:
    """Whether a stamp can belong to an event that is dispatched at `now_s`."""
    return -0.002 <= now_s - stamp_s <= OLDEST_S


class _Heard:
    """Stamps that wait for their event to be dispatched: fingers by their id, button and keys in order."""

    def __init__(self) -> None:
        self.fingers: OrderedDict[int, float] = OrderedDict()
        self.buttons: deque[float] = deque(maxlen=256)
        self.keys: deque[float] = deque(maxlen=256)

    def clear(self) -> None:
        self.fingers.clear()
        self.buttons.clear()
        self.keys.clear()


class _SystemEvent(ctypes.Structure):
    _fields_ = (("type", ctypes.c_uint32), ("timestamp", ctypes.c_uint32), ("message", ctypes.c_void_p))


class _FingerEvent(ctypes.Structure):
    _fields_ = (
        ("type", ctypes.c_uint32),
        ("timestamp", ctypes.c_uint32),
        ("touch", ctypes.c_int64),
        ("finger", ctypes.c_int64),
    )


class _XEvent(ctypes.Structure):
    """The head that X11's key and button events share."""

    _fields_ = (
        ("type", ctypes.c_int),
        ("serial", ctypes.c_ulong),
        ("send_event", ctypes.c_int),
        ("display", ctypes.c_void_p),
        ("window", ctypes.c_ulong),
        ("root", ctypes.c_ulong),
        ("subwindow", ctypes.c_ulong),
        ("time", ctypes.c_ulong),
    )


class _XMessage(ctypes.Structure):
    """The window library's wrapping of an X11 event: version, subsystem, event."""

    _fields_ = (("version", ctypes.c_uint8 * 3), ("subsystem", ctypes.c_int), ("event", _XEvent))


def _window_library() -> str:
    """Path of the SDL2 that Kivy itself has loaded."""
    import kivy

    if "ANDROID_ARGUMENT" in os.environ:
        return "libSDL2.so"
    beside = sorted((Path(kivy.__file__).parent.parent / "Kivy.libs").glob("libSDL2-2*"))
    found = str(beside[0]) if beside else ctypes.util.find_library("SDL2")
    if not found:
        raise OSError("the window library SDL2 was not found")
    return found


class EventWatchStamp:
    """Listens as events enter the window library's queue. Where the window server tells its own time of the
    event, that is taken (`window server time`), else the age of the library's stamp (`event watch`)."""

    def __init__(self) -> None:
        self.name = "event watch"
        self.halfwidth_s = WATCH_HALFWIDTH_S
        self._heard = _Heard()
        self._server_time_s: float | None = None
        self._loop = LoopStamp()

    def start(self) -> None:
        path = _window_library()
        library = ctypes.CDLL(path)
        # this handle keeps the interpreter's lock: a wait for it would spoil the age of the stamp
        self._ticks = ctypes.PyDLL(path).SDL_GetTicks
        self._ticks.restype = ctypes.c_uint32
        signature = ctypes.CFUNCTYPE(ctypes.c_int, ctypes.c_void_p, ctypes.c_void_p)
        self._callback = signature(self._hear)  # must outlive the watch
        library.SDL_AddEventWatch(self._callback, None)
        library.SDL_GetCurrentVideoDriver.restype = ctypes.c_char_p
        if library.SDL_GetCurrentVideoDriver() == b"x11" and sys.maxsize > 2**32:
            library.SDL_EventState(_SYSTEM, _ENABLE)
            self.name = "window server time"
            self.halfwidth_s = EVENT_TIME_HALFWIDTH_S

    def _hear(self, _user: int | None, pointer: int) -> int:
        kind = ctypes.c_uint32.from_address(pointer).value
        if kind == _SYSTEM:
            message = _SystemEvent.from_address(pointer).message
            event = _XMessage.from_address(message).event
            if event.type in (_X_KEY_PRESS, _X_BUTTON_PRESS):
                self._server_time_s = self._from_server(event.time)
        elif kind == _FINGER_DOWN:
            event = _FingerEvent.from_address(pointer)
            self._heard.fingers[event.finger] = self._aged(event.timestamp)
            while len(self._heard.fingers) > 64:
                self._heard.fingers.popitem(last=False)
        elif kind in (_MOUSE_DOWN, _KEY_DOWN):
            queue = self._heard.buttons if kind == _MOUSE_DOWN else self._heard.keys
            stamp_s = self._server_time_s
            if stamp_s is None:
                stamp_s = self._aged(_SystemEvent.from_address(pointer).timestamp)
            self._server_time_s = None
            queue.append(stamp_s)
        return 0

    def _aged(self, ticks_ms: int) -> float:
        return time.monotonic() - ((self._ticks() - ticks_ms) & 0xFFFFFFFF) / 1000

    @staticmethod
    def _from_server(server_ms: int) -> float | None:
        """The server's 32-bit millisecond count on the monotonic clock; None where it counts from elsewhere."""
        now_s = time.monotonic()
        age_ms = (int(now_s * 1000) - server_ms) & 0xFFFFFFFF
        if age_ms > 0x7FFFFFFF:
            age_ms -= 0x100000000
        if not -2 <= age_ms <= 10_000:
            return None
        return int(now_s * 1000) / 1000 - age_ms / 1000 + EVENT_TIME_HALFWIDTH_S  # the count is cut, not rounded

    def touch(self, touch: Any) -> Stamp:
        now_s = time.monotonic()
        finger = self._heard.fingers.pop(touch.id, None) if isinstance(touch.id, int) else None
        if finger is not None and plausible(finger, now_s):
            return Stamp(finger, self.halfwidth_s, self.name)
        return self._first(self._heard.buttons, now_s) or self._loop.touch(touch)

    def key(self) -> Stamp:
        return self._first(self._heard.keys, time.monotonic()) or self._loop.key()

    def _first(self, queue: deque[float], now_s: float) -> Stamp | None:
        """The oldest stamp that can still belong to this dispatch; older ones were never asked for."""
        while queue:
            stamp_s = queue.popleft()
            if plausible(stamp_s, now_s):
                return Stamp(stamp_s, self.halfwidth_s, self.name)
        return None

    def forget(self) -> None:
        self._heard.clear()
        self._server_time_s = None


class AndroidEventTime:
    """Android's own event time, caught before the window library sees the touch. Keys come by the event watch."""

    name = "platform event time"
    halfwidth_s = EVENT_TIME_HALFWIDTH_S

    def __init__(self) -> None:
        self._fingers: OrderedDict[int, float] = OrderedDict()
        self._watch = EventWatchStamp()

    def start(self) -> None:
        try:
            from android.touch import OnInterceptTouchListener
            from jnius import autoclass
        except ImportError as missing:
            raise OSError("this build has no listener for touch events") from missing
        surface = autoclass("org.libsdl.app.SDLActivity").mSurface
        self._listener = OnInterceptTouchListener(self._hear)  # must outlive the app
        surface.setInterceptTouchListener(self._listener)
        self._watch.start()

    def _hear(self, event: Any) -> bool:
        if event.getActionMasked() in (0, 5):  # first or further finger down
            finger = event.getPointerId(event.getActionIndex())
            self._fingers[finger] = event.getEventTime() / 1000 + EVENT_TIME_HALFWIDTH_S
            while len(self._fingers) > 64:
                self._fingers.popitem(last=False)
        return False

    def touch(self, touch: Any) -> Stamp:
        stamp_s = self._fingers.pop(touch.id, None)
        if stamp_s is not None and plausible(stamp_s, time.monotonic()):
            return Stamp(stamp_s, self.halfwidth_s, self.name)
        return self._watch.touch(touch)

    def key(self) -> Stamp:
        return self._watch.key()

    def forget(self) -> None:
        self._fingers.clear()
        self._watch.forget()


def best_source(on_android: bool) -> AndroidEventTime | EventWatchStamp | LoopStamp:
    """The best source that starts on this device."""
    sources = ([AndroidEventTime] if on_android else []) + [EventWatchStamp]
    for source in sources:
        chosen = source()
        try:
            chosen.start()
        except (OSError, AttributeError):
            continue
        return chosen
    return LoopStamp()
