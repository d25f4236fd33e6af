"""A request as the local hand-over takes it: read whole within its bounds, or refused by a status."""

from __future__ import annotations

import asyncio
import re
from dataclasses import dataclass
from urllib.parse import parse_qsl

LONGEST_HEAD = 8192  # bytes of request line and header together
LONGEST_BODY = 128  # bytes: a code and its name
_REQUEST_LINE = re.compile(rb"([A-Z]{1,16}) (/[!-~]{0,255}) HTTP/1\.[01]")
_FIELD = re.compile(rb"([!#$%&'*+.^_`|~0-9A-Za-z-]{1,64}):[ \t]*([ -~\x80-\xff\t]*?)[ \t]*")
_LENGTH = re.compile(rb"\d{1,9}")


class Refused(Exception):
    """A request that gets this status and nothing else."""

    def __init__(self, status: int) -> None:
        super().__init__(status)
        self.status = status


@dataclass(frozen=True, slots=True)
class Request:
    """What was asked: method, path without its query, the Host and Origin as sent, the form's fields."""

    method: str
    path: str
    host: str
    origin: str | None
    form: dict[str, str]


async def read_request(reader: asyncio.StreamReader) -> Request:
    """Read one request. Raises Refused for what is malformed or too large, EOFError where the other side left."""
    try:
        head = await reader.readuntil(b"\r\n\r\n")
    except asyncio.LimitOverrunError:
        raise Refused(431) from None
    except asyncio.IncompleteReadError as cut:
        if not cut.partial:
            raise EOFError from None
        raise Refused(400) from None
    lines = head[:-4].split(b"\r\n")
    asked = _REQUEST_LINE.fullmatch(lines[0])
    if asked is None:
        raise Refused(400)
    fields = _fields(lines[1:])
    method, target = asked[1].decode("ascii"), asked[2].decode("ascii")
    form = await _form(reader, fields) if method == "POST" else {}
    host, origin = fields.get("host", ""), fields.get("origin")
    return Request(method, target.partition("?")[0], host, origin, form)


def _fields(lines: list[bytes]) -> dict[str, str]:
    """The header by lower-case name; a name that stands twice where that could deceive is refused."""
    fields: dict[str, str] = {}
    for line in lines:
        found = _FIELD.fullmatch(line)
        if found is None:
            raise Refused(400)
        name = found[1].decode("ascii").lower()
        if name in fields and name in ("host", "content-length", "transfer-encoding", "origin"):
            raise Refused(400)
        fields[name] = found[2].decode("latin-1")
    return fields


async def _form(reader: asyncio.StreamReader, fields: dict[str, str]) -> dict[str, str]:
    if "transfer-encoding" in fields:
        raise Refused(411)
    length = fields.get("content-length", "")
    if not _LENGTH.fullmatch(length.encode("latin-1")):
        raise Refused(411)
    if int(length) > LONGEST_BODY:
        raise Refused(413)
    try:
        body = await reader.readexactly(int(length))
    except asyncio.IncompleteReadError:
        raise Refused(400) from None
    try:
        return dict(parse_qsl(body.decode("ascii"), max_num_fields=4))
    except ValueError:
        raise Refused(400) from None
