"""What this person likes on this tablet: kept as one small file, replaced whole or not at all."""

from __future__ import annotations

import json
from dataclasses import asdict, dataclass, fields, replace
from pathlib import Path

FILE = "preferences.json"


@dataclass(frozen=True, slots=True)
class Preferences:
    """Theme, text, language and what answers to a tap. `hand` is the hand that taps."""

    palette: str = "day"
    text_scale: float = 1.0
    language: str = "en"
    click: bool = True
    vibration: bool = True
    flash: bool = True
    hand: str = "right"


def read(folder: Path) -> Preferences:
    """The preferences in `folder`; a missing or unreadable file, or a single odd value, gives the default."""
    try:
        kept = json.loads((folder / FILE).read_text(encoding="utf-8"))
    except (OSError, ValueError):
        return Preferences()
    default = Preferences()
    if not isinstance(kept, dict):
        return default
    sound = {
        part.name: kept[part.name]
        for part in fields(Preferences)
        if part.name in kept and isinstance(kept[part.name], type(getattr(default, part.name)))
    }
    return replace(default, **sound)


def write(folder: Path, preferences: Preferences) -> None:
    """Replace the file in one step."""
    folder.mkdir(parents=True, exist_ok=True)
    fresh = folder / (FILE + ".new")
    fresh.write_text(json.dumps(asdict(preferences), indent=1), encoding="utf-8")
    fresh.replace(folder / FILE)
