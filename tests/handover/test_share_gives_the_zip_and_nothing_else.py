"""The local hand-over, spoken to over real sockets on the loopback: the zip for the code, else nothing."""

import io
import os
import random
import re
import socket
import subprocess
import sys
import textwrap
import threading
import time
import zipfile
from concurrent.futures import ThreadPoolExecutor
from pathlib import Path

import pytest

from core.errors import HandoverFault
from core.handover.archive import zipped
from core.handover.session_files import FILES, session_files
from core.handover.share_page import PageTexts
from core.handover.share_server import Bounds, ShareServer, is_local
from tests.handover.sessions import session_of

HOST = "127.0.0.1"
OPEN_HANDED = Bounds(requests_per_s=1e9, requests_at_once=1e9)
ROOT = Path(__file__).resolve().parents[2]


@pytest.fixture
def archive():
    return zipped(session_of(2))


@pytest.fixture
def offer(archive):
    """Opens servers that are closed after the test."""
    opened = []

    def offered(bounds=OPEN_HANDED, data=None):
        opened.append(ShareServer.open(archive[0], data or archive[1], HOST, bounds=bounds))
        return opened[-1]

    yield offered
    for server in opened:
        server.close()


def port_of(server):
    return int(server.status().address.rpartition(":")[2])


def send(server, raw, wait_s=10.0, pause_s=0.0):
    """The whole answer to these bytes, empty where the connection was cut."""
    with socket.create_connection((HOST, port_of(server)), timeout=wait_s) as line:
        try:
            for i in range(0, len(raw), 1) if pause_s else [None]:
                line.sendall(raw if i is None else raw[i : i + 1])
                time.sleep(pause_s)
            heard = b""
            while part := line.recv(65536):
                heard += part
        except (ConnectionError, TimeoutError):
            return b""
    return heard


def request(server, method="GET", path="/", body=b"", host=None, **fields):
    """One well-formed request and its answer: status, header, body."""
    lines = [f"{method} {path} HTTP/1.1", f"Host: {host or f'{HOST}:{port_of(server)}'}"]
    lines += [f"{name.replace('_', '-')}: {value}" for name, value in fields.items()]
    if method == "POST":
        lines.append(f"Content-Length: {len(body)}")
    return parts(send(server, "\r\n".join(lines).encode() + b"\r\n\r\n" + body))


def parts(heard):
    """Status, header and body of an answer; status 0 where there was none."""
    if not heard:
        return 0, "", b""
    head, _, body = heard.partition(b"\r\n\r\n")
    return int(head.split()[1]), head.decode(), body


def fetch(server, code=None):
    body = f"code={server.status().code if code is None else code}".encode()
    return request(server, "POST", "/session.zip", body)


def wrong_code(server):
    return f"{(int(server.status().code) + 1) % 1_000_000:06d}"


def test_the_right_code_gives_the_whole_session(offer):
    """The page asks, the code fetches, the zip holds the exported folder to the byte."""
    server = offer()
    status, head, body = request(server)
    assert status == 200
    assert b'name="code"' in body
    assert "default-src 'none'" in head
    assert "unencrypted" in body.decode()
    status, head, body = fetch(server)
    assert status == 200
    assert "attachment" in head
    archive = zipfile.ZipFile(io.BytesIO(body))
    held = {Path(name).name: archive.read(name) for name in archive.namelist()}
    assert held == session_files(session_of(2))
    assert set(held) == set(FILES)
    assert server.status().fetched == 1


def test_the_zip_is_the_same_to_the_byte_each_time():
    assert zipped(session_of(2)) == zipped(session_of(2))


def test_an_ordinary_program_of_the_laptop_can_fetch_it_from_another_process(offer, archive):
    """A second process, with the standard library's own client."""
    server = offer()
    script = textwrap.dedent(
        """
        import sys, urllib.request
        address, code = sys.argv[1:]
        page = urllib.request.urlopen(address + "/").read()
        assert b"<form" in page
        sys.stdout.buffer.write(urllib.request.urlopen(address + "/session.zip", b"code=" + code.encode()).read())
        """
    )
    status = server.status()
    command = [sys.executable, "-c", script, status.address, status.code]
    heard = subprocess.run(command, capture_output=True, check=True, timeout=30)
    assert heard.stdout == archive[1]


def test_five_wrong_codes_lock_it_even_for_the_right_one(offer):
    """Tries are counted down on the page; the sixth finds it locked; a new code on the tablet opens it again."""
    server = offer()
    answers = [fetch(server, wrong_code(server)) for _ in range(5)]
    assert [status for status, *_ in answers] == [403, 403, 403, 403, 423]
    assert b"Tries left: 4" in answers[0][2]
    old = server.status().code
    assert fetch(server)[0] == 423
    assert server.status().locked
    server.renew()
    assert not server.status().locked
    assert fetch(server, old)[0] in (403, 200 if server.status().code == old else 403)
    assert fetch(server)[0] == 200


