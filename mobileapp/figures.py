"""Numbers as a person reads them: rounded to their uncertainty, aligned on the decimal point, with true signs."""

from __future__ import annotations

import math
from collections.abc import Sequence

from core.bench.units import with_u
from mobileapp.words import language

MINUS, THIN, FIGURE_SPACE, POINT_SPACE = "−", "\u202f", "\u2007", "\u2008"
NO_VALUE = "—"


def number(value: float | None, decimals: int = 1) -> str:
    """A number with its decimal mark in the person's language; a dash where there is none."""
    if value is None or not math.isfinite(value):
        return NO_VALUE
    text = f"{round(value, decimals):.{max(decimals, 0)}f}"
    if float(text) == 0:
        text = text.lstrip("-")
    return localised(text)


def localised(text: str) -> str:
    """A plain decimal with a true minus and the decimal mark of the language."""
    text = text.replace("-", MINUS)
    return text.replace(".", ",") if language() == "de" else text


def with_uncertainty(value: float | None, expanded: float | None) -> tuple[str, str]:
    """Value and expanded uncertainty, both to two digits of the uncertainty."""
    if value is None or expanded is None or not (math.isfinite(value) and math.isfinite(expanded)):
        return NO_VALUE, NO_VALUE
    first, _gap, second = with_u(value, expanded).partition(" ± ")
    return localised(first), localised(second) or NO_VALUE


def significant(value: float | None, digits: int = 3) -> str:
    """A number to so many significant digits."""
    if value is None or not math.isfinite(value):
        return NO_VALUE
    if value == 0:
        return number(0.0, digits - 1)
    return number(value, digits - 1 - math.floor(math.log10(abs(value))))


def percent(share: float | None, decimals: int = 0) -> str:
    """A share as per cent, with a thin space before the sign."""
    return NO_VALUE if share is None else f"{number(100 * share, decimals)}{THIN}%"


def aligned(texts: Sequence[str]) -> list[str]:
    """The texts padded behind, so that set flush right their decimal marks stand in one line."""
    longest = max((_behind(text) for text in texts), default=0)
    return [text + _padding(longest, _behind(text)) for text in texts]


def _behind(text: str) -> int:
    for mark in (".", ","):
        if mark in text:
            return len(text) - text.index(mark)
    return 0


def _padding(longest: int, own: int) -> str:
    if own >= longest:
        return ""
    return (POINT_SPACE if own == 0 else "") + FIGURE_SPACE * (longest - max(own, 1))


def clock_time(seconds: float) -> str:
    """Minutes and seconds, as 3:07."""
    whole = max(0, round(seconds))
    return f"{whole // 60}:{whole % 60:02d}"
