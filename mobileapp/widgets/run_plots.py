"""The two pictures of one run: the cooling curve, and below it on the same time axis what it leaves over."""

from __future__ import annotations

from math import dist
from pathlib import Path
from typing import Any

from kivy.lang import Builder
from kivy.metrics import dp
from kivy.properties import BooleanProperty, NumericProperty, ObjectProperty
from kivy.uix.boxlayout import BoxLayout

from core.bench.readings import Readings
from core.bench.setup import Setup
from core.cooling.observation import bins_of
from core.judgement.answer import Answer
from mobileapp.theme import look
from mobileapp.widgets.plot import Curve, Marks, Plot, View
from mobileapp.words import _

XY = tuple[float, float]


class PickPlot(Plot):
    """A plot on which a touch picks the nearest of `pickable` points."""

    __events__ = ("on_pick",)

    def __init__(self, **options: Any) -> None:
        super().__init__(**options)
        self.pickable: dict[int, XY] = {}
        self._down: XY | None = None

    def on_touch_down(self, touch: Any) -> bool:
        taken = super().on_touch_down(touch)
        self._down = touch.pos if taken and not self._dragging_handle else None
        return taken

    def on_touch_up(self, touch: Any) -> bool:
        taken = super().on_touch_up(touch)
        if taken and self._down is not None and dist(self._down, touch.pos) < dp(8):
            self._pick(touch.pos)
        return taken

    def _pick(self, at: XY) -> None:
        if self.view is None or not self.pickable:
            return
        off = {row: dist(self.place_of(*point), at) for row, point in self.pickable.items()}
        row = min(off, key=off.__getitem__)
        if off[row] <= look.target / 2:
            self.dispatch("on_pick", row)

    def on_pick(self, row: int) -> None:
        """A point was touched."""


class RunPlots(BoxLayout):
    """Curve and residuals, moved and zoomed together along the time; `picked` is the row that was touched."""

    picked = NumericProperty(-1)
    movable = BooleanProperty(True)
    answer = ObjectProperty(None, allownone=True)
    __events__ = ("on_start_moved",)

    def on_kv_post(self, _base: Any) -> None:
        curve, rest = self.ids.curve, self.ids.rest
        curve.bind(view=lambda _plot, view: self._follow(rest, view))
        rest.bind(view=lambda _plot, view: self._follow(curve, view))
        curve.bind(on_handle=lambda _plot, x: self.dispatch("on_start_moved", x))
        for plot in (curve, rest):
            plot.bind(on_pick=lambda _plot, row: setattr(self, "picked", row))

    def on_start_moved(self, start_s: float) -> None:
        """The start of the fit was dragged to this time."""

    @staticmethod
    def _follow(other: Plot, view: View | None) -> None:
        """Give the other plot the same time axis."""
        mine = other.view
        if view is None or mine is None or (mine.x0, mine.x1) == (view.x0, view.x1):
            return
        other.view = View(view.x0, view.x1, mine.y0, mine.y1)

    def on_picked(self, *_args: Any) -> None:
        self._draw()

    def show(self, answer: Answer, readings: Readings) -> None:
        """Show this answer to these readings."""
        self.answer, self._readings = answer, readings
        self.ids.curve.handle_x = answer.window_s[0]
        self._draw()

    def places(self) -> dict[str, tuple[float, float]]:
        """Where on the window, from the top left, the start's grip and the middle reading stand; for the trace."""
        curve, window = self.ids.curve, self.get_parent_window()
        if window is None or curve.view is None:
            return {}
        middle = len(curve.pickable) // 2
        points = {"start": (curve.handle_x, curve.view.y1), "middle": curve.pickable[middle]}
        found = {name: curve.to_window(*curve.place_of(*point)) for name, point in points.items()}
        return {name: (round(x), round(window.height - y)) for name, (x, y) in found.items()}

    def _draw(self) -> None:
        if self.answer is None:
            return
        fit, readings = self.answer.fit, self._readings
        points = _at_the_change(readings, self.answer.setup)
        temperatures = [temperature for _time, temperature in points]
        doubted = {one.row for one in fit.left_out}
        curve = self.ids.curve
        in_changes = self.answer.setup.recording.mode == "change"
        curve.y_label = _("temperature at each change, °C") if in_changes else _("reading, °C")
        curve.pickable = dict(enumerate(points))
        span = max(readings.time_s[-1], 1.0)
        view_x = (-0.03 * span, 1.03 * span)
        low, high = min(temperatures), max(temperatures)
        margin = 0.06 * max(high - low, 1.0)
        curve.show(
            Curve(list(zip(fit.curve_time_s, fit.curve_C, strict=True))),
            Marks([p for row, p in enumerate(points) if fit.used[row] and row not in doubted], radius_dp=3.0),
            Marks([p for row, p in enumerate(points) if row in doubted], "again", "cross", 6.0),
            *self._picked_mark(curve.pickable),
            view=(*view_x, low - margin, high + margin),
        )
        self._draw_rest(view_x, doubted)

    def _picked_mark(self, points: dict[int, XY]) -> list[Marks]:
        return [Marks([points[self.picked]], "ember", "ring", 9.0)] if self.picked in points else []

    def _draw_rest(self, view_x: XY, doubted: set[int]) -> None:
        fit, rest = self.answer.fit, self.ids.rest
        in_time = self.answer.setup.recording.mode == "change"
        values = fit.residual_s if in_time else fit.residual_K
        rest.y_label = _("reading after the curve, s") if in_time else _("reading above the curve, K")
        time_s = self._readings.time_s
        kept = {row: (time_s[row], value) for row, value in enumerate(values) if value is not None}
        rest.pickable = kept
        sound = [p for row, p in kept.items() if row not in doubted]
        most = max((abs(value) for _time, value in sound), default=1.0) or 1.0
        rest.show(
            Curve([(view_x[0], 0.0), (view_x[1], 0.0)], "soft", 0.8),
            Marks(sound, radius_dp=3.0),
            Marks([p for row, p in kept.items() if row in doubted], "again", "cross", 6.0),
            *self._picked_mark(kept),
            view=(*view_x, -1.25 * most, 1.25 * most),
        )


def _at_the_change(readings: Readings, setup: Setup) -> list[XY]:
    """The readings as points of the curve: a falling display turns to a number at the upper edge of its bin."""
    points = list(zip(readings.time_s, readings.reading_C, strict=True))
    if setup.recording.mode != "change":
        return points
    edges = (float(one) for one in bins_of(readings, setup).upper_C[1:])
    return points[:1] + list(zip(readings.time_s[1:], edges, strict=True))


Builder.load_file(str(Path(__file__).with_suffix(".kv")))
