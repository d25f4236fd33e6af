"""`fit`: the answer to each run, out of READINGS.csv with its SETUP.toml or out of an exported folder."""

from __future__ import annotations

import sys
from argparse import Namespace
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from core.bench.setup_check import shown, shown_path
from core.bench.setup_file import read_setup
from core.commands import json_form, text_form
from core.errors import BenchError, NoAnswer, WrongUsage
from core.handover.export import is_export, read_session
from core.handover.readings_csv import read_readings
from core.handover.recompute import answer_to, answers_to
from core.judgement.answer import Answer


@dataclass(frozen=True, slots=True)
class _Outcome:
    """One run: what names it in JSON and in text, and its answer or its refusal."""

    about: dict[str, Any]
    title: str
    answer: Answer | BenchError


def run(args: Namespace) -> int:
    """Answer every run in the order given.

    A run that cannot be answered gives its sentence on stderr and status 1; the others are answered all the
    same."""
    for path in args.paths:
        _refuse_wrong_use(path, args.setup)
    status = 0
    first = True
    for path in args.paths:
        for outcome in _of_folder(path) if path.is_dir() else [_of_file(path, args.setup)]:
            if isinstance(outcome.answer, BenchError):
                sys.stderr.write(f"{outcome.answer}\n")
                status = 1
            elif args.json:
                print(json_form.line(json_form.answer_form(outcome.answer, outcome.about)), flush=True)
            else:
                print(("" if first else "\n\n") + text_form.answer_text(outcome.answer, outcome.title), flush=True)
                first = False
    return status


def _refuse_wrong_use(path: Path, setup: Path | None) -> None:
    name = shown_path(path)
    if not path.exists():
        raise WrongUsage(f"{name}: there is no such file or folder.")
    if path.is_dir():
        if not is_export(path):
            raise WrongUsage(f"{name}: the folder is no exported session; it has no runs.csv.")
        if setup is not None:
            raise WrongUsage(f"{name}: an exported session brings its set-ups; leave out --setup.")
    elif setup is None and not _beside(path).exists():
        raise WrongUsage(
            f"{name}: there is no {shown(_beside(path).name)} beside it; name a set-up after --setup."
        )
    elif setup is not None and not setup.exists():
        raise WrongUsage(f"{shown_path(setup)}: there is no such file.")


def _beside(path: Path) -> Path:
    return path.with_suffix(".toml")


def _of_file(path: Path, setup: Path | None) -> _Outcome:
    about = {"file": str(path)}
    try:
        return _Outcome(about, str(path), answer_to(read_readings(path), read_setup(setup or _beside(path))))
    except NoAnswer as error:
        return _Outcome(about, str(path), NoAnswer(f"{shown_path(path)}: {error}"))
    except BenchError as error:
        return _Outcome(about, str(path), error)


def _of_folder(folder: Path) -> Iterator[_Outcome]:
    try:
        session = read_session(folder)
    except BenchError as error:
        yield _Outcome({}, "", error)
        return
    for one, answer in zip(session.runs, answers_to(session), strict=True):
        where = f"{folder} run {one.run}"
        title = where + (f", {one.name}" if one.name else "") + (" (invented)" if one.invented else "")
        about = {"file": str(folder), "run": one.run, "name": one.name, "kind": one.kind, "invented": one.invented}
        refused = isinstance(answer, BenchError)
        yield _Outcome(about, title, NoAnswer(f"{shown_path(where)}: {answer}") if refused else answer)
