"""A table of texts: names and units above, one line a row, numbers set flush right on their decimal marks.

Each column is as wide as its texts need, or all are equal; where they need more than the table has, the type gets
smaller."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from kivy.clock import Clock
from kivy.core.text import Label as CoreLabel
from kivy.lang import Builder
from kivy.properties import BooleanProperty, NumericProperty, StringProperty
from kivy.uix.behaviors import ButtonBehavior
from kivy.uix.boxlayout import BoxLayout
from kivy.uix.label import Label

from mobileapp.figures import aligned
from mobileapp.theme import look


@dataclass(frozen=True, slots=True)
class Column:
    """One column: its heading, its texts, and whether they are numbers."""

    heading: str
    texts: Sequence[str]
    numeric: bool = True


class TableCell(Label):
    """One text of the table; `type_scale` makes it smaller where the columns need more than there is."""

    heading = BooleanProperty(False)
    type_scale = NumericProperty(1.0)


class TableRow(ButtonBehavior, BoxLayout):
    """One line; `key` says what it stands for, `rim` that it can be pressed."""

    key = StringProperty("")
    lined = BooleanProperty(True)


class GridTable(BoxLayout):
    """Filled by `show`; a pressed line is told by its key. `even` gives all columns one width."""

    even = BooleanProperty(False)
    __events__ = ("on_row",)

    def __init__(self, **options: Any) -> None:
        super().__init__(**options)
        self._needs: list[float] = []
        self._fit_soon = Clock.create_trigger(self._fit, -1)
        self.bind(width=self._fit_soon)
        look.bind(text_scale=self.restyle)

    def restyle(self, *_args: Any) -> None:
        """The theme has changed. Bound as a method, which the theme holds weakly."""
        self._fit_soon()

    def show(self, columns: Sequence[Column], keys: Sequence[str] = ()) -> None:
        """Put up these columns; with `keys` each line can be pressed."""
        self.clear_widgets()
        head = TableRow(lined=False, disabled=True)
        for column in columns:
            head.add_widget(_cell(column, column.heading, heading=True))
        self.add_widget(head)
        texts = [aligned(column.texts) if column.numeric else list(column.texts) for column in columns]
        self._needs = [_need(column, shown) for column, shown in zip(columns, texts, strict=True)]
        self._fit_soon()
        for i, line in enumerate(zip(*texts, strict=True)):
            row = TableRow(key=keys[i] if keys else "", disabled=not keys)
            for column, text in zip(columns, line, strict=True):
                row.add_widget(_cell(column, text))
            row.bind(on_release=lambda pressed: self.dispatch("on_row", pressed.key))
            self.add_widget(row)

    def _fit(self, *_args: Any) -> None:
        """Give each column its share of the width, and all cells one size of type."""
        if not self._needs:
            return
        needs = [max(self._needs)] * len(self._needs) if self.even else self._needs
        gaps = look.grid * (len(needs) + 1)
        scale = min(1.0, (self.width - gaps) / (sum(needs) * look.body))
        for row in self.children:
            for cell, need in zip(reversed(row.children), needs, strict=True):
                cell.size_hint_x = need
                cell.type_scale = max(scale, 0.4)

    def on_row(self, key: str) -> None:
        """A line was pressed."""


def _cell(column: Column, text: str, **options: Any) -> TableCell:
    side = "right" if column.numeric else "left"
    return TableCell(text=text, halign=side, **options)


def _need(column: Column, shown: Sequence[str]) -> float:
    """The width of the column in sizes of the body's type; a heading may break between words."""
    ruler = CoreLabel(font_name=look.plain, font_size=100)
    words = [word for word in column.heading.split() if word]
    body = max((ruler.get_extents(text)[0] for text in shown), default=0)
    heading = max((ruler.get_extents(word)[0] for word in words), default=0) * look.small / look.body
    return max(body, heading, 60) / 100 + 0.1


Builder.load_file(str(Path(__file__).with_suffix(".kv")))
