"""Places one large part in the middle and glove-sized buttons along the edges far from the tapping thumb."""

from __future__ import annotations

from typing import Any

from kivy.properties import ListProperty, OptionProperty
from kivy.uix.layout import Layout

from mobileapp.theme import look


class EdgeLayout(Layout):
    """The child with `role = "middle"` gets the room that is left; the others, in the order in which they were
    added, go to a column (wide) or a row on top (upright) on the side away from `hand`. Where they do not fit into
    one, the first two stand on that side and the next ones opposite; on a phone those that are `dispensable` step
    aside."""

    hand = OptionProperty("right", options=("right", "left"))
    absent = ListProperty()  # children that have no place at the moment

    def __init__(self, **options: Any) -> None:
        super().__init__(**options)
        place = self._trigger_layout
        self.bind(pos=place, size=place, children=place, hand=place, absent=place)
        look.bind(glove=self.restyle, grid=self.restyle)

    def restyle(self, *_args: Any) -> None:
        """The theme has changed. Bound as a method, which the theme holds weakly: a trigger would keep the widget."""
        self._trigger_layout()

    def _edge_children(self) -> tuple[Any, list[Any]]:
        ordered = list(reversed(self.children))
        middle = next((child for child in ordered if getattr(child, "role", "") == "middle"), None)
        return middle, [child for child in ordered if child is not middle and child not in self.absent]

    def do_layout(self, *_args: Any) -> None:
        middle, edges = self._edge_children()
        if middle is None:
            return
        wide = self.width > self.height
        gap = look.grid
        along = self.height if wide else self.width
        room = max(1, int(along // (look.glove + gap)))
        if len(edges) > 2 * room or (len(edges) > room and room < 3):
            edges = [edge for edge in edges if not getattr(edge, "dispensable", False)]
        near: list[Any] = []
        far = edges
        if len(edges) > room:
            far, near = edges[: min(2, room)], edges[2 : 2 + room]
        for edge in self.children:
            if edge not in far and edge not in near and edge is not middle:
                edge.pos = (-10 * look.glove, -10 * look.glove)
        far_first = self.hand == "right"  # left column, or top row in either case
        start, end = 0.0, 0.0
        if far:
            self._line(far, wide, at_start=far_first or not wide)
            taken = look.glove + (1.5 if wide else 1.0) * gap
            start, end = (taken, 0.0) if far_first or not wide else (0.0, taken)
        if near:
            self._line(near, wide, at_start=not (far_first or not wide))
            start, end = taken, taken
        if wide:
            middle.pos = (self.x + start, self.y)
            middle.size = (self.width - start - end, self.height)
        else:
            middle.pos = (self.x, self.y + end)
            middle.size = (self.width, self.height - start - end)

    def _line(self, parts: list[Any], wide: bool, at_start: bool) -> None:
        """Share one edge among the parts: from the top down, or from left to right."""
        gap = look.grid
        along = self.height if wide else self.width
        inset = gap / 2  # from the rim of the screen
        length = (along - 2 * inset - gap * (len(parts) - 1)) / len(parts)
        for i, part in enumerate(parts):
            part.size_hint = (None, None)
            if wide:
                part.size = (look.glove, length)
                x = self.x + gap / 2 if at_start else self.right - look.glove - gap / 2
                part.pos = (x, self.top - inset - (i + 1) * length - i * gap)
            else:
                part.size = (length, look.glove)
                y = self.top - look.glove if at_start else self.y
                part.pos = (self.x + inset + i * (length + gap), y)
