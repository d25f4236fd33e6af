"""What can hurt at this bench. The list never claims to replace local rules or a competent person.

References: ISO 13732-1:2006, thresholds of burns on hot surfaces (bare metal, contact of 10 min: 48 °C; of 1 s:
65 °C and above), read from memory; the countdown uses 43 °C, its threshold for contact of 8 h, to be on the safe
side."""

from __future__ import annotations

from dataclasses import dataclass
from math import log

from mobileapp.words import later

TOUCH_SAFE_C = 43.0


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


def touch_safe_in_s(now_C: float, air_C: float, time_constant_s: float) -> float | None:
    """Time [s] until the body is at 43 °C if the air goes on as it did; None where the air itself is hotter."""
    if air_C >= TOUCH_SAFE_C - 1.0 or time_constant_s <= 0:
        return None
    if now_C <= TOUCH_SAFE_C:
        return 0.0
    return time_constant_s * log((now_C - air_C) / (TOUCH_SAFE_C - air_C))
