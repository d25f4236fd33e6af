"""The public download folder of an Android device, through the system's own store of media (Android 10 and later).

No permission is needed. Each file is entered as pending, written, and only then shown to others; an entry that
cannot be finished is taken back. The store may give another name where one is taken: the name it gave is returned."""

from __future__ import annotations

import os
from pathlib import Path
from typing import Any

FOLDER = "Cooltally"
MEDIA_TYPES = {".zip": "application/zip", ".csv": "text/csv", ".json": "application/json", ".html": "text/html"}


def save_to_downloads(name: str, data: bytes, below: str = FOLDER) -> str:
    """Keep one file in Download/`below`. Returns its place in words, by the name that the store gave it.
    Raises OSError where the store takes no entry; whatever else goes wrong, no half-written entry stays."""
    from jnius import autoclass

    columns = autoclass("android.provider.MediaStore$MediaColumns")
    downloads = autoclass("android.provider.MediaStore$Downloads")
    integer = autoclass("java.lang.Integer")  # a plain number fits no put() of ContentValues
    resolver = activity().getContentResolver()
    folder = f"Download/{below}"
    values = autoclass("android.content.ContentValues")()
    values.put(columns.DISPLAY_NAME, name)
    values.put(columns.MIME_TYPE, MEDIA_TYPES.get(Path(name).suffix, "application/octet-stream"))
    values.put(columns.RELATIVE_PATH, folder)
    values.put(columns.IS_PENDING, integer(1))
    entry = resolver.insert(downloads.EXTERNAL_CONTENT_URI, values)
    if entry is None:
        raise OSError(f"the store of downloads takes no '{name}'")
    try:
        _fill(resolver, entry, data)
        values.clear()
        values.put(columns.IS_PENDING, integer(0))
        _publish(resolver, entry, values)
    except BaseException:
        resolver.delete(entry, None, None)
        raise
    return f"{folder}/{_given_name(resolver, entry, columns.DISPLAY_NAME) or name}"


def _fill(resolver: Any, entry: Any, data: bytes) -> None:
    """Write the bytes down to the disk through the entry's own file."""
    opened = resolver.openFileDescriptor(entry, "w")
    if opened is None:
        raise OSError("the store of downloads opens no file for its entry")
    with os.fdopen(opened.detachFd(), "wb") as file:
        file.write(data)
        file.flush()
        os.fsync(file.fileno())


def _publish(resolver: Any, entry: Any, values: Any) -> None:
    """Let others see the entry."""
    if resolver.update(entry, values, None, None) < 1:
        raise OSError("the store of downloads lost its entry while it was written")


def _given_name(resolver: Any, entry: Any, column: str) -> str:
    """The name by which the store lists the entry; empty where it does not tell."""
    try:
        cursor = resolver.query(entry, [column], None, None, None)
    except Exception:  # the file is safe by now; only its name stays the one asked for
        return ""
    if cursor is None:
        return ""
    try:
        return str(cursor.getString(0)) if cursor.moveToFirst() else ""
    finally:
        cursor.close()


def activity() -> Any:
    """The activity that runs the app."""
    from jnius import autoclass

    return autoclass("org.kivy.android.PythonActivity").mActivity
