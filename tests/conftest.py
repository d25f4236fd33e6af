"""For every test: Kivy leaves the home folder alone, and the tests of one screen file share one worker."""

from __future__ import annotations

import os
import tempfile

import pytest

_HOME = tempfile.mkdtemp(prefix="cooltally-kivy-")
os.environ |= {
    "KIVY_HOME": _HOME,
    "KIVY_NO_ARGS": "1",
    "KIVY_NO_CONFIG": "1",
    "KIVY_NO_FILELOG": "1",
    "KIVY_NO_CONSOLELOG": "1",
    "KIVY_WINDOW": "sdl2",  # without it a missing display would end the whole run without a word
    "SDL_AUDIODRIVER": "dummy",
}


def pytest_collection_modifyitems(items: list[pytest.Item]) -> None:
    """A window, and what was tapped in it, is made once a file and not once a worker."""
    for item in items:
        if item.get_closest_marker("screen") is not None:
            item.add_marker(pytest.mark.xdist_group(item.path.stem))
