"""What a display showed, and when: the input of every fit."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Readings:
    """The readings of one run, in order of time.

    `time_s` [s], shape (n,), strictly increasing from the start of the record. `reading_C` [°C], shape (n,),
    as the display showed it. In mode `change` row i is the moment at which the display became `reading_C[i]`
    and row 0 is the display at the start; in mode `beat` it is what the display showed at that moment.
    `stamp_halfwidth_s` is the half-width of the time stamps' error where it is known."""

    time_s: tuple[float, ...]
    reading_C: tuple[float, ...]
    stamp_halfwidth_s: float = 0.0

    def __len__(self) -> int:
        return len(self.time_s)


@dataclass(frozen=True, slots=True)
class Ruling:
    """A person's word on one reading (`row` counts from 0) or on the start of the fit window."""

    row: int
    keep: bool
    by: str = "person"
