"""Readings that a logger recorded: a table of nearly any form becomes a run, by a small mapping.

The mapping says how the table is to be read; `guess_mapping` proposes one, `preview` shows what it makes of the
table, and `readings_from_log` reads it with the refusals of READINGS.csv."""

from __future__ import annotations

import re
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, fields, replace
from itertools import pairwise
from math import isfinite
from typing import Any

from core.bench.readings import Readings
from core.bench.setup import MODES
from core.bench.setup_check import nearest, shown
from core.bench.units import fahrenheit_to_C, kelvin_to_C
from core.errors import BadReadings, WrongUsage
from core.handover.clock_times import DATE_ORDERS, DAY_S, clock_s, guess_date_order, has_date, is_clock
from core.handover.csv_text import Place, decoded, records
from core.handover.readings_csv import COLDEST_C, HOTTEST_C, LONGEST_RECORD_S

DELIMITERS = {",": ",", ";": ";", "tab": "\t", "|": "|"}
TIME_FORMS = {"s": 1.0, "ms": 1e-3, "min": 60.0, "h": 3600.0, "d": DAY_S}
UNITS = ("C", "F", "K")
_NUMBER = re.compile(r"([+-]?(?:\d+(?:\.\d*)?|\.\d+)(?:[eE][+-]?\d+)?)\s*(?:°?\s*[CFK])?", re.ASCII)
_LOOKED_AT = 200  # lines that a guess looks at


@dataclass(frozen=True, slots=True)
class Mapping:
    """How a logger's table is to be read. Lines and columns count from 1.

    `time` is the form of the time column: s, ms, min, h, d, or clock; `date_column` is 0 unless the date has a
    column of its own. `from_s` and `to_s` cut a part out, in seconds from the first line; None is the whole."""

    delimiter: str = ","  # a key of DELIMITERS
    decimal: str = "."
    first_line: int = 2
    last_line: int | None = None
    time_column: int = 1
    date_column: int = 0
    time: str = "s"
    date_order: str = "ymd"
    reading_column: int = 2
    unit: str = "C"
    from_s: float | None = None
    to_s: float | None = None


@dataclass(frozen=True, slots=True)
class Preview:
    """What a mapping makes of a table: the names above the first line where there are any, the first lines as
    fields, the readings as far as they go, and the refusal ('' if there is none)."""

    names: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]
    readings: Readings | None
    fault: str


def log_text(data: bytes, name: str) -> str:
    """A log's bytes as text: UTF-8, UTF-16 by its mark, else Windows-1252, as loggers write them."""
    if data.startswith((b"\xff\xfe", b"\xfe\xff")):
        try:
            data = data.decode("utf-16").encode()
        except UnicodeDecodeError:
            raise Place(name, 1).refuse("this is broken UTF-16; save the file as UTF-8") from None
    try:
        return decoded(data, name)
    except BadReadings:
        if b"\0" in data:
            raise
        return data.decode("cp1252", errors="replace")


def _number(field: str, decimal: str) -> float | None:
    text = field.strip().replace("−", "-")
    if decimal == ",":
        if "." in text:
            return None
        text = text.replace(",", ".")
    found = _NUMBER.fullmatch(text)
    value = float(found[1]) if found else None
    return value if value is not None and isfinite(value) else None


def _lines(text: str, mapping: Mapping, name: str) -> Iterator[tuple[int, list[str]]]:
    """The mapped lines as fields; empty lines at the end do not count."""
    lines = re.split(r"\r\n|\r|\n", text)
    lines = lines[: mapping.last_line]
    while lines and not lines[-1].strip(" \t,;|"):
        lines.pop()
    kept = "\n".join(lines[mapping.first_line - 1 :])
    yield from records(kept, name, DELIMITERS[mapping.delimiter], mapping.first_line)


def _field(row: Sequence[str], column: int, place: Place) -> str:
    if column > len(row):
        raise place.refuse(f"there are only {len(row)} columns; check the delimiter and the column")
    return row[column - 1].strip()


def _time_s(row: Sequence[str], mapping: Mapping, place: Place) -> float:
    field = _field(row, mapping.time_column, place)
    if mapping.time != "clock":
        value = _number(field, mapping.decimal)
        if value is None:
            raise place.refuse(f"'{shown(field)}' is not a number of {mapping.time}")
        return value * TIME_FORMS[mapping.time]
    if mapping.date_column:
        field = f"{_field(row, mapping.date_column, place)} {field}"
    seconds = clock_s(field, mapping.date_order)
    if seconds is None:
        raise place.refuse(f"'{shown(field)}' is not a clock time (date in the order {mapping.date_order})")
    return seconds


