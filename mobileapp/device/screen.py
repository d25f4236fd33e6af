"""The screen as a lamp: kept on during a run only."""

from __future__ import annotations


class WindowScreen:
    """Through the window itself, which needs no permission."""

    def keep_on(self, on: bool) -> None:
        from kivy.core.window import Window

        Window.allow_screensaver = not on
