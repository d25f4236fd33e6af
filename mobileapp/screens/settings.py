"""What this person likes, what this device can do, the cautions, and what the app is made of."""

from __future__ import annotations

import sys
from importlib import metadata
from pathlib import Path
from typing import Any

from kivy.properties import BooleanProperty, StringProperty

import core
from mobileapp.cautions import CAUTIONS, NO_REPLACEMENT
from mobileapp.figures import THIN, number, percent
from mobileapp.navigation import Page
from mobileapp.theme import FONTS, PALETTES, TEXT_SCALES
from mobileapp.trace import trace
from mobileapp.widgets.basics import ChoicePress, SoftWords, Tick, Words
from mobileapp.widgets.findings import ValueLine
from mobileapp.words import LANGUAGES, _, say

MADE_OF = (
    # package, what it does here, licence
    ("kivy", "Kivy", "MIT"),
    ("numpy", "NumPy", "BSD 3-Clause"),
    ("plyer", "plyer", "MIT"),
)


class SettingsScreen(Page):
    """Every choice shows at once and is kept at once."""

    stamp_text = StringProperty("")
    stamp_help = StringProperty("")
    licence_text = StringProperty("")
    licence_open = BooleanProperty(False)
    version = StringProperty("")

    def arrive(self, **_aim: Any) -> None:
        self.version = core.__version__
        liked = self.model.preferences
        self._choices("palettes", {name: palette_label(name) for name in PALETTES}, liked.palette, "palette")
        scales = {scale: percent(scale) for scale in TEXT_SCALES}
        self._choices("scales", scales, liked.text_scale, "text_scale")
        self._choices("languages", LANGUAGES, liked.language, "language")
        self._choices("hands", {"right": _("Right hand"), "left": _("Left hand")}, liked.hand, "hand")
        self._build_feedback()
        self._show_device()
        self._show_cautions()
        self._show_made_of()

    # ------------------------------------------------------------------ what the person likes

    def _choices(self, box_name: str, words: dict[Any, str], chosen: Any, key: str) -> None:
        box = self.ids[box_name]
        box.clear_widgets()
        for value, word in words.items():
            button = ChoicePress(text=word, chosen=value == chosen)
            button.value = value
            button.bind(on_release=lambda pressed, k=key: self._take(k, pressed))
            box.add_widget(button)

    def _take(self, key: str, pressed: ChoicePress) -> None:
        for button in pressed.parent.children:
            button.chosen = button is pressed
        self.model.prefer(**{key: pressed.value})
        trace("preferred", key=key, value=pressed.value)

    def _build_feedback(self) -> None:
        box = self.ids.feedback
        box.clear_widgets()
        device, liked = self.model.device, self.model.preferences
        ways = [
            ("flash", _("A flash of the pad"), True),
            ("click", _("A click"), device.sounds.available),
            ("vibration", _("A short vibration"), device.haptics.available),
        ]
        for key, word, available in ways:
            told = word if available else _("{way} (this device has none)").format(way=word)
            tick = Tick(text=told, ticked=getattr(liked, key), disabled=not available)
            tick.bind(ticked=lambda _tick, on, k=key: self._feed_back(k, on))
            box.add_widget(tick)

    def _feed_back(self, key: str, on: bool) -> None:
        """Keep the choice, and let the person feel it once."""
        self.model.prefer(**{key: on})
        if on and key == "click":
            self.model.device.sounds.play("tap")
        if on and key == "vibration":
            self.model.device.haptics.confirm()

    # ------------------------------------------------------------------ what is so

    def _show_device(self) -> None:
        stamps = self.model.device.stamps
        halfwidth = f"± {number(1000 * stamps.halfwidth_s, 1)}{THIN}ms"
        self.stamp_text = _("Taps are timed by: {source}, {halfwidth}.").format(
            source=stamp_label(stamps.name), halfwidth=halfwidth
        )
        self.stamp_help = _(
            "How far a time may be off goes into the fit, and stands in the CSV with each run."
        )
        box = self.ids.missing
        box.clear_widgets()
        for sentence in self.model.device.missing:
            box.add_widget(Words(text=say(sentence)))
        if not self.model.device.missing:
            box.add_widget(SoftWords(text=_("Nothing that the app uses is missing on this device.")))

    def _show_cautions(self) -> None:
        box = self.ids.cautions
        box.clear_widgets()
        for caution in CAUTIONS:
            box.add_widget(Words(text=f"[b]{_(caution.name)}[/b]  {_(caution.advice)}"))
        box.add_widget(SoftWords(text=_(NO_REPLACEMENT)))

    def _show_made_of(self) -> None:
        box = self.ids.made_of
        box.clear_widgets()
        parts = [("Python", f"{sys.version_info.major}.{sys.version_info.minor}.{sys.version_info.micro}", "PSF")]
        parts += [(name, _version(package), licence) for package, name, licence in MADE_OF]
        parts.append(("DejaVu Sans", "2.37", _("Bitstream Vera, see below")))
        for name, version, licence in parts:
            box.add_widget(ValueLine(name=f"{name} {version}", value=licence))

    def toggle_licence(self) -> None:
        """Show or fold the text of the font's licence, which asks to be shown."""
        self.licence_open = not self.licence_open
        path: Path = FONTS / "LICENSE_DEJAVU"
        self.licence_text = path.read_text(encoding="utf-8") if self.licence_open and path.is_file() else ""


def palette_label(name: str) -> str:
    """The name of a theme."""
    return {"day": _("Day"), "night": _("Night"), "hall": _("Bright hall")}[name]


def stamp_label(name: str) -> str:
    """The source of the time stamps in words."""
    return {
        "platform event time": _("the system's own event time"),
        "window server time": _("the window system's event time"),
        "event watch": _("the window library's event time"),
        "loop": _("the app's own loop"),
    }.get(name, name)


def _version(package: str) -> str:
    try:
        return metadata.version(package)
    except metadata.PackageNotFoundError:
        return ""
