"""A session brought to the place that the person chose; to Android's downloads by the first way that is open."""

from __future__ import annotations

from pathlib import Path

from core.errors import BenchError
from core.handover.archive import zipped
from core.handover.session import ExportSession
from core.handover.sync import Synced, sync_session
from mobileapp.device import places
from mobileapp.device.android_downloads import save_to_downloads


def write_session(session: ExportSession, place: Path, android: bool) -> Synced | str:
    """What was done in the folder `place`; or, of a zip file, where it lies by its final name.

    Below Android's public downloads three ways are tried in turn: one zip file through the system's store of media,
    which needs no permission; the folder by its path; a zip file in the app's own folder. Raises BenchError where
    none is open, or where the session cannot be exported."""
    if not (android and place.is_relative_to(places.ANDROID_DOWNLOADS)):
        return sync_session(session, place)
    name, data = zipped(session)
    try:
        return save_to_downloads(name, data)
    except Exception as fault:  # Java's own among them
        refusal = fault
    try:
        return sync_session(session, place)
    except BenchError:
        kept = _kept_by_the_app(name, data)
    if kept is None:
        raise BenchError(f"The download folder cannot be written: {refusal}.") from refusal
    return str(kept)


def _kept_by_the_app(name: str, data: bytes) -> Path | None:
    """The file in the app's own folder on the device; None, and nothing left there, where it cannot be written."""
    folder = places.own_folder()
    if folder is None:
        return None
    kept, growing = folder / name, folder / f"{name}.part"
    try:
        folder.mkdir(parents=True, exist_ok=True)
        growing.write_bytes(data)
        growing.replace(kept)
    except OSError:
        growing.unlink(missing_ok=True)
        return None
    return kept
