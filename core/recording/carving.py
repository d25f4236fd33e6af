"""Events read out of the bytes of a journal, without a sound database around them.

An event's record is found by its own form and proven by its checksum, so that it does not matter what else in the
file is broken: the header, the tree of pages or the write-ahead log. The form is that of a table's leaf cell
(sqlite.org/fileformat2.html#record_format): payload length, row number, a header of serial types, the values."""

from __future__ import annotations

import re
import struct
import sys
from collections import defaultdict
from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass, replace
from pathlib import Path

from core.errors import JournalFault
from core.recording.events import from_text
from core.recording.journal import PAGE_SIZE, SEED, Line, link

WAL_HEADER, FRAME_HEADER = 32, 24
LONGEST_HEAD = 24
INTEGER_SIZES = {0: 0, 1: 1, 2: 2, 3: 3, 4: 4, 5: 6, 6: 8, 8: 0, 9: 0}
BODY_BEGINS = re.compile(rb'\{"kind"')


@dataclass(frozen=True, slots=True)
class Carved:
    """What was read. `unproven` of the lines follow a gap, so their checksum could not be tried; `lost` are known
    to have been there."""

    lines: tuple[Line, ...]
    unproven: int
    lost: int


def carve(path: Path) -> Carved:
    """Every event that can be read in a journal file and in the log beside it.

    Raises
    ------
    OSError : the disk does not give the bytes.
    """
    log = path.with_name(path.name + "-wal")
    return prove(found(path.read_bytes(), log.read_bytes() if log.exists() else b""))


def found(main: bytes, log: bytes) -> Iterator[Line]:
    """All records that have the form of an event, with repetitions, in no order."""
    pages = _Pages(main, log)
    seen: set[bytes] = set()
    for data in (main, log):
        for begin in BODY_BEGINS.finditer(data):
            at = begin.start()
            around = data[max(0, at - LONGEST_HEAD) : at + 120]
            if around in seen:
                continue
            line = _line(data, at, pages)
            if line is not None:
                seen.add(around)
                yield line


def prove(lines: Iterable[Line]) -> Carved:
    """The events whose checksums fit one to the other, and those after a gap that can be read.

    Of two readings of one event the one is taken that fits its neighbours. One whose number is damaged goes to the
    gap that it fits into."""
    by_number: dict[int, list[Line]] = defaultdict(list)
    for line in dict.fromkeys(lines):
        by_number[line.number].append(line)
    numbers = sorted(by_number)
    saved: list[Line] = []
    gaps: dict[int, set[str]] = {}
    befores, previous, unproven, lost = {SEED}, 0, 0, 0
    for place, number in enumerate(numbers):
        choices = by_number[number]
        after = by_number[numbers[place + 1]] if place + 1 < len(numbers) else []
        proven = [one for one in choices if any(_link(before, one) == one.chain for before in befores)]
        gap = number - previous - 1
        pick: Line | None
        if proven:
            gap = 0
            pick = max(proven, key=lambda one: any(_link(one.chain, later) == later.chain for later in after))
        else:
            home = _in_a_gap(choices, gaps) if gap else None
            if home is not None:
                saved.append(home)
                del gaps[home.number]
                lost -= 1
                unproven -= any(_link(home.chain, one) == one.chain for one in by_number[home.number + 1])
                continue
            held = [one for one in choices if _fits_between(one, befores, after)]
            gap = 0 if held else gap
            unchecked = choices if number - previous > 1 else []
            pick = next((one for one in held + unchecked if _is_event(one)), None)
            unproven += pick is not None and not held
        if gap == 1:
            gaps[number - 1] = befores
        lost += gap + (pick is None)
        ends = {one.chain for one in choices}
        befores = ends if proven else ends | {_link(before, one) for before in befores for one in choices}
        if pick is not None:
            saved.append(pick)
        previous = number
    return Carved(tuple(sorted(saved, key=lambda one: one.number)), unproven, lost)


def _in_a_gap(choices: Iterable[Line], gaps: Mapping[int, set[str]]) -> Line | None:
    """An event under the number that its checksum proves, if that number is missing."""
    for one in choices:
        for number, befores in gaps.items():
            there = replace(one, number=number)
            if any(_link(before, there) == there.chain for before in befores):
                return there
    return None


def newest_version(main: bytes, log: bytes, application_id: int) -> int:
    """The highest format number that the file's header has, on the disk or in the log; 0 where there is none."""
    heads = [main[:100]] + [page[:100] for number, page in _frames(log) if number == 1]
    ours = [head for head in heads if len(head) == 100 and int.from_bytes(head[68:72], "big") == application_id]
    return max((int.from_bytes(head[60:64], "big") for head in ours), default=0)


