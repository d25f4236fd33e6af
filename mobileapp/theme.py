"""Colours, sizes and type of the whole app, in one place.

Three palettes: `day` on warm paper, `night` on slate, `hall` in black on white for bright halls. Sizes stand on a
grid of 8 dp; touch targets are given in millimetres and come from the density of the screen."""

from __future__ import annotations

from dataclasses import dataclass, fields
from pathlib import Path

from kivy.core.text import LabelBase
from kivy.event import EventDispatcher
from kivy.metrics import dp, sp
from kivy.properties import ColorProperty, NumericProperty, StringProperty

from mobileapp.contrast import Colour, colour, mixed

FONTS = Path(__file__).parent / "fonts"
TARGET_MM = 12.0  # smallest target for a bare finger
GLOVE_MM = 22.0  # smallest target for a gloved one
DP_PER_MM = 160.0 / 25.4
TEXT_SCALES = (1.0, 1.15, 1.3, 1.5)


@dataclass(frozen=True, slots=True)
class Palette:
    """The colours of one theme; `PAIRS` names which must stand out against which."""

    ground: Colour
    panel: Colour
    sunken: Colour
    edge: Colour
    ink: Colour
    soft: Colour
    accent: Colour
    accent_ink: Colour
    ember: Colour
    cool: Colour
    keep: Colour
    look: Colour
    again: Colour
    verdict_ink: Colour
    pad: Colour
    pad_hot: Colour
    pad_warm: Colour
    pad_cool: Colour
    pad_ink: Colour
    pad_refused: Colour
    pad_flash: Colour
    edge_dp: float


def _palette(edge_dp: float, **hexadecimal: str) -> Palette:
    return Palette(edge_dp=edge_dp, **{name: colour(value) for name, value in hexadecimal.items()})


PALETTES: dict[str, Palette] = {
    "day": _palette(
        1.0,
        ground="#F3EEE3",
        panel="#FFFCF6",
        sunken="#E7DFCF",
        edge="#857B66",
        ink="#16262E",
        soft="#47565C",
        accent="#0F5666",
        accent_ink="#FFFFFF",
        ember="#A8380F",
        cool="#0F5666",
        keep="#1B6437",
        look="#7A4E00",
        again="#9C1F1A",
        verdict_ink="#FFFFFF",
        pad="#FFFCF6",
        pad_hot="#F6B98F",
        pad_warm="#F1E2BC",
        pad_cool="#A9D6DC",
        pad_ink="#16262E",
        pad_refused="#C9BFAC",
        pad_flash="#16262E",
    ),
    "night": _palette(
        1.0,
        ground="#10191E",
        panel="#1A262D",
        sunken="#0A1013",
        edge="#71858F",
        ink="#F3EDE0",
        soft="#B9C4C7",
        accent="#6CCBD8",
        accent_ink="#062027",
        ember="#FF9C6E",
        cool="#6CCBD8",
        keep="#78D597",
        look="#F3C356",
        again="#FF9284",
        verdict_ink="#0C1519",
        pad="#1A262D",
        pad_hot="#7A3413",
        pad_warm="#4B3D23",
        pad_cool="#0F4753",
        pad_ink="#F3EDE0",
        pad_refused="#3A4348",
        pad_flash="#F3EDE0",
    ),
    "hall": _palette(
        2.0,
        ground="#FFFFFF",
        panel="#FFFFFF",
        sunken="#F0F0F0",
        edge="#000000",
        ink="#000000",
        soft="#1E1E1E",
        accent="#00324F",
        accent_ink="#FFFFFF",
        ember="#7A1E00",
        cool="#00324F",
        keep="#004A20",
        look="#553200",
        again="#780000",
        verdict_ink="#FFFFFF",
        pad="#FFFFFF",
        pad_hot="#FFC9A6",
        pad_warm="#FFF1CC",
        pad_cool="#BFE6EC",
        pad_ink="#000000",
        pad_refused="#BDBDBD",
        pad_flash="#000000",
    ),
}