def test_the_lock_holds_against_many_at_once(offer):
    """Fifty guesses in parallel get five tries in all."""
    server = offer()
    wrong = wrong_code(server)
    with ThreadPoolExecutor(50) as many:
        statuses = [status for status, *_ in many.map(lambda _: fetch(server, wrong), range(50))]
    assert statuses.count(403) == 4
    assert set(statuses) <= {403, 423, 0}
    assert server.status().wrong == 5


@pytest.mark.parametrize(
    "path",
    [
        "/../../etc/passwd",
        "/session.zip/../../../etc/passwd",
        "/%2e%2e/%2e%2e/etc/passwd",
        "/..%5c..%5cetc",
        "//etc/passwd",
        "/session.zip%00",
        "/.git/config",
        "/favicon.ico",
        "/session.zip/",
    ],
)
def test_no_path_leads_anywhere_else(offer, path):
    """Every other path is the same short page, by GET and by POST, with the right code too."""
    server = offer()
    body = f"code={server.status().code}".encode()
    for answer in (request(server, path=path), request(server, "POST", path, body)):
        assert answer[0] in (400, 404)
        assert b"root:" not in answer[2]
        assert b"PK" not in answer[2]


def test_other_methods_and_strange_hosts_are_refused_without_costing_a_try(offer):
    """A page elsewhere that speaks through the laptop's browser, or under another name, reaches nothing."""
    server = offer()
    code = f"code={server.status().code}".encode()
    wrong = f"code={wrong_code(server)}".encode()
    assert request(server, "GET", "/session.zip")[0] == 405
    assert request(server, "PUT", "/")[0] == 404
    for host in ("evil.example", f"evil.example:{port_of(server)}", HOST):
        assert request(server, "POST", "/session.zip", code, host=host)[0] == 421
    for origin in ("http://evil.example", "null"):
        for body in (code, wrong):
            assert request(server, "POST", "/session.zip", body, Origin=origin)[0] == 421
    assert request(server, "POST", "/session.zip", code, Origin=server.status().address)[0] == 200
    assert server.status().wrong == 0


def test_oversized_requests_are_cut_short(offer):
    """A head beyond 8 kB, a body beyond 128 bytes, a length that lies or is missing: a status, not memory."""
    server = offer()
    here = f"Host: {HOST}:{port_of(server)}\r\n".encode()
    post = b"POST /session.zip HTTP/1.1\r\n" + here
    cases = {
        b"GET / HTTP/1.1\r\nX: " + b"a" * 20_000_000: {431, 0},
        b"GET /" + b"a" * 9000 + b" HTTP/1.1\r\n\r\n": {431, 0},
        b"GET /" + b"a" * 300 + b" HTTP/1.1\r\n\r\n": {400},
        post + b"Content-Length: 999999999\r\n\r\n" + b"x" * 5_000_000: {413, 0},
        post + b"Content-Length: 129\r\n\r\n" + b"x" * 129: {413},
        post + b"Content-Length: -1\r\n\r\n": {411},
        post + b"Content-Length: 4\r\nContent-Length: 4\r\n\r\ncode": {400},
        post + b"\r\n": {411},
        post + b"Transfer-Encoding: chunked\r\n\r\n4\r\ncode\r\n0\r\n\r\n": {411},
    }
    for raw, wanted in cases.items():
        assert parts(send(server, raw))[0] in wanted, raw[:80]
    assert fetch(server)[0] == 200


def test_a_slow_request_is_ended_and_shuts_nobody_out(offer):
    """One byte now and then gets a timeout; sixty idle connections leave room for an honest one."""
    server = offer(Bounds(request_s=0.6, connections=40, requests_per_s=1e9, requests_at_once=1e9))
    began = time.monotonic()
    assert parts(send(server, b"GET / HTTP/1.1\r\nHost: slow" * 3, pause_s=0.05))[0] in (0, 408)
    assert time.monotonic() - began < 5.0
    idle = [socket.create_connection((HOST, port_of(server))) for _ in range(60)]
    try:
        assert fetch(server)[0] == 200
    finally:
        for line in idle:
            line.close()


def test_two_hundred_parallel_laptops_are_served(offer, archive):
    """200 connections at once, each asking for the zip until it has it: all get it whole, within seconds."""
    server = offer()

    def until_fetched(_):
        for _try in range(30):
            status, _head, body = fetch(server)
            if status == 200 and body == archive[1]:
                return True
        return False

    with ThreadPoolExecutor(200) as laptops:
        assert all(laptops.map(until_fetched, range(200)))


def test_too_many_requests_in_a_row_are_told_to_wait(offer):
    """Beyond the allowance of the moment comes 429, and soon after the server answers again."""
    server = offer(Bounds(requests_per_s=50.0, requests_at_once=5.0))
    statuses = [request(server)[0] for _ in range(12)]
    assert statuses[:5] == [200] * 5
    assert 429 in statuses
    end = time.monotonic() + 5.0
    while (status := request(server)[0]) == 429 and time.monotonic() < end:
        pass
    assert status == 200


