"""All answers of the session at hand, asked for one by one and told together."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any


def with_answers(model: Any, then: Callable[[], None]) -> None:
    """Call `then` once every closed run of the session has its answer or its refusal."""
    runs = [run.run for run in model.session.runs if not run.open] if model.session else []
    waiting = set(runs)

    def come(run: str) -> Callable[[Any], None]:
        def told(_answer: Any) -> None:
            waiting.discard(run)
            if not waiting:
                then()

        return told

    if not runs:
        then()
    for run in runs:
        model.ask_answer(run, come(run), come(run))
