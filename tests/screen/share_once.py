"""Open the local hand-over on its screen, on this machine's own address, and fetch the session as a laptop would.

`python tests/screen/share_once.py` draws without a display and prints one JSON object; the data are the invented
session."""

from __future__ import annotations

import argparse
import io
import json
import os
import sys
import threading
import urllib.error
import urllib.request
import zipfile
from collections.abc import Callable
from pathlib import Path
from typing import Any

sys.path.insert(0, str(Path(__file__).parent))
import gallery


def fetched(address: str, code: str) -> tuple[int, bytes]:
    """Status and body of what a laptop gets for a code."""
    try:
        with urllib.request.urlopen(f"{address}/session.zip", b"code=" + code.encode(), timeout=10) as answer:
            return answer.status, answer.read()
    except urllib.error.HTTPError as refused:
        return refused.code, b""
    except urllib.error.URLError:
        return 0, b""


def meanwhile(pictures: gallery.Gallery, ask: Callable[[], Any]) -> Any:
    """Ask in a thread while the app's loop goes on."""
    answers: list[Any] = []
    thread = threading.Thread(target=lambda: answers.append(ask()))
    thread.start()
    pictures.until(lambda: bool(answers), 30.0)
    return answers[0]


def main() -> None:
    variant = "1280x800/day/1.0/en"
    os.chdir(gallery.ROOT)
    gallery._prepare(argparse.Namespace(variants=[variant], density="1"))
    from core.handover import share_server

    share_server.local_address = lambda: "127.0.0.1"
    pictures = gallery.Gallery(1.0)
    pictures.put_on(gallery.Variant.of(variant))
    pictures.model.open_demo()
    page = pictures.show("handover")
    pictures.until(lambda: page.ready, 60.0)
    before = page.address
    page.share()
    address, code = page.address, page.code.replace(" ", "")
    wrong = meanwhile(pictures, lambda: fetched(address, "abcdef"))[0]
    status, body = meanwhile(pictures, lambda: fetched(address, code))
    pictures.until(lambda: "so far: 1" in page.share_told, 10.0)
    with zipfile.ZipFile(io.BytesIO(body)) as archive:
        names = sorted(Path(name).name for name in archive.namelist())
        rows = len(archive.read(next(name for name in archive.namelist() if "runs.csv" in name)).splitlines()) - 1
    page.go("home")
    gone = meanwhile(pictures, lambda: fetched(address, code))[0]
    found = {"before": before, "wrong": wrong, "right": status, "files": names, "runs": rows, "after": gone}
    print(json.dumps(found | {"told": page.share_told, "shown": [page.address, page.code]}))
    sys.stdout.flush()
    os._exit(0)  # the window library's threads are not waited for


if __name__ == "__main__":
    main()
