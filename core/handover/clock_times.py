"""Clock times as loggers write them, to seconds: ISO 8601, day and month in either order, 12 or 24 hours."""

from __future__ import annotations

import re
from datetime import datetime, timedelta

DATE_ORDERS = ("ymd", "dmy", "mdy")
DAY_S = 86_400.0
_EPOCH = datetime(2000, 1, 1)

_CLOCK = re.compile(
    r"(?:(\d{1,4})[-./](\d{1,2})[-./](\d{1,4})[T ,;]*)?"
    r"(\d{1,2}):(\d{2})(?::(\d{2})(?:[.,](\d{1,9}))?)?\s*([AaPp]\.?[Mm]\.?)?\s*(Z|[+-]\d{2}:?\d{2})?",
    re.ASCII,
)


def is_clock(field: str) -> bool:
    """Whether a field looks like a clock time, with or without its date."""
    return _CLOCK.fullmatch(field.strip()) is not None


def has_date(field: str) -> bool:
    """Whether a clock time has its date with it."""
    found = _CLOCK.fullmatch(field.strip())
    return found is not None and found[1] is not None


def guess_date_order(field: str) -> str:
    """The likely order of the date in a clock time: dots mean day first, slashes month first, unless that cannot
    be."""
    found = _CLOCK.fullmatch(field.strip())
    if found is None or found[1] is None or len(found[1]) == 4:
        return "ymd"
    first, second = int(found[1]), int(found[2])
    if first > 12 or "." in field.partition(":")[0]:
        return "dmy"
    return "mdy" if second > 12 or "/" in field else "dmy"


def clock_s(field: str, date_order: str) -> float | None:
    """Seconds of a clock time: from midnight without a date, from the year 2000 with one; None if it is none.

    `date_order` is one of DATE_ORDERS; a year of four digits in front is always ymd. An offset from UTC counts."""
    found = _CLOCK.fullmatch(field.strip())
    if found is None:
        return None
    a, b, c, hour, minute, second, fraction, half, offset = found.groups()
    hours = int(hour)
    if half:
        if not 1 <= hours <= 12:
            return None
        hours = hours % 12 + (12 if half[0] in "Pp" else 0)
    if hours > 23 or int(minute) > 59 or int(second or 0) > 59:
        return None
    seconds = hours * 3600.0 + int(minute) * 60.0 + float(f"{second or 0}.{fraction or 0}")
    if a is None:
        return seconds
    order = "ymd" if len(a) == 4 else date_order
    parts = dict(zip(order, (int(a), int(b), int(c)), strict=True))
    year = parts["y"] + (2000 if parts["y"] < 100 else 0)
    try:
        day = datetime(year, parts["m"], parts["d"])
    except ValueError:
        return None
    return (day - _EPOCH) / timedelta(seconds=1) + seconds - _offset_s(offset)


def _offset_s(offset: str | None) -> float:
    if offset is None or offset == "Z":
        return 0.0
    seconds = int(offset[1:3]) * 3600.0 + int(offset[-2:]) * 60.0
    return -seconds if offset.startswith("-") else seconds
