"""A trace for tests from outside: one JSON line an event, written only where COOLTALLY_TRACE names a file."""

from __future__ import annotations

import json
import os
import time
from typing import Any


class Trace:
    """Writes events as they happen; silent without a file."""

    def __init__(self, path: str | None = None) -> None:
        self._file = open(path, "a", encoding="utf-8", buffering=1) if path else None  # noqa: PTH123, SIM115

    def __call__(self, event: str, **values: Any) -> None:
        if self._file is not None:
            self._file.write(json.dumps({"t": time.monotonic(), "event": event, **values}) + "\n")


trace = Trace(os.environ.get("COOLTALLY_TRACE"))
