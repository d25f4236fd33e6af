"""Measured h beside what published correlations expect, on one scale."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

from kivy.clock import Clock
from kivy.core.text import Label as CoreLabel
from kivy.graphics import Color, InstructionGroup, Line, Rectangle
from kivy.metrics import dp
from kivy.properties import StringProperty
from kivy.uix.widget import Widget

from mobileapp.theme import look
from mobileapp.widgets.ticks import round_ticks, tick_text


@dataclass(frozen=True, slots=True)
class Span:
    """One line of the gauge: its name, the value and how far it reaches to either side."""

    name: str
    value: float
    low: float
    high: float
    firm: bool = True  # False: outside the source's range, drawn hollow


class Gauge(Widget):
    """The first span is the measured one; its value runs as a line through all others."""

    unit = StringProperty("")

    def __init__(self, **options: Any) -> None:
        super().__init__(size_hint_y=None, **options)
        self._spans: Sequence[Span] = ()
        self._drawing = InstructionGroup()
        self.canvas.add(self._drawing)
        self._again = Clock.create_trigger(self._draw)
        self.bind(pos=self._again, size=self._again, unit=self._again)
        look.bind(palette_name=self.restyle, text_scale=self.restyle)

    def restyle(self, *_args: Any) -> None:
        """The theme has changed. Bound as a method, which the theme holds weakly."""
        self._again()

    def show(self, spans: Sequence[Span]) -> None:
        """Draw these spans, the measured one first."""
        self._spans = spans
        self._again()

    def _row(self) -> float:
        return look.small * 2.9

    def _draw(self, *_args: Any) -> None:
        drawing = self._drawing
        drawing.clear()
        self.height = self._row() * len(self._spans) + look.small * 2.8
        if not self._spans or self.width < 2:
            return
        low, high = min(s.low for s in self._spans), max(s.high for s in self._spans)
        margin = 0.06 * (high - low) or 1.0
        low, high = low - margin, high + margin
        floor = self.y + look.small * 2.6

        def sx(value: float) -> float:
            return self.x + dp(4) + (value - low) / (high - low) * (self.width - dp(8))

        self._draw_scale(drawing, low, high, floor, sx)
        top = self.top
        for i, span in enumerate(self._spans):
            self._draw_span(drawing, span, top - (i + 1) * self._row(), sx, measured=i == 0)
        drawing.add(Color(*look.ink))
        x = sx(self._spans[0].value)
        drawing.add(Line(points=[x, floor, x, top - self._row()], width=1, dash_length=dp(4), dash_offset=dp(4)))

    def _draw_scale(self, drawing: InstructionGroup, low: float, high: float, floor: float, sx: Any) -> None:
        ticks, decimals = round_ticks(low, high, max(2, int(self.width / (look.small * 6))))
        for tick in ticks:
            drawing.add(Color(*look.edge[:3], 0.3))
            drawing.add(Rectangle(pos=(sx(tick), floor), size=(1, self.top - floor)))
            drawing.add(Color(*look.ink))
            text = _text(tick_text(tick, decimals))
            at = min(max(sx(tick) - text.width / 2, self.x), self.right - text.width)
            drawing.add(Rectangle(texture=text, size=text.size, pos=(at, floor - text.height - dp(1))))
        drawing.add(Color(*look.soft))
        unit = _text(self.unit)
        drawing.add(Rectangle(texture=unit, size=unit.size, pos=(self.right - unit.width, self.y - dp(2))))

    def _draw_span(self, drawing: InstructionGroup, span: Span, bottom: float, sx: Any, measured: bool) -> None:
        bar, left, right = look.small * 0.8, sx(span.low), sx(span.high)
        name = _text(span.name)
        at = min(max(self.x, left), max(self.x, self.right - name.width))
        drawing.add(Color(*(look.ink if measured or span.firm else look.soft)))
        drawing.add(Rectangle(texture=name, size=name.size, pos=(at, bottom + bar + dp(3))))
        if measured:
            drawing.add(Rectangle(pos=(left, bottom + bar / 2 - dp(1)), size=(right - left, dp(2))))
            for end in (left, right):
                drawing.add(Rectangle(pos=(end - dp(1), bottom), size=(dp(2), bar)))
            drawing.add(Rectangle(pos=(sx(span.value) - dp(4), bottom), size=(dp(8), bar)))
            return
        if span.firm:
            drawing.add(Color(*look.cool[:3], 0.35))
            drawing.add(Rectangle(pos=(left, bottom), size=(right - left, bar)))
        drawing.add(Color(*look.cool))
        drawing.add(Line(rectangle=(left, bottom, right - left, bar), width=1))
        drawing.add(Rectangle(pos=(sx(span.value) - dp(1.5), bottom), size=(dp(3), bar)))


def _text(text: str) -> Any:
    label = CoreLabel(text=text, font_size=look.small, font_name="DejaVuSans")
    label.refresh()
    return label.texture
