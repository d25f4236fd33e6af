"""What can happen in a session, as frozen events, and their form in the journal.

Stamps [s] are on the device's monotonic clock. An event is never changed or taken away; an undo is one more."""

from __future__ import annotations

import json
from dataclasses import asdict, dataclass, fields
from typing import Any, ClassVar

from core.errors import JournalFault

RUN_KINDS = ("measured", "still-air", "rehearsal", "imported")
DECISIONS = ("keep", "look", "discard")


@dataclass(frozen=True, slots=True)
class SessionOpened:
    """A session begins: a bench and the runs on it."""

    kind: ClassVar[str] = "session opened"
    title: str
    wall_time: str
    invented: bool = False


@dataclass(frozen=True, slots=True)
class SessionRenamed:
    """The session has another title from now on."""

    kind: ClassVar[str] = "session renamed"
    title: str


@dataclass(frozen=True, slots=True)
class BenchDescribed:
    """The bench as it is from now on; in a run, the bench that this run is judged with."""

    kind: ClassVar[str] = "bench described"
    setup_toml: str


@dataclass(frozen=True, slots=True)
class RunOpened:
    """A run begins. `slept_s` is how long the device had slept by then, `seed` belongs to a rehearsal."""

    kind: ClassVar[str] = "run opened"
    run_kind: str
    setup_toml: str
    wall_time: str
    stamp_source: str
    stamp_halfwidth_s: float
    slept_s: float = 0.0
    seed: int | None = None
    truth: str = ""


@dataclass(frozen=True, slots=True)
class Tapped:
    """The display went down by `steps` of its resolution."""

    kind: ClassVar[str] = "tapped"
    stamp_s: float
    steps: int


@dataclass(frozen=True, slots=True)
class Typed:
    """The display showed `reading_C` at the stamp; the stamp may lie before events already kept."""

    kind: ClassVar[str] = "typed"
    stamp_s: float
    reading_C: float


@dataclass(frozen=True, slots=True)
class BeatSkipped:
    """A beat passed without a reading."""

    kind: ClassVar[str] = "beat skipped"
    stamp_s: float


@dataclass(frozen=True, slots=True)
class Marked:
    """Something happened that is no reading, such as `body in` or `fan on`."""

    kind: ClassVar[str] = "marked"
    stamp_s: float
    name: str


@dataclass(frozen=True, slots=True)
class Undone:
    """The event with the number `event` no longer counts."""

    kind: ClassVar[str] = "undone"
    stamp_s: float
    event: int


@dataclass(frozen=True, slots=True)
class RunEnded:
    """No more readings. `slept_s` above the run's own value means that the clock stood still meanwhile."""

    kind: ClassVar[str] = "run ended"
    stamp_s: float
    slept_s: float = 0.0


@dataclass(frozen=True, slots=True)
class MeasuredAfter:
    """What was measured after the run; None where it was not."""

    kind: ClassVar[str] = "measured after"
    temperature_C: float | None
    velocity_m_s: float | None


@dataclass(frozen=True, slots=True)
class Decided:
    """A person's word on the run: keep, look or discard, with the reason."""

    kind: ClassVar[str] = "decided"
    decision: str
    reason: str = ""


@dataclass(frozen=True, slots=True)
class Ruled:
    """A person keeps or drops one reading; `row` counts from 0."""

    kind: ClassVar[str] = "ruled"
    row: int
    keep: bool


@dataclass(frozen=True, slots=True)
class StartMoved:
    """A person moved the start of the fit [s from the first reading]; None gives it back to the program."""

    kind: ClassVar[str] = "start moved"
    start_s: float | None


@dataclass(frozen=True, slots=True)
class Foreign:
    """An event of a kind that this version does not know; it is kept as it came and counts for nothing."""

    kind: ClassVar[str] = "foreign"
    body: str


Event = (
    SessionOpened
    | SessionRenamed
    | BenchDescribed
    | RunOpened
    | Tapped
    | Typed
    | BeatSkipped
    | Marked
    | Undone
    | RunEnded
    | MeasuredAfter
    | Decided
    | Ruled
    | StartMoved
    | Foreign
)

_KINDS: dict[str, type] = {
    one.kind: one
    for one in (
        SessionOpened,
        SessionRenamed,
        BenchDescribed,
        RunOpened,
        Tapped,
        Typed,
        BeatSkipped,
        Marked,
        Undone,
        RunEnded,
        MeasuredAfter,
        Decided,
        Ruled,
        StartMoved,
    )
}

_TYPES: dict[str, tuple[type, ...]] = {
    "str": (str,),
    "bool": (bool,),
    "int": (int,),
    "float": (int, float),
    "None": (type(None),),
}


@dataclass(frozen=True, slots=True)
class Kept:
    """An event in the journal: its number there, and where it belongs (`run` is None for the session itself)."""

    number: int
    session: int
    run: int | None
    event: Event


def to_text(event: Event) -> str:
    """One line of JSON: the kind, then the values in their order."""
    if isinstance(event, Foreign):
        return event.body
    return json.dumps({"kind": event.kind} | asdict(event), ensure_ascii=False, allow_nan=False)


def from_text(body: str) -> Event:
    """The event of one line of JSON; a kind of a newer version becomes `Foreign`.

    Raises
    ------
    JournalFault : the line is not an event at all, or an event of a known kind with a value missing or wrong.
    """
    try:
        values: dict[str, Any] = json.loads(body, parse_constant=_no_such_number)
        kind = values.pop("kind")
    except (ValueError, KeyError, AttributeError, TypeError, RecursionError) as fault:
        raise JournalFault(f"A line of the journal is not an event: {body[:60]!r}.") from fault
    known = _KINDS.get(kind) if isinstance(kind, str) else None
    if known is None or not set(values) <= {one.name for one in fields(known)}:
        return Foreign(body)
    for one in fields(known):
        if one.name in values and not _fits(values[one.name], str(one.type)):
            raise JournalFault(f"An event '{kind}' of the journal has a wrong {one.name}: {body[:60]!r}.")
    try:
        event: Event = known(**values)
    except TypeError as fault:
        raise JournalFault(f"An event '{kind}' of the journal lacks a value: {body[:60]!r}.") from fault
    return event


def _fits(value: object, annotation: str) -> bool:
    """Whether a value can stand where this type is named."""
    types = [_TYPES[name] for name in annotation.split(" | ")]
    if isinstance(value, bool):
        return (bool,) in types
    return any(isinstance(value, one) for one in types)


def _no_such_number(word: str) -> float:
    raise ValueError(f"{word} is no number that an event can hold")
