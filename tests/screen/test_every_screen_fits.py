"""Every screen, in both orientations, three sizes, all themes, up to 150 % text and both languages: no text cut, no
target too small for a finger or a glove."""

import json
import subprocess
import sys
from pathlib import Path

import pytest

HERE = Path(__file__).parent
sys.path.insert(0, str(HERE))
from gallery import SCREENS, TESTED  # noqa: E402  the folder of the tests is not a package


@pytest.fixture(scope="module")
def drawn(tmp_path_factory):
    """All pictures, drawn in one process without a display; the folder and the faults found."""
    out = tmp_path_factory.mktemp("pictures")
    told = subprocess.run(
        [sys.executable, str(HERE / "gallery.py"), str(out), *TESTED],
        capture_output=True,
        text=True,
        check=False,
        timeout=400,
    )
    assert told.returncode == 0, told.stderr[-2000:]
    return out, json.loads(told.stdout.splitlines()[-1])


@pytest.mark.screen
@pytest.mark.parametrize("variant", TESTED)
def test_no_text_is_cut_and_no_target_too_small(drawn, variant):
    _out, found = drawn
    assert set(found[variant]) == set(SCREENS)
    assert {screen: faults for screen, faults in found[variant].items() if faults} == {}


@pytest.mark.screen
def test_every_picture_shows_something(drawn):
    """No picture is of one colour, which would be a screen that was not drawn."""
    out, _found = drawn
    pictures = sorted(out.glob("*/*.png"))
    assert len(pictures) == len(SCREENS) * len(TESTED)
    assert all(path.stat().st_size > 4000 for path in pictures)