def test_its_life_ends_by_itself_and_by_closing(offer):
    """After its life, and after the screen is left, nothing listens any more."""
    short = offer(Bounds(life_s=0.5))
    port = port_of(short)
    end = time.monotonic() + 5.0
    while short.status().open and time.monotonic() < end:
        pass
    assert not short.status().open
    closed = offer()
    ports = [port, port_of(closed)]
    closed.close()
    closed.close()
    for one in ports:
        with pytest.raises(OSError, match="refused"):
            socket.create_connection((HOST, one), timeout=2.0)


def test_it_opens_on_a_private_address_only(archive):
    """A public address, a name, every address at once, or a huge file: refused in one sentence, nothing opened."""
    for host in ("8.8.8.8", "0.0.0.0", "example.org", "::1", ""):
        with pytest.raises(HandoverFault, match="local network"):
            ShareServer.open(*archive, host)
    with pytest.raises(HandoverFault, match="MB"):
        ShareServer.open("a.zip", bytes(64_000_001), HOST)
    for host, local in {"192.168.1.7": True, "10.2.3.4": True, "172.32.0.1": False, "169.254.9.9": True}.items():
        assert is_local(host) is local


def test_texts_of_the_tablet_cannot_break_the_page(archive):
    """A language's sentences are escaped, whatever signs they hold."""
    texts = PageTexts(title='<script>alert("x")</script>', plain="a & b")
    server = ShareServer.open(*archive, HOST, texts)
    try:
        body = request(server)[2]
    finally:
        server.close()
    assert b"<script" not in body
    assert b"a &amp; b" in body


def malformed(rng, server):
    """A request that is wrong in one of many ways; sometimes only nearly."""
    here = f"{HOST}:{port_of(server)}".encode()
    sound = b"POST /session.zip HTTP/1.1\r\nHost: " + here + b"\r\nContent-Length: 11\r\n\r\ncode=00000x"
    kind = rng.randrange(7)
    if kind == 0:
        return rng.randbytes(rng.randrange(1, 400)) + b"\r\n\r\n"
    if kind == 1:
        return sound[: rng.randrange(len(sound))]
    if kind == 2:
        at = rng.randrange(len(sound))
        return sound[:at] + rng.randbytes(rng.randrange(1, 9)) + sound[at + rng.randrange(9) :]
    if kind == 3:
        return sound.replace(b"\r\n", rng.choice([b"\n", b"\r", b"\r\n ", b"\0\r\n"]))
    if kind == 4:
        return rng.choice([b"GET", b"get", b"\xffGET", b"CONNECT", b"GET GET"]) + sound[4:]
    if kind == 5:
        return sound.replace(b"11", rng.choice([b"1e1", b"-1", b"\xb2", b"99999999999999", b"0x1", b""]))
    return sound.replace(b"HTTP/1.1", rng.choice([b"HTTP/9.9", b"HTTP/1.1 HTTP/1.1", b"", b"FTP/1.1"]))


def rss_MB():
    return int(re.search(r"VmRSS:\s+(\d+)", Path("/proc/self/status").read_text())[1]) / 1000


def throw_malformed(server, count, seed, threads=16):
    """Throw so many malformed requests; the statuses heard, and the memory before and after."""
    rng = random.Random(seed)
    heard: dict[int, int] = {}
    lock = threading.Lock()

    def throw(raw):
        with socket.create_connection((HOST, port_of(server)), timeout=10.0) as line:
            try:
                line.sendall(raw)
                line.shutdown(socket.SHUT_WR)
                status = parts(line.recv(65536))[0]
            except (ConnectionError, TimeoutError):
                status = 0
        with lock:
            heard[status] = heard.get(status, 0) + 1

    batch = count // 10
    with ThreadPoolExecutor(threads) as many:
        for i in range(10):
            list(many.map(throw, [malformed(rng, server) for _ in range(batch)]))
            if i == 0:
                before = rss_MB()  # warm: threads and buffers exist by now
    return heard, before, rss_MB()


def test_malformed_requests_change_nothing(offer):
    """Hundreds of broken requests: only statuses of refusal, memory flat, and the zip is still there."""
    server = offer()
    heard, before, after = throw_malformed(server, 600, seed=1)
    assert set(heard) <= {0, 400, 403, 404, 405, 408, 411, 413, 421, 423, 431}
    assert sum(heard.values()) == 600
    assert after - before < 20.0
    server.renew()
    assert fetch(server)[0] == 200


def test_no_handle_is_left_behind(offer):
    """After many connections as many file handles are open as before."""
    server = offer()
    fetch(server)
    before = len(os.listdir("/proc/self/fd"))  # noqa: PTH208  counted, not walked
    for _ in range(100):
        request(server)
    end = time.monotonic() + 5.0
    while len(os.listdir("/proc/self/fd")) > before and time.monotonic() < end:  # noqa: PTH208
        pass
    assert len(os.listdir("/proc/self/fd")) <= before  # noqa: PTH208
