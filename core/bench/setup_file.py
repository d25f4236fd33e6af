"""SETUP.toml: read strictly, one sentence for whatever is wrong in it, and written so that it reads back exactly.

UTF-8, with or without a byte order mark. A refusal names the file, the line, the section and the key."""

from __future__ import annotations

import re
import tomllib
from dataclasses import asdict
from pathlib import Path
from typing import Any

from core.bench.setup import SECTIONS, Setup
from core.bench.setup_check import (
    allowed,
    descriptions,
    nearest,
    problems,
    required,
    shown,
    shown_path,
    value_fault,
)
from core.errors import BadSetup

LARGEST_FILE = 200_000  # bytes; a set-up has some 2 000

_HEADER = re.compile(r"""^\s*\[+\s*["']?([\w-]+)["']?\s*\]+""")
_KEY = re.compile(r"""^\s*["']?([\w-]+)["']?\s*(?:\.\s*["']?([\w-]+)["']?\s*)?=""")
_PLACE = re.compile(r"^(.*?)\s*\(at (?:line (\d+), column (\d+)|end of document)\)$", re.DOTALL)


class _Lines:
    """Where each section and key of a TOML text stands, by a plain look at its lines."""

    def __init__(self, text: str, name: str) -> None:
        self.name = shown_path(name)
        self._found: dict[tuple[str, str], int] = {}
        section = ""
        for number, line in enumerate(text.splitlines(), 1):
            if header := _HEADER.match(line):
                section = header[1]
                self._found.setdefault((section, ""), number)
            elif key := _KEY.match(line):
                place = (section, key[1]) if section else (key[1], key[2] or "")
                self._found.setdefault(place, number)
                self._found.setdefault((place[0], ""), number)

    def refuse(self, section: str, key: str, fault: str) -> BadSetup:
        """The refusal of one key (or of a whole section, `key` empty)."""
        line = self._found.get((section, key), self._found.get((section, ""), 0))
        where = f"{self.name} line {line}" if line else self.name
        what = f"[{shown(section)}] {shown(key)}".rstrip()
        return BadSetup(f"{where}: {what} {fault}.")


def _parsed(text: str, name: str) -> dict[str, Any]:
    try:
        return tomllib.loads(text)
    except RecursionError:
        raise BadSetup(f"{shown_path(name)}: this is not a set-up; it nests lists or tables too deeply.") from None
    except ValueError as error:  # TOMLDecodeError, or a number of thousands of digits
        found = _PLACE.match(str(error))
        fault = shown(found[1] if found else str(error)).replace("\n", " ")
        place = f" line {found[2]} column {found[3]}" if found and found[2] else ""
        end = " at its end" if found and not found[2] else ""
        raise BadSetup(
            f"{shown_path(name)}{place}: this is not TOML{end} ({fault}); compare the example in DEVELOPERS.md."
        ) from None


def _section(section: str, table: Any, lines: _Lines) -> Any:
    """One section as its frozen value."""
    known = descriptions(section)
    if not isinstance(table, dict):
        raise lines.refuse(section, "", f"is a section of its own: write [{section}] once, and its keys below it")
    values: dict[str, Any] = {}
    for key, value in table.items():
        if key not in known:
            home = next((other for other in SECTIONS if key in descriptions(other)), None)
            hint = f"it belongs in [{home}]" if home else f"the nearest known one is '{nearest(key, list(known))}'"
            raise lines.refuse(section, key, f"is not a key of this section; {hint}")
        if fault := value_fault(known[key], value):
            raise lines.refuse(section, key, fault)
        kind = known[key].kind
        values[key] = float(value) if kind == "number" else value
        if kind == "numbers":
            values[key] = tuple(float(one) for one in value)
    for key in required(section):
        if key not in values:
            raise lines.refuse(section, key, f"is missing; it is {allowed(known[key])}")
    return SECTIONS[section](**values)


def setup_from_text(text: str, name: str) -> Setup:
    """The set-up in a TOML text; `name` is what a refusal calls the file.

    Raises BadSetup with one sentence for the first thing that is wrong."""
    text = text.removeprefix("\N{ZERO WIDTH NO-BREAK SPACE}")
    if len(text) > LARGEST_FILE:
        raise BadSetup(f"{shown_path(name)}: this is not a set-up; it is longer than {LARGEST_FILE} characters.")
    tables = _parsed(text, name)
    lines = _Lines(text, name)
    for section in tables:
        if section not in SECTIONS:
            home = next((one for one in SECTIONS if section in descriptions(one)), None)
            hint = (
                f"the key belongs below [{home}]"
                if home
                else f"the nearest known one is '{nearest(section, list(SECTIONS))}'"
            )
            raise lines.refuse(section, "", f"is not a section; {hint}")
    sections = {section: _section(section, tables.get(section, {}), lines) for section in SECTIONS}
    setup = Setup(**sections)
    for problem in problems(setup):
        raise lines.refuse(problem.section, problem.key, problem.fault)
    return setup


def read_setup(path: Path) -> Setup:
    """The set-up in a file. Raises BadSetup, in one sentence, for a file that cannot be read or used."""
    try:
        with path.open("rb") as file:
            data = file.read(4 * LARGEST_FILE + 1)
    except (OSError, ValueError) as error:
        reason = error.strerror if isinstance(error, OSError) and error.strerror else str(error)
        raise BadSetup(f"{shown_path(path)}: the set-up cannot be read ({shown(reason)}).") from None
    try:
        text = data.decode("utf-8")
    except UnicodeDecodeError as error:
        line = data.count(b"\n", 0, error.start) + 1
        raise BadSetup(f"{shown_path(path)} line {line}: this is not UTF-8; save the file as UTF-8.") from None
    return setup_from_text(text, str(path))


def _toml(value: object) -> str:
    if isinstance(value, str):
        escaped = value.replace("\\", "\\\\").replace('"', '\\"')
        return '"' + "".join(c if c.isprintable() else f"\\U{ord(c):08x}" for c in escaped) + '"'
    if isinstance(value, tuple):
        return "[" + ", ".join(_toml(one) for one in value) + "]"
    return repr(value)


def setup_to_text(setup: Setup) -> str:
    """The set-up as TOML, every value that it holds written out; `setup_from_text` gives back an equal one."""
    parts = []
    for section, table in setup_to_dict(setup).items():
        kept = (f"{key} = {_toml(value)}" for key, value in table.items() if value not in (None, ()))
        parts.append("\n".join((f"[{section}]", *kept)))
    return "\n\n".join(parts) + "\n"


def setup_to_dict(setup: Setup) -> dict[str, dict[str, Any]]:
    """The set-up section by section, defaults filled in; None where nothing was given and nothing is assumed."""
    return asdict(setup)
