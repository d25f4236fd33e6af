"""READINGS.csv: the header `time_s,reading_C` and one row a reading, read strictly and written exactly."""

from __future__ import annotations

from pathlib import Path

from core.bench.readings import Readings
from core.errors import BadReadings
from core.handover.csv_text import Place, decoded, parsed_number, read_bytes, table, to_text

HEADER = ("time_s", "reading_C")
LONGEST_RECORD_S = 7 * 86_400.0
COLDEST_C, HOTTEST_C = -80.0, 1000.0  # beyond any bench of this kind


def readings_from_bytes(data: bytes, name: str) -> Readings:
    """The readings in a file's bytes; `name` is what a refusal calls the file.

    Raises BadReadings in one sentence that names the line and the column."""
    return readings_from_text(decoded(data, name), name)


def readings_from_text(text: str, name: str) -> Readings:
    """The readings in a table's text. Raises BadReadings as `readings_from_bytes` does."""
    times: list[float] = []
    temperatures: list[float] = []
    for line, (time, reading) in table(text, name, HEADER):
        at = Place(name, line, HEADER[0])
        time_s = parsed_number(time, at, 0.0, LONGEST_RECORD_S, "s")
        if times and time_s <= times[-1]:
            raise at.refuse(f"{time} s is not later than the {times[-1]!r} s of the row before")
        times.append(time_s)
        temperatures.append(parsed_number(reading, Place(name, line, HEADER[1]), COLDEST_C, HOTTEST_C, "°C"))
    if not times:
        raise Place(name, 1).refuse("there is no reading below the header")
    return Readings(tuple(times), tuple(temperatures))


def read_readings(path: Path) -> Readings:
    """The readings in a file. Raises BadReadings where it cannot be read or used."""
    return readings_from_bytes(read_bytes(path), str(path))


def readings_to_text(readings: Readings) -> str:
    """The readings as the text of a READINGS.csv that reads back to the same numbers.

    Raises BadReadings where there are none."""
    if not readings.time_s:
        raise BadReadings("There are no readings to write.")
    return to_text(HEADER, ((repr(t), repr(c)) for t, c in zip(readings.time_s, readings.reading_C, strict=True)))
