"""What goes to the laptop: a session and its runs on plain values, as the export writes and reads them."""

from __future__ import annotations

from dataclasses import dataclass

from core.bench.readings import Readings, Ruling
from core.bench.setup import Setup
from core.judgement.answer import Answer

KINDS = ("measured", "still-air", "rehearsal", "imported")
DECISIONS = ("keep", "look", "discard")


@dataclass(frozen=True, slots=True)
class ExportRun:
    """One run with all that its fit needs, and the answer that the app showed.

    `run` names the run within its session and is unique there. `rulings` hold at most one word a row, in order of
    the rows. `start_s` is a person's word on the start of the fit window, None where the program chose it.
    `decision` (one of DECISIONS, or empty) is a person's word on the whole run. `recorded_at` is the wall time of
    the start in ISO 8601 with its offset, empty where unknown. `marks` are moments that are no readings, as text.
    `answer` is None where there is none, and `no_answer` then says why. `true_h_W_m2K` is known where the numbers
    are simulated."""

    run: str
    kind: str  # one of KINDS
    setup: Setup
    readings: Readings
    name: str = ""
    note: str = ""
    invented: bool = False
    recorded_at: str = ""
    stamp_source: str = ""
    marks: str = ""
    rulings: tuple[Ruling, ...] = ()
    start_s: float | None = None
    decision: str = ""
    decision_reason: str = ""
    answer: Answer | None = None
    no_answer: str = ""
    true_h_W_m2K: float | None = None

    def stands_beside(self, before: ExportRun) -> bool:
        """Whether this run is compared with one before it in its session: of its kind, and not discarded.
        Rehearsals are not, as the truth of each is drawn anew."""
        return before.kind == self.kind != "rehearsal" and before.decision != "discard"


@dataclass(frozen=True, slots=True)
class ExportSession:
    """The runs that belong together, in the order in which they were made."""

    name: str
    runs: tuple[ExportRun, ...]
