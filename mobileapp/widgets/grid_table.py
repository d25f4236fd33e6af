"""A table of texts: names and units above, one line a row, numbers set flush right on their decimal marks."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from kivy.lang import Builder
from kivy.properties import BooleanProperty, StringProperty
from kivy.uix.behaviors import ButtonBehavior
from kivy.uix.boxlayout import BoxLayout
from kivy.uix.label import Label

from mobileapp.figures import aligned


@dataclass(frozen=True, slots=True)
class Column:
    """One column: its heading, its share of the width, whether its texts are numbers, and its texts."""

    heading: str
    share: float
    texts: Sequence[str]
    numeric: bool = True


class TableCell(Label):
    """One text of the table."""

    heading = BooleanProperty(False)


class TableRow(ButtonBehavior, BoxLayout):
    """One line; `key` says what it stands for, `rim` that it can be pressed."""

    key = StringProperty("")
    lined = BooleanProperty(True)


class GridTable(BoxLayout):
    """Filled by `show`; a pressed line is told by its key."""

    __events__ = ("on_row",)

    def show(self, columns: Sequence[Column], keys: Sequence[str] = ()) -> None:
        """Put up these columns; with `keys` each line can be pressed."""
        self.clear_widgets()
        head = TableRow(lined=False, disabled=True)
        for column in columns:
            head.add_widget(_cell(column, column.heading, heading=True))
        self.add_widget(head)
        texts = [aligned(column.texts) if column.numeric else list(column.texts) for column in columns]
        for i, line in enumerate(zip(*texts, strict=True)):
            row = TableRow(key=keys[i] if keys else "", disabled=not keys)
            for column, text in zip(columns, line, strict=True):
                row.add_widget(_cell(column, text))
            row.bind(on_release=lambda pressed: self.dispatch("on_row", pressed.key))
            self.add_widget(row)

    def on_row(self, key: str) -> None:
        """A line was pressed."""


def _cell(column: Column, text: str, **options: Any) -> TableCell:
    side = "right" if column.numeric else "left"
    return TableCell(text=text, size_hint_x=column.share, halign=side, **options)


Builder.load_file(str(Path(__file__).with_suffix(".kv")))
