"""How one value of a set-up is described: unit, range, meaning. The file reader, the file writer and the
form on the screen all read the same description."""

from __future__ import annotations

from dataclasses import MISSING, dataclass, field
from typing import Any, Literal

Kind = Literal["number", "integer", "choice", "text", "numbers"]


@dataclass(frozen=True, slots=True)
class Description:
    """What a person and a parser need to know of one value.

    `low` and `high` are inclusive, in `unit`; `above_low` makes `low` exclusive. `typical` is a short example
    range in the same unit, for the help beside the field."""

    kind: Kind
    meaning: str
    unit: str = ""
    low: float | None = None
    high: float | None = None
    above_low: bool = False
    choices: tuple[str, ...] = ()
    typical: str = ""


def _with(description: Description, default: Any) -> Any:
    if default is MISSING:
        return field(metadata={"description": description})
    return field(default=default, metadata={"description": description})


def number(
    unit: str,
    low: float,
    high: float,
    meaning: str,
    *,
    default: Any = MISSING,
    above_low: bool = False,
    typical: str = "",
) -> Any:
    """A finite real number in `unit` between `low` and `high`."""
    return _with(Description("number", meaning, unit, low, high, above_low, (), typical), default)


def integer(low: int, high: int, meaning: str, *, default: Any = MISSING, typical: str = "") -> Any:
    """A whole number between `low` and `high`."""
    return _with(Description("integer", meaning, "", low, high, False, (), typical), default)


def numbers(unit: str, low: float, high: float, meaning: str, *, typical: str = "") -> Any:
    """A list of finite real numbers in `unit`; empty when left out."""
    return _with(Description("numbers", meaning, unit, low, high, False, (), typical), ())


def choice(choices: tuple[str, ...], meaning: str, *, default: Any = MISSING) -> Any:
    """One word out of `choices`."""
    return _with(Description("choice", meaning, choices=choices), default)


def text(meaning: str, *, default: Any = MISSING, typical: str = "") -> Any:
    """A short free text."""
    return _with(Description("text", meaning, typical=typical), default)
