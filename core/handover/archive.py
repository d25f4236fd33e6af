"""An exported session under one name: a folder's name that every file system takes, and the folder as a zip."""

from __future__ import annotations

import io
import re
import unicodedata
import zipfile
from collections.abc import Mapping

from core.handover.session import ExportSession
from core.handover.session_files import session_files

LONGEST_NAME = 60
_KEPT = re.compile(r"[^\w .+-]+")
_DEVICES = re.compile(r"(con|prn|aux|nul|com\d|lpt\d)(\..*)?\Z", re.IGNORECASE)  # names that Windows reserves
_EPOCH = (1980, 1, 1, 0, 0, 0)  # the same session gives the same bytes


def folder_name(session: ExportSession) -> str:
    """A name for the folder of a session: its day, where it is known, and its title, in letters, digits, space,
    point, plus and hyphen, without a point or space at the end."""
    day = next((run.recorded_at[:10] for run in session.runs if run.recorded_at), "")
    title = _KEPT.sub(" ", unicodedata.normalize("NFC", session.name))
    title = " ".join(title.split()).strip(" .")
    if day and day in title:
        day = ""
    name = f"{day} {title}".strip()[:LONGEST_NAME].strip(" .") or "session"
    return f"session {name}" if _DEVICES.match(name) else name


def zipped(session: ExportSession) -> tuple[str, bytes]:
    """The session as one zip file that holds its folder: the file's name and its bytes.

    Raises HandoverFault for a session that cannot be exported."""
    name = folder_name(session)
    return f"{name}.zip", zip_of(name, session_files(session))


def zip_of(folder: str, files: Mapping[str, bytes]) -> bytes:
    """A zip of these files in a folder, the same bytes for the same files."""
    out = io.BytesIO()
    with zipfile.ZipFile(out, "w", zipfile.ZIP_DEFLATED) as archive:
        for name, data in files.items():
            info = zipfile.ZipInfo(f"{folder}/{name}", _EPOCH)
            info.external_attr = 0o644 << 16
            archive.writestr(info, data, zipfile.ZIP_DEFLATED)
    return out.getvalue()
