"""RFC 4180 text, in and out: one place for what every table of a hand-over shares.

In: UTF-8 with or without a byte order mark, lines ended by CR LF, LF or CR. Out: UTF-8 without a mark, CR LF."""

from __future__ import annotations

import csv
import io
import re
from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass
from math import isfinite
from pathlib import Path

from core.bench.setup_check import nearest, shown, shown_path
from core.errors import BadReadings

LARGEST_FILE = 64_000_000  # bytes: some two million readings
_LONGEST_FIELD = 131_072  # the csv module's own limit, named in the refusal
_NUMBER = re.compile(r"[+-]?(\d+(\.\d*)?|\.\d+)([eE][+-]?\d+)?", re.ASCII)
_COMMA_NUMBER = re.compile(r"[+-]?\d+,\d+", re.ASCII)
_FORMULA = ("=", "+", "-", "@", "\t", "\r", "'")  # first characters that a spreadsheet may act on; ' marks them


@dataclass(frozen=True, slots=True)
class Place:
    """Where in a file something stands, as a refusal names it."""

    file: str
    line: int
    column: str = ""

    def refuse(self, fault: str) -> BadReadings:
        """The refusal of what stands here."""
        column = f", column {shown(self.column)}" if self.column else ""
        return BadReadings(f"{shown_path(self.file)} line {self.line}{column}: {fault}.")


def read_bytes(path: Path, most: int = LARGEST_FILE) -> bytes:
    """The content of a file. Raises BadReadings where it cannot be read or is absurdly large."""
    try:
        with path.open("rb") as file:
            data = file.read(most + 1)
    except (OSError, ValueError) as error:
        reason = error.strerror if isinstance(error, OSError) and error.strerror else str(error)
        raise BadReadings(f"{shown_path(path)}: the file cannot be read ({shown(reason)}).") from None
    if len(data) > most:
        raise BadReadings(f"{shown_path(path)}: the file is larger than {most / 1e6:g} MB; it is no such table.")
    return data


def decoded(data: bytes, name: str, encoding: str = "utf-8") -> str:
    """Bytes as text; a byte order mark is taken off. Raises BadReadings for another encoding or a NUL."""
    for mark, known in ((b"\xff\xfe", "UTF-16"), (b"\xfe\xff", "UTF-16")):
        if data.startswith(mark):
            raise Place(name, 1).refuse(f"this is {known}; save the file as UTF-8")
    try:
        text = data.decode(encoding)
    except UnicodeDecodeError as error:
        line = data.count(b"\n", 0, error.start) + 1
        raise Place(name, line).refuse(f"this is not {encoding.upper()}; save the file as UTF-8") from None
    text = text.removeprefix("\N{ZERO WIDTH NO-BREAK SPACE}")
    nul = text.find("\0")
    if nul >= 0:
        raise Place(name, text.count("\n", 0, nul) + 1).refuse("there is a NUL character; the file is damaged")
    return text


def records(text: str, name: str, delimiter: str = ",", first_line: int = 1) -> Iterator[tuple[int, list[str]]]:
    """The records of a table, each with the line at which it begins; the text begins at `first_line` of its file.

    Raises BadReadings for broken quotes."""
    reader = csv.reader(io.StringIO(text, newline=""), strict=True, delimiter=delimiter)
    line = first_line
    while True:
        try:
            fields = next(reader)
        except StopIteration:
            return
        except csv.Error as error:
            long = "field limit" in str(error)
            fault = (
                f"a field is longer than {_LONGEST_FIELD} characters"
                if long
                else f"the quotes are broken ({error})"
            )
            raise Place(name, line).refuse(fault) from None
        yield line, fields
        line = reader.line_num + first_line


def table(text: str, name: str, header: Sequence[str]) -> Iterator[tuple[int, list[str]]]:
    """The rows under a header that must stand there exactly; empty lines at the end do not count."""
    rows = records(text, name)
    first = next(rows, (1, []))[1]
    if first != list(header):
        wanted = ",".join(header)
        if not first or first == [""]:
            raise Place(name, 1).refuse(f"the header {wanted} is missing")
        other = len(first) == 1 and any(mark in first[0] for mark in ";\t|")
        hint = "; for tables of another form use 'python -m core import'" if other else ""
        raise Place(name, 1).refuse(f"the header is '{shown(','.join(first))}', where {wanted} is wanted{hint}")
    yield from _rows(rows, name, header)


def named_table(
    text: str, name: str, known: Sequence[str], needed: Sequence[str]
) -> Iterator[tuple[int, dict[str, str]]]:
    """The rows as fields by name, under a header of `known` names in any order that lacks none of `needed`."""
    rows = records(text, name)
    header = next(rows, (1, []))[1]
    for one in header:
        if one not in known:
            raise Place(name, 1, one).refuse(f"the name is not known; the nearest is '{nearest(one, known)}'")
        if header.count(one) > 1:
            raise Place(name, 1, one).refuse("the name stands twice in the header")
    for one in needed:
        if one not in header:
            raise Place(name, 1, one).refuse("the column is missing")
    for line, row in _rows(rows, name, header):
        yield line, dict(zip(header, row, strict=True))


def _rows(
    rows: Iterator[tuple[int, list[str]]], name: str, header: Sequence[str]
) -> Iterator[tuple[int, list[str]]]:
    empty = 0
    for line, row in rows:
        if not row:
            empty = empty or line
            continue
        if empty:
            raise Place(name, empty).refuse("the line is empty; take it out")
        if len(row) != len(header):
            ends = " (a comma at the end?)" if len(row) == len(header) + 1 and not row[-1] else ""
            fault = f"there are {len(row)} fields where the header names {len(header)}{ends}"
            raise Place(name, line, header[min(len(row), len(header)) - 1]).refuse(fault)
        yield line, row


def parsed_number(field: str, place: Place, low: float, high: float, unit: str) -> float:
    """A field as a finite number from `low` to `high`; refuses what is none, a decimal comma by name."""
    if not _NUMBER.fullmatch(field):
        if not field:
            raise place.refuse("there is nothing where a number is wanted")
        hint = ""
        if _COMMA_NUMBER.fullmatch(field.strip()):
            hint = "; write a decimal point"
        elif _NUMBER.fullmatch(field.strip()):
            hint = "; take out the space"
        raise place.refuse(f"'{shown(field)}' is not a number{hint}")
    value = float(field)
    if not isfinite(value) or not low <= value <= high:
        raise place.refuse(f"{shown(field)} {unit} is outside {low:.10g} to {high:.10g} {unit}")
    return value


def harmless(text: str) -> str:
    """A text that a spreadsheet will not take for a formula: an apostrophe before a first character that could
    start one (and before an apostrophe, so that `as_written` is exact)."""
    return "'" + text if text.startswith(_FORMULA) else text


def as_written(field: str) -> str:
    """The text that `harmless` was given."""
    return field.removeprefix("'")


def to_text(header: Sequence[str], rows: Iterable[Sequence[str]]) -> str:
    """A table as RFC 4180 text, lines ended by CR LF."""
    out = io.StringIO(newline="")
    writer = csv.writer(out, lineterminator="\r\n")
    writer.writerow(header)
    writer.writerows(rows)
    return out.getvalue()
