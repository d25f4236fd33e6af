"""The hand-over over the local network: one zip, behind a short-lived code, for as long as its screen is open.

What it will do: show one page, take a code, and give the zip that it was opened with. It reads no path from the
request and no file from the disk, so there is nothing else to reach. It is bounded in every direction: the size of
a request, the time for it, the time for the answer, the connections at once, the requests a second, the wrong
codes (five, then it is locked until a new code is asked for), and its own life.

It speaks plain HTTP: who can listen on this network can read the file. The page and the screen say so. It binds to
one private address, answers only under that address (which keeps other web pages from speaking through the
laptop's browser), and drops whoever comes from outside the local network."""

from __future__ import annotations

import asyncio
import contextlib
import hmac
import secrets
import socket
import threading
import time
from dataclasses import dataclass, field
from ipaddress import ip_address, ip_network
from urllib.parse import quote

from core.bench.setup_check import shown
from core.errors import HandoverFault
from core.handover.http_request import LONGEST_HEAD, Refused, Request, read_request
from core.handover.share_page import PageTexts, page

LARGEST_ZIP = 64_000_000  # bytes
PORTS = (8080, 8090, 0)  # the first that is free; 0 lets the system choose
CODE_DIGITS = 6
ZIP_PATH = "/session.zip"
# RFC 1918 private use, RFC 3927 direct links, RFC 1122 this machine itself
LOCAL_NETWORKS = tuple(
    ip_network(one) for one in ("10.0.0.0/8", "172.16.0.0/12", "192.168.0.0/16", "169.254.0.0/16", "127.0.0.0/8")
)
_CHUNK = 32_768
_REASONS = {
    200: "OK", 400: "Bad Request", 403: "Forbidden", 404: "Not Found", 405: "Method Not Allowed",
    408: "Request Timeout", 411: "Length Required", 413: "Content Too Large", 421: "Misdirected Request",
    423: "Locked", 429: "Too Many Requests", 431: "Request Header Fields Too Large",
}  # fmt: skip


@dataclass(frozen=True, slots=True)
class Bounds:
    """What the server allows; every figure is common practice for one laptop fetching one file."""

    wrong_codes: int = 5
    life_s: float = 600.0
    request_s: float = 5.0
    answer_s: float = 60.0
    connections: int = 100
    requests_per_s: float = 20.0
    requests_at_once: float = 60.0


@dataclass(frozen=True, slots=True)
class ShareStatus:
    """How things stand: `fetched` counts the zips given whole; `left_s` is how long the code still holds."""

    address: str
    code: str
    left_s: float
    fetched: int
    wrong: int
    locked: bool
    open: bool


@dataclass(slots=True)
class _Bucket:
    """Requests still allowed; it fills at a steady rate."""

    per_s: float
    most: float
    level: float = field(default=0.0)
    at_s: float = field(default=0.0)

    def take(self, now_s: float) -> bool:
        if self.at_s == 0.0:
            self.level, self.at_s = self.most, now_s
        self.level = min(self.most, self.level + (now_s - self.at_s) * self.per_s)
        self.at_s = now_s
        if self.level < 1.0:
            return False
        self.level -= 1.0
        return True


