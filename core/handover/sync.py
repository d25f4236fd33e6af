"""A session's folder on a place that a laptop reads too: brought up to date, and never against the laptop.

The place holds one folder a session and a list, `.cooltally-written`, of what was ever written there: for each
export the digest of its SHA256SUMS and a mark of its session. A folder is the tablet's own, and is replaced by a
newer export of the same session, where every file agrees with its sums and the sums stand in the list. Anything
else (a file edited, added or taken away on the laptop, a folder of another program or session) is left as it is,
and the export goes beside it under the next free number. What a file manager leaves merely by looking does not
count as a change.

The list is written and forced to the disk before a folder is put in place, so a cut at any moment leaves the old
folder or the new one, and the same call made again finishes the work."""

from __future__ import annotations

import os
import re
from collections.abc import Mapping
from dataclasses import dataclass
from hashlib import sha256
from pathlib import Path

from core.bench.setup_check import shown, shown_path
from core.errors import BadReadings, HandoverFault
from core.handover.archive import folder_name
from core.handover.export import recover, write_folder
from core.handover.session import ExportSession
from core.handover.session_files import FILES, SUMS, check_sums, session_files

LIST = ".cooltally-written"
MOST_BESIDE = 99
LARGEST = 64_000_000  # bytes of a file that is looked at; an export is far smaller
_LITTER = re.compile(r"\.DS_Store|\._.*|Thumbs\.db|desktop\.ini", re.IGNORECASE)
_LINE = re.compile(r"([0-9a-f]{64}) ([0-9a-f]{16})")


@dataclass(frozen=True, slots=True)
class Synced:
    """What came of it: the folder that now holds the session, whether it is `new`, `renewed` or `same`, and the
    folders that were left alone because they had been changed."""

    folder: Path
    outcome: str
    left_alone: tuple[Path, ...]

    def sentences(self) -> tuple[str, ...]:
        """What to tell the person."""
        told = {
            "new": f"The session was written to {shown_path(self.folder)}.",
            "renewed": f"{shown_path(self.folder)} was brought up to date.",
            "same": f"{shown_path(self.folder)} was up to date already.",
        }[self.outcome]
        changed = "{folder} was changed on the laptop and is left as it is."
        return (told, *(changed.format(folder=shown_path(folder)) for folder in self.left_alone))


def sync_session(session: ExportSession, place: Path) -> Synced:
    """Bring the folder of a session on `place` up to date.

    Parameters
    ----------
    session : the session with its answers [any]
    place : a folder that can be written, made if it is missing [any]

    Returns
    -------
    Synced

    Raises
    ------
    HandoverFault where the session cannot be exported or the place cannot be written; no folder there is then torn
    """
    files = session_files(session)
    name = folder_name(session)
    left_alone: list[Path] = []
    try:
        place.mkdir(exist_ok=True)  # its parent must be there: no folder is made where a stick was taken away
        written = _written(place)
        for count in range(1, MOST_BESIDE + 1):
            folder = place / (name if count == 1 else f"{name} ({count})")
            recover(folder)
            state = _state(folder, files, written, _mark(session))
            if state == "changed":
                left_alone.append(folder)
            if state in ("changed", "other"):
                continue
            _remember(place, files, written, _mark(session))
            if state == "same":
                return Synced(folder, "same", tuple(left_alone))
            write_folder(folder, files)
            return Synced(folder, "new" if state == "missing" else "renewed", tuple(left_alone))
    except OSError as error:
        reason = shown(error.strerror or str(error))
        raise HandoverFault(
            f"{shown_path(place)} cannot be written ({reason}); plug it in again or choose another folder."
        ) from None
    raise HandoverFault(
        f"{shown_path(place)} holds {MOST_BESIDE} other folders called '{shown(name)}'; clear some away."
    )


def _mark(session: ExportSession) -> str:
    """What tells a session from another of the same title: its first run, which never changes."""
    first = session.runs[0]
    return sha256("\0".join((session.name, first.run, first.recorded_at)).encode()).hexdigest()[:16]


def _state(folder: Path, files: Mapping[str, bytes], written: Mapping[str, str], mark: str) -> str:
    """Whether a folder is `missing`, the `same` as the export, an older one of our `own`, one of an `other`
    session of ours, or was `changed`."""
    if not folder.exists() and not folder.is_symlink():
        return "missing"
    if not folder.is_dir() or folder.is_symlink():
        return "changed"
    present = sorted(one.name for one in folder.iterdir() if not _LITTER.fullmatch(one.name))
    if present != sorted(FILES):
        return "changed"
    found = {}
    for name in present:
        path = folder / name
        if not path.is_file() or path.is_symlink() or path.stat().st_size > LARGEST:
            return "changed"
        found[name] = path.read_bytes()
    if found == files:
        return "same"
    if _digest(found) not in written:
        return "changed"
    try:
        check_sums(found, str(folder))
    except BadReadings:
        return "changed"
    return "own" if written[_digest(found)] == mark else "other"


def _digest(files: Mapping[str, bytes]) -> str:
    return sha256(files[SUMS]).hexdigest()


def _written(place: Path) -> dict[str, str]:
    """Digest to mark of what was written here; a line that was cut off counts for nothing."""
    try:
        text = (place / LIST).read_text(encoding="ascii", errors="replace")
    except FileNotFoundError:
        return {}
    found = (_LINE.fullmatch(line) for line in text.split("\n")[:-1])
    return {line[1]: line[2] for line in found if line}


def _remember(place: Path, files: Mapping[str, bytes], written: Mapping[str, str], mark: str) -> None:
    """Add an export to the list, on the disk before anything else is done. A leading line end closes a line that
    an earlier cut left open."""
    if _digest(files) in written:
        return
    with (place / LIST).open("ab") as file:
        file.write(f"\n{_digest(files)} {mark}\n".encode("ascii"))
        file.flush()
        os.fsync(file.fileno())
