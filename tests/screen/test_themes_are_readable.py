"""Every colour pair of every theme stands out as WCAG 2.2 asks, by computation."""

import pytest

from mobileapp.contrast import colour, contrast_ratio

theme = pytest.importorskip("mobileapp.theme")


def test_the_ratio_is_the_published_one():
    """Black on white is 21 to 1; #767676 on white is the well-known limit of 4.5 to 1."""
    white = colour("#FFFFFF")
    assert contrast_ratio(colour("#000000"), white) == pytest.approx(21.0)
    assert 4.5 <= contrast_ratio(colour("#767676"), white) < 4.6
    assert contrast_ratio(colour("#777777"), white) < 4.5


@pytest.mark.parametrize("name", theme.PALETTES)
@pytest.mark.parametrize("pair", theme.PAIRS, ids=lambda pair: f"{pair[0]}-on-{pair[1]}")
def test_text_and_marks_stand_out(name, pair):
    fore, ground, least, least_in_hall = pair
    palette = theme.PALETTES[name]
    needed = least_in_hall if name == "hall" else least
    assert contrast_ratio(getattr(palette, fore), getattr(palette, ground)) >= needed


@pytest.mark.parametrize("name", theme.PALETTES)
def test_the_number_on_the_pad_is_readable_at_every_level_of_heat(name):
    palette = theme.PALETTES[name]
    for step in range(21):
        ground = theme.heat_colour(step / 20, palette)
        assert contrast_ratio(palette.pad_ink, ground) >= 4.5
