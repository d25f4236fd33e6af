"""Where a session can be written so that a laptop finds it: the public download folder, cards, sticks.

On Android the download folder is reached through the system's store first, and Android 11 and later also let an app
write its own files there by their path; the device and each card offer a folder of the app's own, which is removed with
the app. Sticks are mounted by the system where a desktop runs the app."""

from __future__ import annotations

import os
from dataclasses import dataclass
from pathlib import Path

from mobileapp.device.android_downloads import FOLDER, activity
from mobileapp.words import _

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
        cards = [path for path in _own_folders()[1:] if path]
        named = (Place(_("Card {number}").format(number=i), path) for i, path in enumerate(cards, 1))
        return (Place(_("Downloads"), ANDROID_DOWNLOADS / FOLDER), *named)
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


def own_folder() -> Path | None:
    """The app's own folder on the Android device itself, where a laptop may look; None where there is none now."""
    return next(iter(_own_folders()), None)


def _own_folders() -> list[Path | None]:
    """The app's own folders (Context.getExternalFilesDirs): the device's first, then one a card, None where absent."""
    try:
        folders = activity().getExternalFilesDirs(None)
    except Exception:  # a device without the call offers none; the rest of the list stands
        return []
    return [Path(folder.getAbsolutePath()) if folder is not None else None for folder in folders]
