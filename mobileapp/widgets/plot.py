"""A plot drawn in the app: axes with units, round ticks, points, curves, bands; zoomed and moved by fingers."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Any

from kivy.clock import Clock
from kivy.core.text import Label as CoreLabel
from kivy.graphics import (
    Color,
    InstructionGroup,
    Line,
    Mesh,
    Point,
    Rectangle,
    ScissorPop,
    ScissorPush,
    SmoothLine,
)
from kivy.graphics.texture import Texture
from kivy.metrics import dp
from kivy.properties import BooleanProperty, NumericProperty, ObjectProperty, StringProperty
from kivy.uix.widget import Widget

from mobileapp.theme import look
from mobileapp.widgets.ticks import decade_text, decade_ticks, round_ticks, tick_text

XY = Sequence[tuple[float, float]]


@dataclass(frozen=True, slots=True)
class Curve:
    """A line through points; `colour` names one of the theme's."""

    points: XY
    colour: str = "accent"
    width_dp: float = 1.6


@dataclass(frozen=True, slots=True)
class Marks:
    """Points; `shape` is `dot`, `ring` or `cross`."""

    points: XY
    colour: str = "ink"
    shape: str = "dot"
    radius_dp: float = 4.0


@dataclass(frozen=True, slots=True)
class Band:
    """The area between two curves over the same x."""

    lower: XY
    upper: XY
    colour: str = "cool"
    opacity: float = 0.2


@dataclass(frozen=True, slots=True)
class Whisker:
    """A vertical or horizontal bar of uncertainty."""

    start: tuple[float, float]
    end: tuple[float, float]
    colour: str = "ink"


@dataclass(frozen=True, slots=True)
class Note:
    """A short text beside a point."""

    at: tuple[float, float]
    text: str
    colour: str = "ink"


@dataclass(frozen=True, slots=True)
class View:
    """The part of the plane that is shown, in axis units (logarithms on a logarithmic axis)."""

    x0: float
    x1: float
    y0: float
    y1: float


def _mark_texture(shape: str) -> Texture:
    """A white mark with soft edges, tinted where it is drawn."""
    size = 32
    texture = Texture.create(size=(size, size), colorfmt="rgba")
    pixels = bytearray()
    for row in range(size):
        for column in range(size):
            x, y = (column + 0.5) / size * 2 - 1, (row + 0.5) / size * 2 - 1
            r = math.hypot(x, y)
            if shape == "dot":
                cover = (0.92 - r) * size / 2
            elif shape == "ring":
                cover = (0.18 - abs(r - 0.74)) * size / 2
            else:
                cover = min((0.16 - min(abs(x - y), abs(x + y)) / math.sqrt(2)), 0.95 - r) * size / 2
            pixels += bytes((255, 255, 255, round(255 * min(max(cover, 0.0), 1.0))))
    texture.blit_buffer(bytes(pixels), colorfmt="rgba", bufferfmt="ubyte")
    return texture