def _reading_C(row: Sequence[str], mapping: Mapping, place: Place) -> float:
    field = _field(row, mapping.reading_column, place)
    value = _number(field, mapping.decimal)
    if value is None:
        raise place.refuse(f"'{shown(field)}' is not a number with a decimal {mapping.decimal}")
    reading = {"C": value, "F": fahrenheit_to_C(value), "K": kelvin_to_C(value)}[mapping.unit]
    if not COLDEST_C <= reading <= HOTTEST_C:
        raise place.refuse(f"{shown(field)} is {reading:.6g} °C, outside {COLDEST_C:g} to {HOTTEST_C:g} °C")
    return reading


def readings_from_log(text: str, mapping: Mapping, mode: str, name: str) -> Readings:
    """The readings in a log, their time from the first of them.

    In mode `beat` every line is a reading; in mode `change` a line counts where the reading differs from the one
    before. A clock without a date may pass midnight. Raises BadReadings, naming file, line and column."""
    if mode not in MODES:
        raise WrongUsage(f"'{shown(mode)}' is no way of recording; it is one of {', '.join(MODES)}.")
    times: list[float] = []
    temperatures: list[float] = []
    first = before = None
    days_s = 0.0
    for line, row in _lines(text, mapping, name):
        at = Place(name, line, str(mapping.time_column))
        time_s = _time_s(row, mapping, at) + days_s
        if before is not None and mapping.time == "clock" and time_s < before - DAY_S / 2:
            days_s, time_s = days_s + DAY_S, time_s + DAY_S
        if before is not None and time_s <= before:
            raise at.refuse("the time is not later than in the line before")
        before = time_s
        first = time_s if first is None else first
        if (mapping.from_s is not None and time_s - first < mapping.from_s) or (
            mapping.to_s is not None and time_s - first > mapping.to_s
        ):
            continue
        reading = _reading_C(row, mapping, Place(name, line, str(mapping.reading_column)))
        if mode == "change" and temperatures and reading == temperatures[-1]:
            continue
        times.append(time_s)
        temperatures.append(reading)
    if not times:
        raise Place(name, mapping.first_line).refuse(
            "there is no reading from here on; check the first line and the cut"
        )
    if times[-1] - times[0] > LONGEST_RECORD_S:
        raise Place(name, mapping.first_line).refuse(
            "the record is longer than a week; check the form of the time"
        )
    shifted = [round(time - times[0], 9) for time in times]
    if any(later <= earlier for earlier, later in pairwise(shifted)):
        raise Place(name, mapping.first_line).refuse("two times are the same to the nanosecond")
    return Readings(tuple(shifted), tuple(temperatures))


def preview(text: str, mapping: Mapping, mode: str, name: str, rows: int = 8) -> Preview:
    """What the mapping makes of the table; never raises for what stands in it."""
    names: tuple[str, ...] = ()
    first: list[tuple[str, ...]] = []
    try:
        above = replace(mapping, first_line=max(1, mapping.first_line - 1), last_line=None)
        for line, row in _lines(text, above, name):
            if line < mapping.first_line:
                names = tuple(row)
            elif len(first) < rows:
                first.append(tuple(row))
            else:
                break
        return Preview(names, tuple(first), readings_from_log(text, mapping, mode, name), "")
    except BadReadings as error:
        return Preview(names, tuple(first), None, str(error))


def guess_mapping(text: str) -> Mapping:
    """A likely mapping: the delimiter, decimal mark and columns under which most lines are a time that grows and a
    number. What cannot be told apart (°F without a heading, say) keeps its default; look at the preview."""
    best, most = Mapping(), (0, 0)
    lines = re.split(r"\r\n|\r|\n", text)[:_LOOKED_AT]
    for delimiter in DELIMITERS:
        for decimal in (".", ",") if delimiter != "," else (".",):
            found = _guess_columns(lines, Mapping(delimiter=delimiter, decimal=decimal))
            if found is not None and found[1] > most:
                best, most = found
    return best