class ShareServer:
    """Open from `open` to `close`, or until its life is over. All methods may be called from any thread."""

    def __init__(self, name: str, data: bytes, host: str, texts: PageTexts, bounds: Bounds) -> None:
        self._name, self._data, self._host, self._texts, self._bounds = name, data, host, texts, bounds
        self._lock = threading.Lock()
        self._code, self._wrong, self._fetched = _new_code(), 0, 0
        self._ends_s = time.monotonic() + bounds.life_s
        self._bucket = _Bucket(bounds.requests_per_s, bounds.requests_at_once)
        self._waiting: dict[asyncio.Task[None], asyncio.StreamWriter] = {}  # those whose request is not whole yet
        self._connections: set[asyncio.Task[None]] = set()
        self._socket = _bound(host)
        self._port = int(self._socket.getsockname()[1])
        self._loop = asyncio.new_event_loop()
        self._closing = asyncio.Event()
        self._thread = threading.Thread(target=self._run, name="hand-over", daemon=True)

    @classmethod
    def open(
        cls, name: str, data: bytes, host: str, texts: PageTexts | None = None, bounds: Bounds | None = None
    ) -> ShareServer:
        """Begin to offer a zip under one local address.

        Parameters
        ----------
        name : the zip's file name, as the laptop will save it
        data : the zip [bytes]
        host : the device's own address on the local network, from `local_address`
        texts : the sentences of the page; English if left out
        bounds : what is allowed; the defaults if left out

        Raises
        ------
        HandoverFault where the zip is too large, or the address is not a private one or cannot be used
        """
        if len(data) > LARGEST_ZIP:
            raise HandoverFault(
                f"The session is larger than {LARGEST_ZIP / 1e6:g} MB; write it to a folder instead."
            )
        if not is_local(host):
            raise HandoverFault(f"{shown(host)} is not an address of a local network; nothing was opened.")
        server = cls(name, data, host, texts or PageTexts(), bounds or Bounds())
        server._thread.start()
        return server

    # ------------------------------------------------------------------ what the screen asks

    def status(self) -> ShareStatus:
        """How things stand now."""
        with self._lock:
            left_s = max(0.0, self._ends_s - time.monotonic())
            return ShareStatus(
                address=f"http://{self._host}:{self._port}",
                code=self._code,
                left_s=left_s,
                fetched=self._fetched,
                wrong=self._wrong,
                locked=self._wrong >= self._bounds.wrong_codes,
                open=self._thread.is_alive(),
            )

    def renew(self) -> None:
        """A new code, with all its tries and its whole life; the old one is worth nothing from now on."""
        with self._lock:
            self._code, self._wrong = _new_code(), 0
            self._ends_s = time.monotonic() + self._bounds.life_s

    def close(self) -> None:
        """Stop at once; transfers that go on are cut."""
        if self._thread.is_alive():
            with contextlib.suppress(RuntimeError):  # the loop may have ended meanwhile
                self._loop.call_soon_threadsafe(self._closing.set)
            self._thread.join(timeout=5.0)

    # ------------------------------------------------------------------ the loop of the server's thread

    def _run(self) -> None:
        asyncio.set_event_loop(self._loop)
        try:
            self._loop.run_until_complete(self._serve())
        finally:
            self._socket.close()
            self._loop.close()

    async def _serve(self) -> None:
        server = await asyncio.start_server(self._meet, sock=self._socket, limit=LONGEST_HEAD, backlog=256)
        while not self._closing.is_set() and (left_s := self._ends_s - time.monotonic()) > 0.0:
            with contextlib.suppress(TimeoutError):
                await asyncio.wait_for(self._closing.wait(), min(left_s, 1.0))
        server.close()
        for task in tuple(self._connections):
            task.cancel()
        await asyncio.gather(*self._connections, return_exceptions=True)

    async def _meet(self, reader: asyncio.StreamReader, writer: asyncio.StreamWriter) -> None:
        """One connection: one request, one answer, and an end."""
        task = asyncio.current_task()
        if task is None or not is_local(str(writer.get_extra_info("peername", ("",))[0])):
            writer.transport.abort()
            return
        self._connections.add(task)
        self._waiting[task] = writer
        try:
            if len(self._connections) <= self._bounds.connections or self._make_room(task):
                await self._answer(reader, writer, task)
        except (OSError, EOFError, TimeoutError):
            pass  # the other side left, or was too slow for its answer
        finally:
            self._connections.discard(task)
            self._waiting.pop(task, None)
            writer.transport.abort()

    def _make_room(self, newcomer: asyncio.Task[None]) -> bool:
        """Close the connection that has kept us waiting longest, so that slow ones cannot shut out the others;
        False where all are being answered."""
        oldest = next(iter(self._waiting))
        if oldest is newcomer:
            return False
        self._waiting.pop(oldest).transport.abort()
        return True

    async def _answer(
        self, reader: asyncio.StreamReader, writer: asyncio.StreamWriter, task: asyncio.Task[None]
    ) -> None:
        fetched = False
        try:
            async with asyncio.timeout(self._bounds.request_s):
                request = await read_request(reader)
            head, body, fetched = self._reply(request)
        except TimeoutError:
            head, body = self._told(408)
        except Refused as refused:
            head, body = self._told(refused.status)
        self._waiting.pop(task, None)
        async with asyncio.timeout(self._bounds.answer_s):
            writer.write(head)
            for at in range(0, len(body), _CHUNK):
                writer.write(body[at : at + _CHUNK])
                await writer.drain()
            await writer.drain()
            await _let_go(reader, writer)
        if fetched:
            with self._lock:
                self._fetched += 1

    # ------------------------------------------------------------------ what is answered

    def _reply(self, request: Request) -> tuple[bytes, bytes, bool]:
        """Head and body of the answer, and whether it is the zip."""
        here = f"{self._host}:{self._port}"
        if not self._bucket.take(time.monotonic()):
            return *self._told(429), False
        if request.host != here or request.origin not in (None, f"http://{here}"):
            return *self._told(421), False
        if request.path == "/" and request.method in ("GET", "HEAD"):
            head, body = self._page(200)
            return head, body if request.method == "GET" else b"", False
        if request.path != ZIP_PATH:
            return *self._told(404), False
        if request.method != "POST":
            return *self._told(405), False
        status = self._judged(request.form.get("code", ""))
        if status != 200:
            return *self._told(status), False
        return self._head(200, "application/zip", len(self._data), self._name), self._data, True

    def _judged(self, code: str) -> int:
        """200 for the right code, 403 for a wrong one, 423 once there were too many, 403 after its life."""
        with self._lock:
            if self._wrong >= self._bounds.wrong_codes:
                return 423
            if hmac.compare_digest(code.strip().encode(), self._code.encode()):
                return 200
            self._wrong += 1
            return 423 if self._wrong >= self._bounds.wrong_codes else 403

    def _told(self, status: int) -> tuple[bytes, bytes]:
        """A page that says what is the matter."""
        texts = self._texts
        left = max(0, self._bounds.wrong_codes - self._wrong)
        sentence = {
            403: texts.wrong.format(left=left),
            423: texts.locked,
            429: texts.busy,
        }.get(status, texts.other)
        return self._page(status, sentence, form=status == 403)

    def _page(self, status: int, told: str = "", form: bool = True) -> tuple[bytes, bytes]:
        body = page(self._texts, told, form)
        return self._head(status, "text/html; charset=utf-8", len(body)), body

    def _head(self, status: int, kind: str, length: int, file_name: str = "") -> bytes:
        lines = [
            f"HTTP/1.1 {status} {_REASONS[status]}",
            f"Content-Type: {kind}",
            f"Content-Length: {length}",
            "Cache-Control: no-store",
            "Connection: close",
            "X-Content-Type-Options: nosniff",
            "Referrer-Policy: same-origin",
            "Content-Security-Policy: default-src 'none'; style-src 'unsafe-inline'; form-action 'self'; "
            "frame-ancestors 'none'",
        ]
        if file_name:
            lines.append(f"Content-Disposition: attachment; filename*=UTF-8''{quote(file_name)}")
        if status == 429:
            lines.append("Retry-After: 1")
        if status == 405:
            lines.append("Allow: POST")
        return ("\r\n".join(lines) + "\r\n\r\n").encode("ascii")