# (fore, ground, least contrast in day and night, least contrast in hall)
PAIRS: tuple[tuple[str, str, float, float], ...] = (
    ("ink", "ground", 7.0, 12.0),
    ("ink", "panel", 7.0, 12.0),
    ("ink", "sunken", 7.0, 12.0),
    ("soft", "ground", 4.5, 7.0),
    ("soft", "panel", 4.5, 7.0),
    ("soft", "sunken", 4.5, 7.0),
    ("accent", "ground", 4.5, 7.0),
    ("accent", "panel", 4.5, 7.0),
    ("accent_ink", "accent", 4.5, 7.0),
    ("ember", "panel", 4.5, 7.0),
    ("ember", "ground", 4.5, 7.0),
    ("cool", "panel", 4.5, 7.0),
    ("keep", "panel", 4.5, 7.0),
    ("look", "panel", 4.5, 7.0),
    ("again", "panel", 4.5, 7.0),
    ("keep", "ground", 4.5, 7.0),
    ("look", "ground", 4.5, 7.0),
    ("again", "ground", 4.5, 7.0),
    ("verdict_ink", "keep", 4.5, 7.0),
    ("verdict_ink", "look", 4.5, 7.0),
    ("verdict_ink", "again", 4.5, 7.0),
    ("pad_ink", "pad", 7.0, 12.0),
    ("pad_ink", "pad_hot", 4.5, 7.0),
    ("pad_ink", "pad_warm", 4.5, 7.0),
    ("pad_ink", "pad_cool", 4.5, 7.0),
    ("pad_ink", "pad_refused", 4.5, 7.0),
    ("edge", "ground", 3.0, 7.0),
    ("edge", "panel", 3.0, 7.0),
    ("pad_flash", "pad", 3.0, 7.0),
    ("pad_flash", "pad_hot", 3.0, 7.0),
    ("pad_flash", "pad_cool", 3.0, 7.0),
)

_TYPE_SP = {"small": 14.0, "body": 17.0, "lead": 20.0, "title": 26.0, "figure": 40.0, "display": 72.0}


class Look(EventDispatcher):
    """The theme as it stands; every part binds to it, so that a change shows at once."""

    palette_name = StringProperty("day")
    text_scale = NumericProperty(1.0)

    ground = ColorProperty(PALETTES["day"].ground)
    panel = ColorProperty(PALETTES["day"].panel)
    sunken = ColorProperty(PALETTES["day"].sunken)
    edge = ColorProperty(PALETTES["day"].edge)
    ink = ColorProperty(PALETTES["day"].ink)
    soft = ColorProperty(PALETTES["day"].soft)
    accent = ColorProperty(PALETTES["day"].accent)
    accent_ink = ColorProperty(PALETTES["day"].accent_ink)
    ember = ColorProperty(PALETTES["day"].ember)
    cool = ColorProperty(PALETTES["day"].cool)
    keep = ColorProperty(PALETTES["day"].keep)
    look = ColorProperty(PALETTES["day"].look)
    again = ColorProperty(PALETTES["day"].again)
    verdict_ink = ColorProperty(PALETTES["day"].verdict_ink)
    pad = ColorProperty(PALETTES["day"].pad)
    pad_hot = ColorProperty(PALETTES["day"].pad_hot)
    pad_warm = ColorProperty(PALETTES["day"].pad_warm)
    pad_cool = ColorProperty(PALETTES["day"].pad_cool)
    pad_ink = ColorProperty(PALETTES["day"].pad_ink)
    pad_refused = ColorProperty(PALETTES["day"].pad_refused)
    pad_flash = ColorProperty(PALETTES["day"].pad_flash)
    edge_dp = NumericProperty(1.0)

    small = NumericProperty(0.0)
    body = NumericProperty(0.0)
    lead = NumericProperty(0.0)
    title = NumericProperty(0.0)
    figure = NumericProperty(0.0)
    display = NumericProperty(0.0)

    grid = NumericProperty(0.0)
    target = NumericProperty(0.0)
    glove = NumericProperty(0.0)

    plain = StringProperty("DejaVuSans")
    bold = StringProperty("CooltallyBold")

    def wear(self, palette_name: str | None = None, text_scale: float | None = None) -> None:
        """Put on a palette and a scale of text."""
        if palette_name is not None:
            palette = PALETTES[palette_name]
            self.palette_name = palette_name
            for part in fields(palette):
                setattr(self, part.name, getattr(palette, part.name))
        if text_scale is not None:
            self.text_scale = text_scale
        for name, size in _TYPE_SP.items():
            setattr(self, name, sp(size) * self.text_scale)
        self.grid = dp(8)
        self.target = dp(TARGET_MM * DP_PER_MM)
        self.glove = dp(GLOVE_MM * DP_PER_MM)


def register_fonts() -> None:
    """Make DejaVu Sans the face of every label: it has every sign that the app writes."""
    plain, bold = str(FONTS / "DejaVuSans.ttf"), str(FONTS / "DejaVuSans-Bold.ttf")
    LabelBase.register("Roboto", plain, fn_bold=bold)
    LabelBase.register("DejaVuSans", plain, fn_bold=bold)
    LabelBase.register("CooltallyBold", bold, fn_bold=bold)


look = Look()


def heat_colour(level: float, palette: Palette | Look = look) -> Colour:
    """The pad's colour at a level of heat from 0 (air) to 1 (start)."""
    cool, warm, hot = (tuple(getattr(palette, name)) for name in ("pad_cool", "pad_warm", "pad_hot"))
    return mixed(cool, warm, level * 2) if level < 0.5 else mixed(warm, hot, level * 2 - 1)
