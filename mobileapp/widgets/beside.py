"""A picture that stands beside the text where there is room, and leads it where there is not."""

from __future__ import annotations

from typing import Any

from kivy.properties import BooleanProperty

from mobileapp.navigation import Page
from mobileapp.theme import look


class PicturePage(Page):
    """A page with a picture: its .kv has the ids `picture`, `body` (picture and scroll side by side) and `column`
    (what is scrolled). On a small screen the picture moves to the head of the column."""

    roomy = BooleanProperty(True)

    def __init__(self, **options: Any) -> None:
        super().__init__(**options)
        look.bind(text_scale=self._see_room)

    def _see_room(self, *args: Any) -> None:
        super()._see_room(*args)
        self.roomy = min(self.width, self.height) > 28 * look.body
        picture, home = self.ids.picture, self.ids.body if self.roomy else self.ids.column
        if picture.parent is not home:
            picture.parent.remove_widget(picture)
            home.add_widget(picture, index=len(home.children))
