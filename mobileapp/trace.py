"""A trace for tests from outside: one JSON line an event, written only where COOLTALLY_TRACE names a file."""

from __future__ import annotations

import json
import os
import time
from typing import Any

TARGETS_EVERY_S = 0.1


class Trace:
    """Writes events as they happen; silent without a file."""

    def __init__(self, path: str | None = None) -> None:
        self._file = open(path, "a", encoding="utf-8", buffering=1) if path else None  # noqa: PTH123, SIM115
        self._targets: list[dict[str, Any]] = []
        self._seen: list[dict[str, Any]] = []

    @property
    def on(self) -> bool:
        return self._file is not None

    def __call__(self, event: str, **values: Any) -> None:
        if self._file is not None:
            self._file.write(json.dumps({"t": time.monotonic(), "event": event, **values}) + "\n")

    def targets(self, root: Any, height: float) -> None:
        """What can be touched now, with its text and its rectangle from the top left; written once a changed
        layout has stood still from one look to the next."""
        found = [_target(widget, height) for widget in root.walk() if _touchable(widget)]
        if found == self._seen and found != self._targets:
            self._targets = found
            self("targets", targets=found)
        self._seen = found


def _touchable(widget: Any) -> bool:
    named = type(widget).__name__ in ("Pad", "Tick", "RunRow", "LineInput") or hasattr(widget, "rim")
    return named and not widget.disabled and widget.width > 1 and widget.height > 1 and widget.opacity > 0


def _target(widget: Any, height: float) -> dict[str, Any]:
    x, y = widget.to_window(widget.x, widget.y)
    return {
        "kind": type(widget).__name__,
        "text": getattr(widget, "text", "") or getattr(widget, "number_text", "") or getattr(widget, "figure", ""),
        "x": round(x),
        "y": round(height - y - widget.height),
        "w": round(widget.width),
        "h": round(widget.height),
    }


trace = Trace(os.environ.get("COOLTALLY_TRACE"))
