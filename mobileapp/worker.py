"""Work off the input path: one thread, the latest request wins, answers come back through the loop."""

from __future__ import annotations

import threading
from collections.abc import Callable
from typing import Any

from core.errors import BenchError

Deliver = Callable[[Callable[[], None]], Any]


class LatestWorker:
    """Runs what it is asked, one thing at a time, the newest first: what stands on the screen now goes before what
    was asked in passing. A request that is still waiting when a newer one of the same `topic` comes is dropped:
    only the newest answer is of use."""

    def __init__(self, deliver: Deliver) -> None:
        self._deliver = deliver
        self._waiting: dict[str, tuple[Callable[[], Any], Callable[[Any], None], Callable[[str], None]]] = {}
        self._wake = threading.Condition()
        self._closed = False
        self._thread: threading.Thread | None = None

    def ask(
        self,
        topic: str,
        work: Callable[[], Any],
        then: Callable[[Any], None],
        failed: Callable[[str], None],
    ) -> None:
        """Have `work` done in the thread; `then` gets its value, or `failed` the sentence of its refusal."""
        with self._wake:
            self._waiting.pop(topic, None)
            self._waiting[topic] = (work, then, failed)
            if self._thread is None:
                self._thread = threading.Thread(target=self._run, name="fits", daemon=True)
                self._thread.start()
            self._wake.notify()

    def close(self) -> None:
        """Let the thread end after what it is doing."""
        with self._wake:
            self._closed = True
            self._waiting.clear()
            self._wake.notify()

    def _run(self) -> None:
        while True:
            with self._wake:
                while not self._waiting and not self._closed:
                    self._wake.wait()
                if self._closed:
                    return
                _topic, (work, then, failed) = self._waiting.popitem()
            self._do(work, then, failed)

    def _do(self, work: Callable[[], Any], then: Callable[[Any], None], failed: Callable[[str], None]) -> None:
        try:
            value = work()
        except BenchError as refusal:
            sentence = str(refusal)
            self._deliver(lambda: failed(sentence))
            return
        except Exception as fault:  # a fault in a fit must not end the thread that later fits need
            sentence = f"{type(fault).__name__}: {fault}"
            self._deliver(lambda: failed(sentence))
            return
        self._deliver(lambda: then(value))
