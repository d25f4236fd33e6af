"""What can hurt at this bench. The list never claims to replace local rules or a competent person."""

from __future__ import annotations

from dataclasses import dataclass

from mobileapp.words import later


@dataclass(frozen=True, slots=True)
class Caution:
    """One thing to be ticked: a word to find it by, and what to do."""

    name: str
    advice: str


CAUTIONS: tuple[Caution, ...] = (
    Caution(later("Hot metal"), later("At 90 °C the body burns skin in less than a second: tongs, heat gloves.")),
    Caution(later("Scalding water"), later("The vessel stands so that it cannot tip, away from the edge.")),
    Caution(later("Rotating fan"), later("The guard is on; fingers, hair, loose cloth and cords are away.")),
    Caution(later("Hot motor"), later("The fan's motor gets hot: no hand rests on it.")),
    Caution(later("Free air"), later("Inlet and outlet of the duct are free, and nothing can be sucked in.")),
)
NO_REPLACEMENT = later("This list does not replace your local rules or a competent person.")

