"""What the model hands to the screens: frozen, and with no way back into the model."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from core.bench.setup import Setup
from core.judgement.answer import Answer

if TYPE_CHECKING:
    from core.judgement.guidance import Guidance


@dataclass(frozen=True, slots=True)
class RunView:
    """One run of a session. `verdict` is the answer's, `decision` the person's with its `reason`; both are empty
    where there is none yet."""

    run: str
    number: int
    kind: str  # measured | still-air | rehearsal | imported
    mode: str  # change | beat
    started: str
    open: bool
    readings: int
    velocity_m_s: float | None
    h_W_m2K: float | None
    h_U95_W_m2K: float | None
    verdict: str
    decision: str
    reason: str


@dataclass(frozen=True, slots=True)
class SessionView:
    """One session: a bench and its runs. `invented` marks the demo."""

    session: str
    title: str
    started: str
    setup: Setup | None
    invented: bool
    runs: tuple[RunView, ...]


@dataclass(frozen=True, slots=True)
class LiveFit:
    """The newest fit while a run goes on, or why there is none yet; and what going on to `end_C` would bring, for a
    run of which h is wanted."""

    answer: Answer | None
    waiting_for: str
    readings: int
    guidance: Guidance | None = None
    end_C: float | None = None


@dataclass(frozen=True, slots=True)
class PadView:
    """The running run as the pad shows it.

    `state` is `waiting` before the first reading, `running`, or `ended`. `shown_C` is the newest reading that
    counts, `next_C` the one that a single touch would add. `marks` are what was marked so far; `entered` the last
    digits typed for a beat, `question_C` the numbers that they could mean where that is in doubt."""

    run: str
    kind: str
    mode: str
    state: str
    shown_C: float | None
    next_C: float | None
    resolution_K: float
    readings: int
    elapsed_from_s: float | None
    can_undo: bool
    marks: tuple[str, ...]
    start_C: float | None
    floor_C: float
    beat_s: float
    digits: int
    entered: str
    question_C: tuple[float, ...]


@dataclass(frozen=True, slots=True)
class Felt:
    """What a touch or key came to: confirmed and journalled, or refused with its reason. A sentence may be empty
    where nothing is to be said, as for a second contact of the same palm."""

    confirmed: bool
    sentence: str = ""


@dataclass(frozen=True, slots=True)
class BeatView:
    """The newest beat: `index` counts from 0, below it runs the count-in; `at_s` is when it sounded."""

    index: int
    at_s: float
    period_s: float


@dataclass(frozen=True, slots=True)
class TruthView:
    """What the simulator knows of a rehearsal, and what it shows of the person's own tapping."""

    h_W_m2K: float
    lag_s: float | None
    jitter_s: float | None
    lag_u_s: float | None
    taps: int
