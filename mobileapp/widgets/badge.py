"""The verdict in word, shape and colour, so that none of the three has to carry it alone.

Shapes of our own: `keep` is a body seated in its bore (a ring, full inside), `look` is a lens with a slit,
`again` is a diamond broken in two."""

from __future__ import annotations

import math
from pathlib import Path
from typing import Any

from kivy.clock import Clock
from kivy.graphics import Color, InstructionGroup, Mesh, SmoothEllipse, SmoothLine
from kivy.lang import Builder
from kivy.properties import OptionProperty
from kivy.uix.boxlayout import BoxLayout
from kivy.uix.widget import Widget

from mobileapp.theme import look
from mobileapp.words import _

VERDICTS = ("keep", "look", "again", "none")


def verdict_word(verdict: str) -> str:
    """The verdict as a word on the screen."""
    return {"keep": _("Keep"), "look": _("Look first"), "again": _("Run again")}.get(verdict, _("No answer yet"))


def _lens(x: float, y: float, size: float) -> list[float]:
    """Outline of two arcs that meet in points at left and right."""
    half, steps = size / 2, 18
    radius = 1.18 * half
    depth = math.sqrt(max(radius**2 - half**2, 0.0))
    upper, lower = [], []
    for i in range(steps + 1):
        dx = -half + size * i / steps
        dy = math.sqrt(max(radius**2 - dx**2, 0.0)) - depth
        upper += [x + half + dx, y + half + dy]
        lower += [x + half + dx, y + half - dy]
    points = upper
    for i in range(steps, -1, -1):
        points += lower[2 * i : 2 * i + 2]
    return points


def _filled(points: list[float], centre: tuple[float, float]) -> Mesh:
    vertices = [*centre, 0.0, 0.0]
    for i in range(0, len(points), 2):
        vertices += [points[i], points[i + 1], 0.0, 0.0]
    vertices += [points[0], points[1], 0.0, 0.0]
    return Mesh(vertices=vertices, indices=list(range(len(vertices) // 4)), mode="triangle_fan")


class VerdictShape(Widget):
    """The shape alone."""

    verdict = OptionProperty("none", options=VERDICTS)

    def __init__(self, **options: Any) -> None:
        super().__init__(**options)
        self._drawing = InstructionGroup()
        self.canvas.add(self._drawing)
        draw = Clock.create_trigger(self._draw, -1)
        self.bind(pos=draw, size=draw, verdict=draw)
        self._soon = draw
        look.bind(palette_name=self.restyle)
        draw()

    def restyle(self, *_args: Any) -> None:
        """The theme has changed. Bound as a method, which the theme holds weakly: a trigger would keep the widget."""
        self._soon()

    def _draw(self, *_args: Any) -> None:
        drawing = self._drawing
        drawing.clear()
        size = min(self.width, self.height)
        if size <= 0:
            return
        x, y = self.center_x - size / 2, self.center_y - size / 2
        colour = look.soft if self.verdict == "none" else getattr(look, self.verdict)
        drawing.add(Color(*colour))
        stroke = size * 0.07
        if self.verdict == "keep":
            drawing.add(SmoothLine(circle=(*self.center, size / 2 - stroke), width=stroke * 0.8))
            inner = size * 0.58
            corner = (self.center_x - inner / 2, self.center_y - inner / 2)
            drawing.add(SmoothEllipse(pos=corner, size=(inner, inner)))
        elif self.verdict == "look":
            outline = _lens(x, y, size)
            drawing.add(_filled(outline, self.center))
            drawing.add(SmoothLine(points=outline, width=1, close=True))
            drawing.add(Color(*look.panel))
            slit_w, slit_h = size * 0.14, size * 0.46
            drawing.add(
                SmoothEllipse(pos=(self.center_x - slit_w / 2, self.center_y - slit_h / 2), size=(slit_w, slit_h))
            )
        elif self.verdict == "again":
            gap, half = size * 0.08, size / 2
            for sign in (-1, 1):
                cx, cy = self.center_x + sign * gap, self.center_y
                corner = [cx, cy + half * 0.92, cx + sign * (half - gap), cy, cx, cy - half * 0.92]
                drawing.add(_filled(corner, (cx + sign * (half - gap) / 3, cy)))
                drawing.add(SmoothLine(points=corner, width=1, close=True))
        else:
            drawing.add(SmoothLine(circle=(*self.center, size / 2 - stroke), width=max(stroke * 0.3, 1.0)))


class VerdictBadge(BoxLayout):
    """Shape and word side by side."""

    verdict = OptionProperty("none", options=VERDICTS)

    def word(self, verdict: str) -> str:
        return verdict_word(verdict)

    def colour(self, verdict: str, *_bound: Any) -> Any:
        return look.soft if verdict == "none" else getattr(look, verdict)


Builder.load_file(str(Path(__file__).with_suffix(".kv")))