async def _let_go(reader: asyncio.StreamReader, writer: asyncio.StreamWriter) -> None:
    """End our side and hear the other out for a moment: a hard end would take the answer from its hands."""
    with contextlib.suppress(OSError, TimeoutError):
        writer.write_eof()
        async with asyncio.timeout(1.0):
            for _ in range(64):
                if not await reader.read(4096):
                    return


def _new_code() -> str:
    return f"{secrets.randbelow(10**CODE_DIGITS):0{CODE_DIGITS}d}"


def _bound(host: str) -> socket.socket:
    """A socket that listens on this address alone."""
    fault = ""
    for port in PORTS:
        listening = socket.socket(socket.AF_INET, socket.SOCK_STREAM)
        listening.setsockopt(socket.SOL_SOCKET, socket.SO_REUSEADDR, 1)
        try:
            listening.bind((host, port))
            listening.listen(256)  # whoever asks from now on is heard, if a moment later
        except OSError as error:
            listening.close()
            fault = error.strerror or str(error)
        else:
            return listening
    raise HandoverFault(f"The address {shown(host)} cannot be used ({shown(fault)}); connect the tablet again.")


def is_local(host: str) -> bool:
    """Whether an address belongs to a private network, a direct link or this machine itself."""
    try:
        address = ip_address(host)
    except ValueError:
        return False
    return any(address in network for network in LOCAL_NETWORKS)


def local_address() -> str:
    """This device's own address on its local network. Raises HandoverFault where it has none.

    The system is asked which of its addresses it would speak from; nothing is sent."""
    for far in ("192.168.0.1", "10.0.0.1", "172.16.0.1", "192.0.2.1"):
        with socket.socket(socket.AF_INET, socket.SOCK_DGRAM) as asking:
            try:
                asking.connect((far, 9))
            except OSError:
                continue
            host = str(asking.getsockname()[0])
            if is_local(host) and not ip_address(host).is_loopback:
                return host
    raise HandoverFault("The tablet is on no local network; join the laptop's wireless network, or its hotspot.")
