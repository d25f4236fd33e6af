"""Sounds, loaded once, each with a few players in turn so that quick taps do not cut each other off."""

from __future__ import annotations

from itertools import cycle
from pathlib import Path
from typing import Any

FOLDER = Path(__file__).parent.parent / "sounds"
PLAYERS = {"confirm": 3, "refuse": 2, "beat": 2, "count_in": 2, "done": 1}


class NoSounds:
    """A device without a loudspeaker."""

    available = False

    def play(self, name: str) -> None:
        return None


class RoundRobinSounds:
    """Kivy's players; a player that cannot be had makes the whole source silent, told in the settings."""

    available = True

    def __init__(self) -> None:
        from kivy.core.audio import SoundLoader

        self._players: dict[str, cycle[Any]] = {}
        for name, count in PLAYERS.items():
            players = [SoundLoader.load(str(FOLDER / f"{name}.wav")) for _ in range(count)]
            if any(player is None or player.length <= 0 for player in players):
                raise OSError("the sound device does not open")
            self._players[name] = cycle(players)

    def play(self, name: str) -> None:
        next(self._players[name]).play()


def find_sounds() -> NoSounds | RoundRobinSounds:
    try:
        return RoundRobinSounds()
    except Exception:  # the audio providers raise what they like
        return NoSounds()
