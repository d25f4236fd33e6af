"""Long words, mostly paths of folders, broken so that they fit a narrow column. No window is needed."""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator

PIECE = re.compile(r"[^/\\]*[/\\]|[^/\\]+")  # up to and with the next separator of folders


def broken(text: str, room: float, width_of: Callable[[str], float]) -> str:
    """The text with line breaks inside words wider than `room`: after a separator of folders, else anywhere.

    `width_of` gives the width of a string in the unit of `room`. Nothing but line breaks is added.
    """
    return re.sub(r"\S+", lambda word: "\n".join(_lines(word.group(), room, width_of)), text)


def _lines(word: str, room: float, width_of: Callable[[str], float]) -> Iterator[str]:
    if width_of(word) <= room:
        yield word
        return
    line = ""
    for piece in PIECE.findall(word):
        if line and width_of(line + piece) > room:
            yield line
            line = ""
        for sign in piece if width_of(piece) > room else [piece]:
            if line and width_of(line + sign) > room:
                yield line
                line = ""
            line += sign
    yield line