def _guess_columns(lines: Sequence[str], mapping: Mapping) -> tuple[Mapping, tuple[int, int]] | None:
    """The mapping with its columns, and how much it reads: lines, and numbers in one of them."""
    mark = DELIMITERS[mapping.delimiter]
    rows = [[one.strip().strip('"') for one in line.split(mark)] for line in lines]
    typical = [row for row in rows if _holds_run(row, mapping)]
    if not typical:
        return None
    middle = typical[len(typical) // 2]
    start = next(i for i, row in enumerate(rows) if _holds_run(row, mapping) and len(row) >= len(middle))
    clocks = [i for i, field in enumerate(middle) if is_clock(field)]
    numbers = [i for i, field in enumerate(middle) if _number(field, mapping.decimal) is not None]
    heading = [one.lower() for one in rows[start - 1]] if start else []
    date = next((i for i, one in enumerate(middle) if clocks and has_date(f"{one} 00:00")), None)
    time = clocks[0] if clocks else _growing(typical, numbers, heading, mapping)
    others = [i for i in numbers if i not in (time, date)]
    if time is None or not others:
        return None
    reading = max(others, key=lambda i: _fall(typical, i, mapping))
    title = heading[reading] if reading < len(heading) else ""
    above = heading[time] if time < len(heading) else ""
    whole = f"{middle[date]} {middle[time]}" if date is not None else middle[time]
    form = next((one for one in ("ms", "min") if re.search(rf"\b{one}\b|_{one}\b", above)), "s")
    return (
        replace(
            mapping,
            first_line=start + 1,
            time_column=time + 1,
            date_column=date + 1 if date is not None else 0,
            time="clock" if clocks else form,
            date_order=guess_date_order(whole),
            reading_column=reading + 1,
            unit="F" if re.search(r"°\s*f|\bf\b|_f\b|fahrenheit", title) else "C",
        ),
        (len(typical), len(numbers)),
    )


def _holds_run(row: Sequence[str], mapping: Mapping) -> bool:
    times = sum(is_clock(field) for field in row)
    numbers = sum(_number(field, mapping.decimal) is not None for field in row)
    return numbers >= 1 and times + numbers >= 2


def _column(rows: Sequence[Sequence[str]], i: int, mapping: Mapping) -> list[float | None]:
    return [_number(row[i], mapping.decimal) if i < len(row) else None for row in rows]


def _growing(
    rows: Sequence[Sequence[str]], numbers: Sequence[int], heading: Sequence[str], mapping: Mapping
) -> int | None:
    """The column whose numbers only grow: the first that is headed as a time, else the first."""
    columns = ((i, pairwise(_column(rows, i, mapping))) for i in numbers)
    growing = [i for i, pairs in columns if all(a is not None and b is not None and b > a for a, b in pairs)]
    named = (
        i for i in growing if i < len(heading) and re.search(r"\b(m?s|min|sec\w*)\b|time|zeit|_m?s$", heading[i])
    )
    return next(named, growing[0] if growing else None)


def _fall(rows: Sequence[Sequence[str]], i: int, mapping: Mapping) -> float:
    """How far a column's numbers fall from first to last."""
    values = [value for value in _column(rows, i, mapping) if value is not None]
    return values[0] - values[-1] if values else float("-inf")


def mapping_from_words(words: Sequence[str], start: Mapping) -> Mapping:
    """`start` with the words of a command line in it, such as `time=clock`, `unit=F` or `reading_column=3`.

    Raises WrongUsage for a word that is none of these."""
    known = [one.name for one in fields(Mapping)]
    for word in words:
        key, _, value = word.partition("=")
        if key not in known:
            parts = f"which are {' '.join(known)}; the nearest is '{nearest(key, known)}'"
            raise WrongUsage(f"'{shown(word)}' is no part of a mapping, {parts}.")
        change: dict[str, Any] = {key: _word_value(key, value)}
        start = replace(start, **change)
    return start


_CHOICES = {
    "delimiter": tuple(DELIMITERS),
    "decimal": (".", ","),
    "time": (*TIME_FORMS, "clock"),
    "date_order": DATE_ORDERS,
    "unit": UNITS,
}


def _word_value(key: str, value: str) -> str | int | float:
    if key in _CHOICES:
        if value not in _CHOICES[key]:
            raise WrongUsage(f"'{key}={shown(value)}' is not known; {key} is one of {' '.join(_CHOICES[key])}.")
        return value
    number = _number(value, ".")
    if number is None or number < 0:
        raise WrongUsage(f"'{key}={shown(value)}' needs a number from 0 up.")
    if key in ("from_s", "to_s"):
        return number
    if number != int(number) or number > 1e6 or (number < 1 and key != "date_column"):
        raise WrongUsage(f"'{key}={shown(value)}' needs a whole number from 1 up.")
    return int(number)
