"""The folder of an exported session: written whole or not at all, and read back.

The files are written into a new folder beside the target, forced to the disk, and put in the target's place by one
exchange of names where the system has it (Linux and Android: renameat2), else by two renames, which `recover`
completes if they were cut between the two."""

from __future__ import annotations

import ctypes
import os
import shutil
import tempfile
from collections.abc import Mapping
from pathlib import Path

from core.bench.setup_check import shown, shown_path
from core.errors import BadReadings, HandoverFault
from core.handover.csv_text import read_bytes
from core.handover.session import ExportSession
from core.handover.session_files import FILES, SUMS, check_sums, session_files, session_from_files

_AT_FDCWD = -100
_RENAME_EXCHANGE = 2


def export_session(session: ExportSession, folder: Path) -> None:
    """Write the session as `folder`. An older export there is replaced by the whole new one, or left.

    Raises HandoverFault where the folder holds anything that an export did not write, or where it cannot be
    written; what was there before then still stands."""
    files = session_files(session)
    try:
        recover(folder)
        if folder.exists() and _is_same(folder, files):
            return
        _refuse_foreign(folder)
    except OSError as error:
        raise _unfinished(folder, error) from None
    write_folder(folder, files)


def write_folder(folder: Path, files: Mapping[str, bytes]) -> None:
    """Put a folder with these files, and no others, in the place of `folder`, whole or not at all.

    Raises HandoverFault where that fails; what was there before then still stands."""
    try:
        folder.parent.mkdir(parents=True, exist_ok=True)
        new = Path(tempfile.mkdtemp(prefix=f".{folder.name}.new-", dir=folder.parent))
        try:
            for name, data in files.items():
                _write(new / name, data)
            new.chmod(0o755)
            _sync_folder(new)
            _put_in_place(new, folder)
        finally:
            shutil.rmtree(new, ignore_errors=True)
    except OSError as error:
        raise _unfinished(folder, error) from None


def _unfinished(folder: Path, error: OSError) -> HandoverFault:
    reason = shown(error.strerror or str(error))
    return HandoverFault(f"{shown_path(folder)} was not written ({reason}); what was there before still stands.")


def read_session(folder: Path) -> ExportSession:
    """The session in an exported folder, each run without its answer. Raises BadReadings in one sentence."""
    source = folder if folder.exists() else _old(folder)  # an export that was cut between its two renames
    files = {name: read_bytes(source / name) for name in FILES if (source / name).exists()}
    return session_from_files(files, str(folder))


def is_export(folder: Path) -> bool:
    """Whether the folder looks like an exported session."""
    return (folder / FILES[0]).is_file()


def recover(folder: Path) -> None:
    """Finish what a cut export left: the old folder back where the target is missing, half-written ones away."""
    old = _old(folder)
    if old.is_dir() and not folder.exists():
        old.rename(folder)
    for left in folder.parent.glob(f".{_globbed(folder.name)}.new-*"):
        shutil.rmtree(left, ignore_errors=True)
    shutil.rmtree(old, ignore_errors=True)


def _globbed(name: str) -> str:
    return "".join(f"[{c}]" if c in "*?[" else c for c in name)


def _old(folder: Path) -> Path:
    return folder.with_name(f".{folder.name}.old")


def _is_same(folder: Path, files: Mapping[str, bytes]) -> bool:
    if sorted(one.name for one in folder.iterdir()) != sorted(files):
        return False
    return all((folder / name).read_bytes() == data for name, data in files.items())


def _refuse_foreign(folder: Path) -> None:
    if not folder.exists():
        return
    if not folder.is_dir():
        raise HandoverFault(f"{shown_path(folder)} is a file, not a folder; choose another name.")
    present = sorted(one.name for one in folder.iterdir())
    foreign = [name for name in present if name not in FILES]
    if foreign:
        raise HandoverFault(
            f"{shown_path(folder)} holds '{shown(foreign[0])}', which no export wrote; choose another folder."
        )
    if present:
        try:
            check_sums({name: (folder / name).read_bytes() for name in present}, str(folder))
        except BadReadings as error:
            raise HandoverFault(f"{str(error).removesuffix('.')}, or export to another folder.") from None
        if SUMS not in present:
            raise HandoverFault(f"{shown_path(folder)} lacks its {SUMS}; choose another folder.")


def _write(path: Path, data: bytes) -> None:
    with path.open("xb") as file:
        file.write(data)
        file.flush()
        os.fsync(file.fileno())


def _sync_folder(folder: Path) -> None:
    """Force the names in a folder to the disk, where the system lets a folder be opened."""
    try:
        handle = os.open(folder, os.O_RDONLY)
    except OSError:
        return
    try:
        os.fsync(handle)
    except OSError:
        return
    finally:
        os.close(handle)


def _put_in_place(new: Path, folder: Path) -> None:
    if not folder.exists():
        new.rename(folder)
    elif not _exchange(new, folder):
        folder.rename(_old(folder))
        new.rename(folder)
        shutil.rmtree(_old(folder), ignore_errors=True)
    _sync_folder(folder.parent)


def _exchange(one: Path, other: Path) -> bool:
    """Swap two names in one step; False where the system or the file system cannot."""
    try:
        renameat2 = ctypes.CDLL(None, use_errno=True).renameat2
    except (OSError, AttributeError, TypeError):
        return False
    done: int = renameat2(_AT_FDCWD, os.fsencode(one), _AT_FDCWD, os.fsencode(other), _RENAME_EXCHANGE)
    return done == 0
