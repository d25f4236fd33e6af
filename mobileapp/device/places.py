"""Where a session can be written so that a laptop finds it: the public download folder, cards, sticks.

On Android 11 and later an app may write its own files below Download without a permission; a card offers the app's
own folder, which is removed with the app. Sticks are mounted by the system where a desktop runs the app."""

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
        folders = activity().getExternalFilesDirs(None)
    except Exception:  # a device without the call offers no card; the rest of the list stands
        return []
    return [Path(folder.getAbsolutePath()) for folder in folders[1:] if folder is not None]