class Plot(Widget):
    """Shows what `show` was given; `handle_x` is an upright line that a finger can drag, None for none."""

    __events__ = ("on_handle",)

    x_label = StringProperty("")
    y_label = StringProperty("")
    log_x = BooleanProperty(False)
    log_y = BooleanProperty(False)
    movable = BooleanProperty(True)
    y_ticks_wanted = NumericProperty(0)
    handle_x = ObjectProperty(None, allownone=True)
    view = ObjectProperty(None, allownone=True)

    def __init__(self, **options: Any) -> None:
        super().__init__(**options)
        self._parts: tuple[Any, ...] = ()
        self._home: View | None = None
        self._texts: dict[tuple[str, float], Texture] = {}
        self._mark_textures: dict[str, Texture] = {}
        self._drawing = InstructionGroup()
        self.canvas.add(self._drawing)
        self._fingers: list[Any] = []
        self._dragging_handle = False
        self.redraw = Clock.create_trigger(self._draw)
        self.bind(
            pos=self.redraw, size=self.redraw, view=self.redraw, x_label=self.redraw, y_label=self.redraw,
            handle_x=self.redraw,
        )  # fmt: skip
        look.bind(palette_name=self.restyle, text_scale=self.restyle)

    def restyle(self, *_args: Any) -> None:
        """The theme has changed. Bound as a method, which the theme holds weakly: a trigger would keep the widget."""
        self.redraw()

    # ------------------------------------------------------------------ what is shown

    def show(self, *parts: Any, view: tuple[float, float, float, float] | None = None) -> None:
        """Show bands, curves, whiskers, marks and notes in this order. Without `view` the plot holds them all; a
        view that fingers have chosen stays."""
        self._parts = parts
        moved = self.view is not None and self.view != self._home
        self._home = self._fitting() if view is None else View(*self._axis_pair(*view[:2], *view[2:]))
        if not moved:
            self.view = self._home
        self.redraw()

    def _axis_pair(self, x0: float, x1: float, y0: float, y1: float) -> tuple[float, float, float, float]:
        return self._ax(x0), self._ax(x1), self._ay(y0), self._ay(y1)

    def _ax(self, x: float) -> float:
        return math.log10(x) if self.log_x else x

    def _ay(self, y: float) -> float:
        return math.log10(y) if self.log_y else y

    def _points_of(self, part: Any) -> list[tuple[float, float]]:
        if isinstance(part, Band):
            return [*part.lower, *part.upper]
        if isinstance(part, Whisker):
            return [part.start, part.end]
        if isinstance(part, Note):
            return [part.at]
        return list(part.points)

    def _usable(self, x: float, y: float) -> bool:
        return math.isfinite(x) and math.isfinite(y) and (x > 0 or not self.log_x) and (y > 0 or not self.log_y)

    def _fitting(self) -> View | None:
        points = [p for part in self._parts for p in self._points_of(part) if self._usable(*p)]
        if not points:
            return None
        xs, ys = [self._ax(x) for x, _ in points], [self._ay(y) for _, y in points]

        def widened(low: float, high: float) -> tuple[float, float]:
            margin = 0.05 * (high - low) or max(abs(high) * 0.05, 0.05)
            return low - margin, high + margin

        return View(*widened(min(xs), max(xs)), *widened(min(ys), max(ys)))

    # ------------------------------------------------------------------ drawing

    def _text(self, text: str, size: float) -> Texture:
        key = (text, size)
        if key not in self._texts:
            label = CoreLabel(text=text, font_size=size, font_name="DejaVuSans")
            label.refresh()
            self._texts[key] = label.texture
        return self._texts[key]

    def _frame(self) -> tuple[float, float, float, float]:
        """Left, bottom, width and height of the area inside the axes."""
        left = self.x + max(look.small * 4.0, dp(40))
        bottom = self.y + look.small * 3.1
        return left, bottom, max(self.right - dp(14) - left, 1.0), max(self.top - look.small * 1.9 - bottom, 1.0)

    def _to_screen(self, view: View) -> tuple[Callable[[float], float], Callable[[float], float]]:
        left, bottom, width, height = self._frame()

        def sx(x: float) -> float:
            return left + (self._ax(x) - view.x0) / (view.x1 - view.x0) * width

        def sy(y: float) -> float:
            return bottom + (self._ay(y) - view.y0) / (view.y1 - view.y0) * height

        return sx, sy

    def place_of(self, x: float, y: float) -> tuple[float, float]:
        """Where a point of the axes stands on the screen."""
        sx, sy = self._to_screen(self.view)
        return sx(x), sy(y)

    def _draw(self, *_args: Any) -> None:
        drawing = self._drawing
        drawing.clear()
        view = self.view
        if view is None or self.width < 2 or self.height < 2 or view.x1 <= view.x0 or view.y1 <= view.y0:
            return
        left, bottom, width, height = self._frame()
        drawing.add(Color(*look.panel))
        drawing.add(Rectangle(pos=(left, bottom), size=(width, height)))
        self._draw_axes(drawing, view)
        wx, wy = self.to_window(left, bottom)
        drawing.add(ScissorPush(x=int(wx), y=int(wy), width=int(width) + 1, height=int(height) + 1))
        sx, sy = self._to_screen(view)
        for part in self._parts:
            self._draw_part(drawing, part, sx, sy)
        if self.handle_x is not None:
            self._draw_handle(drawing, sx(self.handle_x))
        drawing.add(ScissorPop())
        drawing.add(Color(*look.edge))
        drawing.add(Line(rectangle=(left, bottom, width, height), width=1))

    def _draw_axes(self, drawing: InstructionGroup, view: View) -> None:
        left, bottom, width, height = self._frame()
        sx, sy = self._to_screen(view)
        grid, ink = (*look.edge[:3], 0.28), look.ink
        for value, text in self._ticks(view.x0, view.x1, self.log_x, max(2, int(width / (look.small * 5.5)))):
            texture = self._text(text, look.small)
            drawing.add(Color(*grid))
            drawing.add(Rectangle(pos=(sx(value), bottom), size=(1, height)))
            drawing.add(Color(*ink))
            at = min(max(sx(value) - texture.width / 2, left - dp(10)), self.right - texture.width)
            drawing.add(Rectangle(texture=texture, size=texture.size, pos=(at, bottom - texture.height - dp(2))))
        wanted = int(self.y_ticks_wanted) or max(2, int(height / (look.small * 3.2)))
        for value, text in self._ticks(view.y0, view.y1, self.log_y, wanted):
            texture = self._text(text, look.small)
            drawing.add(Color(*grid))
            drawing.add(Rectangle(pos=(left, sy(value)), size=(width, 1)))
            drawing.add(Color(*ink))
            at = (left - texture.width - dp(5), sy(value) - texture.height / 2)
            drawing.add(Rectangle(texture=texture, size=texture.size, pos=at))
        drawing.add(Color(*look.soft))
        if self.x_label:
            texture = self._text(self.x_label, look.small)
            drawing.add(Rectangle(texture=texture, size=texture.size, pos=(left + width - texture.width, self.y)))
        if self.y_label:
            texture = self._text(self.y_label, look.small)
            drawing.add(Rectangle(texture=texture, size=texture.size, pos=(left, bottom + height + dp(3))))

    @staticmethod
    def _ticks(low: float, high: float, logarithmic: bool, wanted: int) -> list[tuple[float, str]]:
        if logarithmic:
            return [(tick, decade_text(tick)) for tick in decade_ticks(10.0**low, 10.0**high, wanted)]
        ticks, decimals = round_ticks(low, high, wanted)
        return [(tick, tick_text(tick, decimals)) for tick in ticks]

    def _draw_part(self, drawing: InstructionGroup, part: Any, sx: Any, sy: Any) -> None:
        colour = getattr(look, part.colour)
        if isinstance(part, Band):
            both = zip(part.lower, part.upper, strict=True)
            pairs = [(a, b) for a, b in both if self._usable(*a) and self._usable(*b)]
            vertices: list[float] = []
            for low, high in pairs:
                vertices += [sx(low[0]), sy(low[1]), 0, 0, sx(high[0]), sy(high[1]), 0, 0]
            drawing.add(Color(*colour[:3], part.opacity))
            drawing.add(Mesh(vertices=vertices, indices=list(range(len(vertices) // 4)), mode="triangle_strip"))
            return
        drawing.add(Color(*colour))
        if isinstance(part, Note):
            texture = self._text(part.text, look.small)
            at = (sx(part.at[0]) + dp(6), sy(part.at[1]) + dp(3))
            drawing.add(Rectangle(texture=texture, size=texture.size, pos=at))
            return
        if isinstance(part, Whisker):
            ends = [sx(part.start[0]), sy(part.start[1]), sx(part.end[0]), sy(part.end[1])]
            drawing.add(SmoothLine(points=ends, width=dp(1.1)))
            return
        flat = [c for x, y in part.points if self._usable(x, y) for c in (sx(x), sy(y))]
        if isinstance(part, Curve):
            if len(flat) >= 4:
                drawing.add(SmoothLine(points=flat, width=dp(part.width_dp)))
            return
        if part.shape not in self._mark_textures:
            self._mark_textures[part.shape] = _mark_texture(part.shape)
        texture = self._mark_textures[part.shape]
        drawing.add(Point(points=flat, pointsize=dp(part.radius_dp), texture=texture))

    def _draw_handle(self, drawing: InstructionGroup, x: float) -> None:
        _, bottom, _, height = self._frame()
        drawing.add(Color(*look.ember))
        drawing.add(Rectangle(pos=(x - dp(1.5), bottom), size=(dp(3), height)))
        grip = look.target * 0.5
        drawing.add(Rectangle(pos=(x - grip / 2, bottom + height - grip), size=(grip, grip)))
        drawing.add(Color(*look.panel))
        for shift in (-0.16, 0.0, 0.16):
            drawing.add(Rectangle(pos=(x + shift * grip - 1, bottom + height - grip * 0.75), size=(2, grip * 0.5)))

    # ------------------------------------------------------------------ fingers

    def _to_axis(self, px: float, py: float) -> tuple[float, float]:
        left, bottom, width, height = self._frame()
        view = self.view
        return (
            view.x0 + (px - left) / width * (view.x1 - view.x0),
            view.y0 + (py - bottom) / height * (view.y1 - view.y0),
        )

    def on_touch_down(self, touch: Any) -> bool:
        if self.view is None or not self.collide_point(*touch.pos):
            return False
        if getattr(touch, "button", None) in ("scrollup", "scrolldown"):
            if self.movable:
                self._zoom(1.25 if touch.button == "scrollup" else 0.8, touch.pos)
            return self.movable
        if self.handle_x is not None:
            sx, _ = self._to_screen(self.view)
            if abs(sx(self.handle_x) - touch.x) < look.target / 2:
                self._dragging_handle = True
                touch.grab(self)
                return True
        if not self.movable:
            return False
        if touch.is_double_tap:
            self.view = self._home
            return True
        touch.grab(self)
        self._fingers.append(touch)
        return True

    def on_touch_move(self, touch: Any) -> bool:
        if touch.grab_current is not self or self.view is None:
            return False
        if self._dragging_handle:
            x, _ = self._to_axis(*touch.pos)
            self.handle_x = 10.0**x if self.log_x else x
            return True
        others = [finger for finger in self._fingers if finger is not touch]
        if others:
            anchor = others[0].pos
            before, after = math.dist(touch.ppos, anchor), math.dist(touch.pos, anchor)
            if before > dp(4) and after > dp(4):
                self._zoom(before / after, anchor)
        else:
            (ax, ay), (bx, by) = self._to_axis(*touch.ppos), self._to_axis(*touch.pos)
            v = self.view
            self.view = View(v.x0 + ax - bx, v.x1 + ax - bx, v.y0 + ay - by, v.y1 + ay - by)
        return True

    def on_touch_up(self, touch: Any) -> bool:
        if touch.grab_current is not self:
            return False
        touch.ungrab(self)
        if self._dragging_handle:
            self._dragging_handle = False
            self.dispatch("on_handle", self.handle_x)
        if touch in self._fingers:
            self._fingers.remove(touch)
        return True

    def _zoom(self, factor: float, about: tuple[float, float]) -> None:
        x, y = self._to_axis(*about)
        v, home = self.view, self._home or self.view
        factor = min(max(factor, 0.5), 2.0)
        if (v.x1 - v.x0) * factor > 4 * (home.x1 - home.x0) or (v.x1 - v.x0) * factor < 1e-4 * (home.x1 - home.x0):
            return
        self.view = View(
            x + (v.x0 - x) * factor, x + (v.x1 - x) * factor, y + (v.y0 - y) * factor, y + (v.y1 - y) * factor
        )

    def on_handle(self, x: float) -> None:
        """The handle was dragged to x and let go."""
