"""Where a session can be written so that a laptop finds it: the public download folder, cards, sticks.

On Android 11 and later an app may write its own files below Download without a permission; a card offers the app's
own folder, which is removed with the app. Sticks are mounted by the system where a desktop runs the app."""

from __future__ import annotations

import os
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from mobileapp.words import _

FOLDER = "Cooltally"
ANDROID_DOWNLOADS = Path("/storage/emulated/0/Download")
MOUNTS = ("/media", "/run/media", "/mnt", "/Volumes")


@dataclass(frozen=True, slots=True)
class Place:
    """A folder to write to, with its name for the person."""

    name: str
    path: Path


def find_places(on_android: bool, home: Path | None = None) -> tuple[Place, ...]:
    """The places that this device offers now, the one that a laptop sees most easily first."""
    if on_android:
        cards = (Place(_("Card {number}").format(number=i), path) for i, path in enumerate(_card_folders(), 1))
        return (Place(_("Downloads"), ANDROID_DOWNLOADS / FOLDER), *cards)
    home = home or Path.home()
    downloads = home / "Downloads"
    first = Place(_("Downloads"), downloads / FOLDER) if downloads.is_dir() else Place(_("Home"), home / FOLDER)
    return (first, *(Place(path.name, path / FOLDER) for path in _mounted()))


def _mounted() -> list[Path]:
    """Folders of sticks and cards that can be written now."""
    found = []
    for top in map(Path, MOUNTS):
        for depth in ("*", f"{os.environ.get('USER', '*')}/*"):
            try:
                found += [path for path in sorted(top.glob(depth)) if path.is_mount() and os.access(path, os.W_OK)]
            except OSError:
                continue
    return list(dict.fromkeys(found))


def _card_folders() -> list[Path]:
    """The app's own folders on removable cards (Context.getExternalFilesDirs, its first is the device itself)."""
    try:
        folders = _activity().getExternalFilesDirs(None)
    except Exception:  # a device without the call offers no card; the rest of the list stands
        return []
    return [Path(folder.getAbsolutePath()) for folder in folders[1:] if folder is not None]


def save_to_downloads(name: str, data: bytes) -> str:
    """Keep one file below Download by the system's own store of media, for devices where a plain path is refused.
    Returns the place in words; raises OSError where the store refuses too."""
    from jnius import autoclass

    columns = autoclass("android.provider.MediaStore$MediaColumns")
    downloads = autoclass("android.provider.MediaStore$Downloads")
    integer = autoclass("java.lang.Integer")
    resolver = _activity().getContentResolver()
    values = autoclass("android.content.ContentValues")()
    values.put(columns.DISPLAY_NAME, name)
    values.put(columns.MIME_TYPE, "application/zip")
    values.put(columns.RELATIVE_PATH, f"Download/{FOLDER}")
    values.put(columns.IS_PENDING, integer(1))  # nobody sees the file before it is whole
    uri = resolver.insert(downloads.EXTERNAL_CONTENT_URI, values)
    if uri is None:
        raise OSError(f"the store of downloads takes no '{name}'")
    try:
        handle = resolver.openFileDescriptor(uri, "w")
        with os.fdopen(handle.detachFd(), "wb") as file:
            file.write(data)
            file.flush()
            os.fsync(file.fileno())
        values.clear()
        values.put(columns.IS_PENDING, integer(0))
        resolver.update(uri, values, None, None)
    except BaseException:
        resolver.delete(uri, None, None)
        raise
    return f"Download/{FOLDER}/{name}"


def _activity() -> Any:
    from jnius import autoclass

    return autoclass("org.kivy.android.PythonActivity").mActivity
