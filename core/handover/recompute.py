"""The answers to an exported session, computed again from readings and set-ups as in the app."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from core.bench.readings import Readings, Ruling
from core.bench.setup import Setup
from core.errors import BenchError, NoAnswer
from core.handover.session import ExportSession
from core.judgement.answer import Answer
from core.judgement.judge import judge
from core.judgement.series import Series, law_of


def answer_to(
    readings: Readings, setup: Setup, rulings: tuple[Ruling, ...] = (), start_s: float | None = None
) -> Answer:
    """The answer to one run. Raises NoAnswer where its readings cannot give one."""
    try:
        return judge(readings, setup, rulings=rulings, start_s=start_s)
    except (ArithmeticError, np.linalg.LinAlgError) as error:
        raise NoAnswer(
            f"The fit of these readings breaks down ({error}); check them against the set-up."
        ) from error


def answers_to(session: ExportSession) -> list[Answer | BenchError]:
    """The answer to each run, or the refusal of it."""
    answers: list[Answer | BenchError] = []
    for run in session.runs:
        try:
            answers.append(answer_to(run.readings, run.setup, run.rulings, run.start_s))
        except BenchError as error:
            answers.append(error)
    return answers


def law_over(
    session: ExportSession, answers: Sequence[Answer | BenchError]
) -> tuple[Series, list[tuple[str, str]]]:
    """The law over the runs of a session, and the runs left out of it, each with the reason.

    Left out are runs in still air, without an answer or with the verdict `again`, and of another kind than the
    best one present (measured before demo before rehearsal). Raises NoAnswer with fewer than two speeds."""
    kind = next(
        (kind for kind in ("measured", "demo") if any(run.kind == kind for run in session.runs)), "rehearsal"
    )
    kept: list[tuple[str, Answer]] = []
    left_out: list[tuple[str, str]] = []
    for run, answer in zip(session.runs, answers, strict=True):
        if isinstance(answer, BenchError):
            left_out.append((run.run, str(answer)))
        elif run.kind != kind:
            left_out.append((run.run, f"It is a {run.kind} run, the others are {kind} ones."))
        elif run.setup.recording.kind != "forced" or answer.nusselt is None or answer.reynolds is None:
            left_out.append((run.run, "It was not made in forced flow."))
        elif answer.verdict == "again":
            left_out.append((run.run, answer.reason))
        else:
            kept.append((run.run, answer))
    if not kept:
        raise NoAnswer("No run of this session can stand in a law over speeds; 'fit' says why for each.")
    return law_of([answer for _, answer in kept], [name for name, _ in kept]), left_out
