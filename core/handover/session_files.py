"""An exported session as the bytes of its four files, and those bytes as a session again.

The bytes depend on the session alone, so the same session gives the same files for ever."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator, Mapping
from datetime import datetime
from hashlib import sha256
from typing import Any

from core.bench.readings import Readings, Ruling
from core.bench.setup import SECTIONS, Setup
from core.bench.setup_check import problems, required, shown, shown_path
from core.errors import BadReadings, HandoverFault
from core.handover.columns import ABOUT, READING_COLUMNS, RUN_COLUMNS, Column, reading_rows, run_row, setup_columns
from core.handover.csv_text import Place, as_written, decoded, named_table, parsed_number, to_text
from core.handover.readings_csv import COLDEST_C, HOTTEST_C, LONGEST_RECORD_S
from core.handover.session import DECISIONS, KINDS, ExportRun, ExportSession
from core.handover.table_metadata import metadata_text

RUNS, READINGS, METADATA, SUMS = "runs.csv", "readings.csv", "csv-metadata.json", "SHA256SUMS"
FILES = (RUNS, READINGS, METADATA, SUMS)
_HUGE = 1e300
_TEXTS = ("name", "note", "recorded_at", "stamp_source", "marks", "decision", "decision_reason")


def session_files(session: ExportSession) -> dict[str, bytes]:
    """The four files of an export, name to bytes. Raises HandoverFault for a session that a table cannot hold."""
    _check(session)
    runs = to_text([one.name for one in RUN_COLUMNS], (run_row(session, run) for run in session.runs))
    readings = to_text(
        [one.name for one in READING_COLUMNS], (row for run in session.runs for row in reading_rows(run))
    )
    try:
        files = {RUNS: runs.encode(), READINGS: readings.encode(), METADATA: metadata_text().encode()}
    except UnicodeEncodeError:
        raise HandoverFault("A name or a note holds a character that no file can hold; type it anew.") from None
    files[SUMS] = "".join(f"{sha256(data).hexdigest()}  {name}\n" for name, data in sorted(files.items())).encode()
    return files


def _check(session: ExportSession) -> None:
    if not session.runs:
        raise HandoverFault("The session has no run to export.")
    twice = [name for name, count in Counter(run.run for run in session.runs).items() if count > 1]
    if twice:
        raise HandoverFault(
            f"Two runs of the session are called '{shown(twice[0])}'; each needs a name of its own."
        )
    for run in session.runs:
        texts = (session.name, run.run, run.no_answer, *(getattr(run, name) for name in _TEXTS))
        if any("\0" in one for one in texts):
            raise HandoverFault(f"Run '{shown(run.run)}' holds a NUL character in a text; type that text anew.")
        if not run.run or run.kind not in KINDS:
            raise HandoverFault(f"Run '{shown(run.run)}' needs a name and a kind out of {', '.join(KINDS)}.")
        if run.decision not in ("", *DECISIONS):
            raise HandoverFault(f"Run '{shown(run.run)}' has a decision that is none of {', '.join(DECISIONS)}.")
        rows = [one.row for one in run.rulings]
        if rows != sorted(set(rows)) or not all(0 <= row < len(run.readings) for row in rows):
            raise HandoverFault(f"Run '{shown(run.run)}' has rulings out of order or on rows that it lacks.")
        if run.recorded_at and not _is_instant(run.recorded_at):
            raise HandoverFault(
                f"Run '{shown(run.run)}' has the wall time '{shown(run.recorded_at)}', not ISO 8601."
            )


def _is_instant(text: str) -> bool:
    try:
        return datetime.fromisoformat(text).tzinfo is not None and "T" in text
    except ValueError:
        return False


def _value(column: Column, field: str, place: Place) -> Any:
    """A field as the value of its column; None where it is empty and may be."""
    if field == "" and column.datatype not in ("string", "doubles"):
        if column.needed:
            raise place.refuse("there is nothing where a value is wanted")
        return None
    if column.datatype == "double":
        return parsed_number(field, place, -_HUGE, _HUGE, column.unit)
    if column.datatype == "doubles":
        return tuple(parsed_number(one, place, -_HUGE, _HUGE, column.unit) for one in field.split())
    if column.datatype == "integer":
        value = parsed_number(field, place, -1e9, 1e9, column.unit)
        if value != int(value):
            raise place.refuse(f"{shown(field)} is not a whole number")
        return int(value)
    if column.datatype == "boolean":
        if field not in ("true", "false"):
            raise place.refuse(f"'{shown(field)}' is neither true nor false")
        return field == "true"
    return as_written(field)


Row = tuple[int, dict[str, Any]]


def _rows(data: bytes, file: str, columns: tuple[Column, ...]) -> Iterator[Row]:
    """The rows of a table; a column that is not there gives None, so that older and shorter tables can be read."""
    by_name = {one.name: one for one in columns}
    needed = [one.name for one in columns if one.needed]
    for line, fields in named_table(decoded(data, file), file, list(by_name), needed):
        row: dict[str, Any] = dict.fromkeys(by_name)
        row |= {name: _value(by_name[name], field, Place(file, line, name)) for name, field in fields.items()}
        yield line, row


def _setup(row: dict[str, Any], file: str, line: int) -> Setup:
    values: dict[str, dict[str, Any]] = {section: {} for section in SECTIONS}
    for name, (section, key, _) in setup_columns().items():
        if row[name] not in (None, ""):
            values[section][key] = row[name]
    for section in SECTIONS:
        for key in required(section):
            if key not in values[section]:
                raise Place(file, line, f"{section}_{key}").refuse("there is nothing where a value is wanted")
    setup = Setup(**{section: SECTIONS[section](**values[section]) for section in SECTIONS})
    for problem in problems(setup):
        raise Place(file, line, f"{problem.section}_{problem.key}").refuse(f"the value {problem.fault}")
    return setup


def _readings(rows: list[Row], file: str, halfwidth_s: float) -> tuple[Readings, tuple[Ruling, ...]]:
    times: list[float] = []
    temperatures: list[float] = []
    rulings: list[Ruling] = []
    for line, row in rows:
        if row["row"] != len(times) + 1:
            raise Place(file, line, "row").refuse(f"row {row['row']} stands where row {len(times) + 1} is wanted")
        time_s, reading_C = row["time_s"], row["reading_C"]
        if not 0.0 <= time_s <= LONGEST_RECORD_S or (times and time_s <= times[-1]):
            raise Place(file, line, "time_s").refuse(
                f"{time_s} s is not later than the row before, or out of range"
            )
        if not COLDEST_C <= reading_C <= HOTTEST_C:
            raise Place(file, line, "reading_C").refuse(
                f"{reading_C} °C is outside {COLDEST_C:g} to {HOTTEST_C:g} °C"
            )
        if row["ruling"]:
            if row["ruling"] not in ("keep", "leave-out"):
                raise Place(file, line, "ruling").refuse(f"'{shown(row['ruling'])}' is neither keep nor leave-out")
            rulings.append(Ruling(len(times), row["ruling"] == "keep", row["ruling_by"]))
        times.append(time_s)
        temperatures.append(reading_C)
    return Readings(tuple(times), tuple(temperatures), halfwidth_s), tuple(rulings)


def session_from_files(files: Mapping[str, bytes], folder: str) -> ExportSession:
    """The session in an export's files, its answers left to be computed again (`answer` is None).

    Where SHA256SUMS is among the files, each named file must be as it was written. Raises BadReadings."""
    names = {name: f"{folder}/{name}" for name in FILES}
    for name in (RUNS, READINGS):
        if name not in files:
            raise BadReadings(
                f"{shown_path(names[name])}: the file is missing; copy the whole exported folder again."
            )
    check_sums(files, folder)
    by_run: dict[str, list[Row]] = {}
    for line, row in _rows(files[READINGS], names[READINGS], READING_COLUMNS):
        by_run.setdefault(row["run"], []).append((line, row))
    runs: list[ExportRun] = []
    session = ""
    for line, row in _rows(files[RUNS], names[RUNS], RUN_COLUMNS):
        if row["run"] in {run.run for run in runs}:
            raise Place(names[RUNS], line, "run").refuse(
                f"'{shown(row['run'])}' is already the name of a run above"
            )
        if row["kind"] not in KINDS:
            raise Place(names[RUNS], line, "kind").refuse(f"'{shown(row['kind'])}' is none of {', '.join(KINDS)}")
        if row["decision"] not in (None, "", *DECISIONS):
            where = Place(names[RUNS], line, "decision")
            raise where.refuse(f"'{shown(row['decision'])}' is none of {', '.join(DECISIONS)}")
        session = row["session"] or ""
        setup = _setup(row, names[RUNS], line)
        readings, rulings = _readings(by_run.pop(row["run"], []), names[READINGS], row["stamp_halfwidth_s"])
        about = {column.name: row[column.name] for column, _ in ABOUT}
        del about["session"], about["stamp_halfwidth_s"]
        for name in _TEXTS:
            about[name] = about[name] or ""
        runs.append(
            ExportRun(setup=setup, readings=readings, rulings=rulings, no_answer=row["no_answer"] or "", **about)
        )
    for name, rows in by_run.items():
        raise Place(names[READINGS], rows[0][0], "run").refuse(f"runs.csv has no run '{shown(name)}'")
    return ExportSession(session, tuple(runs))


def check_sums(files: Mapping[str, bytes], folder: str) -> None:
    """Raise BadReadings where a file differs from its sum in SHA256SUMS, if that is among the files."""
    name = f"{folder}/{SUMS}"
    for line, entry in enumerate(decoded(files.get(SUMS, b""), name).splitlines(), 1):
        digest, _, summed = entry.partition("  ")
        if summed not in FILES:
            raise Place(name, line).refuse(f"'{shown(entry)}' is no sum of a file of an export")
        if summed not in files:
            raise BadReadings(f"{shown_path(folder)}/{summed}: the file is missing; copy the whole folder again.")
        if sha256(files[summed]).hexdigest() != digest:
            raise BadReadings(
                f"{shown_path(folder)}/{summed}: the file is not as it was exported; copy it again, or "
                f"delete {SUMS} to use it as it stands."
            )
