"""The answers to an exported session, computed again from readings and set-ups as in the app."""

from __future__ import annotations

from collections.abc import Sequence
from math import isfinite

import numpy as np

from core.bench.readings import Readings, Ruling
from core.bench.setup import Setup
from core.errors import BenchError, NoAnswer
from core.handover.session import ExportSession
from core.judgement.answer import Answer
from core.judgement.judge import judge
from core.judgement.series import Series, law_of

_LOOK = "hold them against the mode, the resolution and the air temperature of the set-up"


def answer_to(
    readings: Readings,
    setup: Setup,
    rulings: tuple[Ruling, ...] = (),
    start_s: float | None = None,
    earlier: Sequence[Answer] = (),
) -> Answer:
    """The answer to one run. Raises NoAnswer where its readings cannot give one.

    Readings that no cooling body gives can take the arithmetic out of its range; that is no answer either."""
    try:
        with np.errstate(all="ignore"):
            answer = judge(readings, setup, rulings=rulings, start_s=start_s, earlier=earlier)
    except BenchError:
        raise
    except (ArithmeticError, ValueError, IndexError) as error:  # NumPy's LinAlgError is a ValueError
        raise NoAnswer(f"The fit of these readings breaks down ({error}); {_LOOK}.") from error
    if not (isfinite(answer.h_W_m2K) and isfinite(answer.h_u_W_m2K)):
        raise NoAnswer(f"The fit of these readings ends at no number; {_LOOK}.")
    return answer


def answers_to(session: ExportSession) -> list[Answer | BenchError]:
    """The answer to each run, or the refusal of it, held against the runs before it that stand beside it."""
    answers: list[Answer | BenchError] = []
    for run in session.runs:
        pairs = zip(session.runs, answers, strict=False)
        earlier = [answer for other, answer in pairs if isinstance(answer, Answer) and run.stands_beside(other)]
        try:
            answers.append(answer_to(run.readings, run.setup, run.rulings, run.start_s, earlier))
        except BenchError as error:
            answers.append(error)
    return answers


def law_over(
    session: ExportSession, answers: Sequence[Answer | BenchError]
) -> tuple[Series, list[tuple[str, str]]]:
    """The law over the runs of a session, and the runs left out of it, each with the reason.

    Left out are runs in still air, rehearsals beside measured runs, runs without an answer or with the verdict
    `again` that nobody decided to keep, and discarded ones. Raises NoAnswer with fewer than two speeds."""
    real = any(run.kind != "rehearsal" for run in session.runs)
    kept: list[tuple[str, Answer]] = []
    left_out: list[tuple[str, str]] = []
    for run, answer in zip(session.runs, answers, strict=True):
        if isinstance(answer, BenchError):
            left_out.append((run.run, str(answer)))
        elif run.decision == "discard":
            left_out.append((run.run, f"It was discarded. {run.decision_reason}".strip()))
        elif run.kind == "rehearsal" and real:
            left_out.append((run.run, "It is a rehearsal."))
        elif run.setup.recording.kind != "forced" or answer.nusselt is None or answer.reynolds is None:
            left_out.append((run.run, "It was not made in forced flow."))
        elif answer.verdict == "again" and run.decision != "keep":
            left_out.append((run.run, answer.reason))
        else:
            kept.append((run.run, answer))
    if not kept:
        raise NoAnswer("No run of this session can stand in a law over speeds; 'fit' says why for each.")
    return law_of([answer for _, answer in kept], [name for name, _ in kept]), left_out
