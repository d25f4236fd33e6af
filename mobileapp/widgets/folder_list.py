"""A folder's content to walk through with a finger: subfolders, and files of the wanted kinds."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import Any

from kivy.lang import Builder
from kivy.properties import ListProperty, StringProperty
from kivy.uix.boxlayout import BoxLayout
from kivy.utils import escape_markup

from mobileapp.widgets.basics import PlainPress, QuietPress
from mobileapp.words import _

MOST = 200  # entries that are listed


class FolderList(BoxLayout):
    """Shows `folder`; without `suffixes` no files are listed. A file that is pressed is told."""

    folder = StringProperty("")
    suffixes = ListProperty([])
    fault = StringProperty("")
    note = StringProperty("")
    __events__ = ("on_file",)

    def on_file(self, path: str) -> None:
        """A file was chosen."""

    def open(self, folder: Path) -> None:
        """Show a folder, or the nearest one above it that is there."""
        while not folder.is_dir() and folder != folder.parent:
            folder = folder.parent
        self.folder = str(folder)
        self._list()

    def up(self) -> None:
        self.open(Path(self.folder).parent)

    def _list(self) -> None:
        box = self.ids.entries
        box.clear_widgets()
        self.fault = self.note = ""
        try:
            folders, files = _content(Path(self.folder), self.suffixes)
        except OSError as error:
            self.fault = _("This folder cannot be read: {why}").format(why=error.strerror or str(error))
            return
        for path in folders[:MOST]:
            box.add_widget(self._entry(QuietPress(text=f"{escape_markup(path.name)} /"), path, self.open))
        for path in files[:MOST]:
            box.add_widget(self._entry(PlainPress(text=escape_markup(path.name)), path, self._choose))
        if not folders and not files:
            self.note = _("Nothing of use in here.") if self.suffixes else _("There is no folder in here.")
        elif max(len(folders), len(files)) > MOST:
            self.note = _("Only the first {count} are listed.").format(count=MOST)

    def _entry(self, button: Any, path: Path, act: Any) -> Any:
        button.halign = "left"
        button.bind(on_release=lambda _button: act(path))
        return button

    def _choose(self, path: Path) -> None:
        self.dispatch("on_file", str(path))


def _content(folder: Path, suffixes: Sequence[str]) -> tuple[list[Path], list[Path]]:
    shown = sorted((one for one in folder.iterdir() if not one.name.startswith(".")), key=lambda p: p.name.lower())
    return (
        [one for one in shown if one.is_dir()],
        [one for one in shown if one.is_file() and one.suffix.lower() in suffixes],
    )


Builder.load_file(str(Path(__file__).with_suffix(".kv")))