def commits_beyond(log: bytes, index: bytes) -> int:
    """How many whole commits of the log's own run of salts lie behind the last frame that SQLite accepted.

    `index` is what SQLite keeps beside the log: the number of accepted frames is its fifth word
    (sqlite.org/walformat.html). A power cut leaves one such commit at most, the one it fell into."""
    if len(index) < 20:
        return 0
    accepted = int.from_bytes(index[16:20], sys.byteorder)
    size, salts = FRAME_HEADER + PAGE_SIZE, log[16:24]
    behind = range(WAL_HEADER + accepted * size, len(log) - size + 1, size)
    return sum(log[at + 8 : at + 16] == salts and log[at + 4 : at + 8] != b"\0\0\0\0" for at in behind)


def _fits_between(line: Line, befores: set[str], after: Iterable[Line]) -> bool:
    """Whether the next event proves this one, whose own checksum is damaged."""
    return any(_link(_link(before, line), later) == later.chain for before in befores for later in after)


def _link(before: str, line: Line) -> str:
    return link(before, line.number, line.session, line.run, line.body)


def _is_event(line: Line) -> bool:
    try:
        from_text(line.body)
    except JournalFault:
        return False
    return True


class _Pages:
    """The pages of a database, the newest in the log first; for records that overflow one page."""

    def __init__(self, main: bytes, log: bytes) -> None:
        self._main = main
        self._newest = dict(_frames(log))

    def __getitem__(self, number: int) -> bytes:
        return self._newest.get(number) or self._main[(number - 1) * PAGE_SIZE : number * PAGE_SIZE]


def _frames(log: bytes) -> Iterator[tuple[int, bytes]]:
    size = FRAME_HEADER + PAGE_SIZE
    for at in range(WAL_HEADER, len(log) - size + 1, size):
        yield int.from_bytes(log[at : at + 4], "big"), log[at + FRAME_HEADER : at + size]


def _line(data: bytes, at: int, pages: _Pages) -> Line | None:
    """The event whose body begins at `at`, if its record is whole."""
    for head in range(at - 6, max(at - LONGEST_HEAD, 1), -1):
        if data[head + 1] != 0:
            continue
        line = _record(data, head, at, pages)
        if line is not None:
            return line
    return None


def _record(data: bytes, head: int, at: int, pages: _Pages) -> Line | None:
    types, begin = _varints(data, head, 6)
    if len(types) < 6 or head + types[0] != begin or types[1] != 0:
        return None
    session_type, run_type, body_type, chain_type = types[2:]
    if session_type not in INTEGER_SIZES or run_type not in INTEGER_SIZES or min(body_type, chain_type) < 13:
        return None
    middle = begin + INTEGER_SIZES[session_type]
    if middle + INTEGER_SIZES[run_type] != at or not body_type % 2 or not chain_type % 2:
        return None
    body_size, chain_size = (body_type - 13) // 2, (chain_type - 13) // 2
    rest = _payload(data, head, at - head + body_size + chain_size, pages)[at - head :]
    if len(rest) != body_size + chain_size:
        return None
    number = _varint_before(data, head)
    session = _integer(data[begin:middle], session_type)
    run = None if run_type == 0 else _integer(data[middle:at], run_type)
    try:
        return Line(number, session, run, rest[:body_size].decode(), rest[body_size:].decode("ascii"))
    except UnicodeDecodeError:
        return None


def _payload(data: bytes, head: int, size: int, pages: _Pages) -> bytes:
    """The whole record, gathered over the pages on which it goes on."""
    largest = PAGE_SIZE - 35
    if size <= largest:
        return data[head : head + size]
    smallest = (PAGE_SIZE - 12) * 32 // 255 - 23
    here = smallest + (size - smallest) % (PAGE_SIZE - 4)
    here = here if here <= largest else smallest
    parts, left = [data[head : head + here]], size - here
    following = data[head + here : head + here + 4]
    while left > 0 and len(following) == 4 and following != b"\0\0\0\0":
        page = pages[struct.unpack(">I", following)[0]]
        parts.append(page[4 : 4 + left])
        left -= len(parts[-1])
        following = page[:4] if len(page) == PAGE_SIZE else b""
    return b"".join(parts)


def _integer(raw: bytes, serial_type: int) -> int:
    return serial_type - 8 if serial_type in (8, 9) else int.from_bytes(raw, "big", signed=True)


def _varints(data: bytes, at: int, count: int) -> tuple[list[int], int]:
    """So many of SQLite's variable-length integers, of at most four bytes each, and where they end."""
    values: list[int] = []
    for _ in range(count):
        value = 0
        for _byte in range(4):
            if at >= len(data):
                return [], at
            value = value << 7 | data[at] & 0x7F
            at += 1
            if data[at - 1] < 0x80:
                break
        values.append(value)
    return values, at


def _varint_before(data: bytes, end: int) -> int:
    """The variable-length integer that ends before `end`."""
    at = end - 1
    while at > 0 and end - at < 9 and data[at - 1] >= 0x80:
        at -= 1
    value = 0
    for byte in data[at:end]:
        value = value << 7 | byte & 0x7F
    return value
