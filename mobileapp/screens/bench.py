"""The bench: a form made from the descriptions of the set-up, with units, typical values and help in place."""

from __future__ import annotations

from dataclasses import fields
from typing import Any

from kivy.properties import StringProperty

from core.bench.setup import SECTIONS, Setup
from core.bench.setup_check import SIZES, descriptions, problems, value_fault
from core.bench.solids import SOLIDS
from core.errors import BadSetup
from mobileapp.labels import field_label, section_label
from mobileapp.navigation import Page
from mobileapp.widgets.basics import ChoicePress, HeadWords, QuietPress, Sheet
from mobileapp.widgets.entry import ChoiceEntry, ValueEntry
from mobileapp.words import _, say

FIRST = {
    "body": ("shape", "diameter_m", "length_m", "side_a_m", "side_b_m", "side_c_m", "material", "mass_kg"),
    "thermometer": ("resolution_K", "refresh_s", "rounding"),
    "recording": ("mode", "beat_s"),
    "air": ("temperature_C", "pressure_Pa", "relative_humidity"),
    "flow": (
        "velocity_m_s",
        "duct_height_m",
        "duct_width_m",
        "arrangement",
        "pitch_transverse_m",
        "pitch_longitudinal_m",
        "row",
        "rows",
    ),
    "limits": (),
}
ALL_SIZES = tuple(dict.fromkeys(key for keys in SIZES.values() for key in keys))
EXAMPLE = {
    "body": {"shape": "cylinder", "diameter_m": 0.016, "length_m": 0.11, "material": "brass"},
    "thermometer": {"resolution_K": 1.0, "refresh_s": 0.5},
    "recording": {"mode": "change"},
    "air": {"temperature_C": 23.0},
    "flow": {"velocity_m_s": 8.0, "duct_height_m": 0.15, "duct_width_m": 0.15},
}


def relevant(section: str, key: str, chosen: dict[tuple[str, str], Any]) -> bool:
    """Whether a field says anything, given the shape, the arrangement and the mode that were chosen."""
    if section == "body" and key in ALL_SIZES:
        return key in SIZES[chosen.get(("body", "shape")) or "cylinder"]
    if key in ("pitch_transverse_m", "pitch_longitudinal_m", "row", "rows"):
        return chosen.get(("flow", "arrangement"), "single") != "single"
    if key == "beat_s":
        return chosen.get(("recording", "mode")) == "beat"
    return True


class SectionSheet(Sheet):
    """One section of the set-up: the fields that every bench needs, and the others folded away."""

    def __init__(self, section: str, given: dict[str, Any], on_choice: Any, **options: Any) -> None:
        super().__init__(**options)
        self.section = section
        self.given = given
        self.rows: dict[str, Any] = {}
        self._on_choice = on_choice
        self.add_widget(HeadWords(text=section_label(section)))
        self._more = QuietPress(text=_("More"), on_release=lambda _button: self.unfold())
        self.unfolded = False
        self.wanted = FIRST[section]

    def arrange(self, chosen: dict[tuple[str, str], Any]) -> None:
        """Put up the fields that say something now; a field keeps what was typed."""
        for row in self.rows.values():
            self.remove_widget(row)
        self.remove_widget(self._more)
        for key, description in descriptions(self.section).items():
            if key not in self.wanted or not relevant(self.section, key, chosen):
                continue
            if key not in self.rows:
                self.rows[key] = self._made(key, description)
            self.add_widget(self.rows[key])
        if not self.unfolded and len(self.wanted) < len(descriptions(self.section)):
            self.add_widget(self._more)

    def _made(self, key: str, description: Any) -> Any:
        value = self.given.get(key)
        if description.kind == "choice":
            row = ChoiceEntry(self.section, key, description, value)
            row.bind(chosen=lambda *_: self._on_choice())
            return row
        row = ValueEntry(self.section, key, description, value)
        if key == "material":
            for material in sorted(SOLIDS):
                button = ChoicePress(text=_(material), size_hint_y=None)
                button.word = material
                button.bind(on_release=lambda pressed: setattr(row, "text", pressed.word))
                row.bind(text=lambda _r, text, b=button: setattr(b, "chosen", text.strip() == b.word))
                button.chosen = row.text == material
                row.ids.quick.add_widget(button)
        return row

    def unfold(self) -> None:
        self.unfolded = True
        self.wanted = tuple(descriptions(self.section))
        self._on_choice()

    def values(self, chosen: dict[tuple[str, str], Any]) -> dict[str, Any]:
        """What was entered, over what was given; an entry that cannot be read raises BadSetup and is marked."""
        made = dict(self.given)
        for key, row in self.rows.items():
            row.fault = ""
            if not relevant(self.section, key, chosen):
                made.pop(key, None)
                continue
            made[key] = _read(row)
        return {key: value for key, value in made.items() if value is not None}


def _read(row: Any) -> Any:
    try:
        return row.value()
    except BadSetup as problem:
        row.fault = say(str(problem))
        raise


class BenchScreen(Page):
    """Describe the bench once; the session carries it on."""

    title = StringProperty("")
    trouble = StringProperty("")

    def arrive(self, **_aim: Any) -> None:
        session = self.model.session
        setup = session.setup if session else None
        self._fill(_as_given(setup) if setup else {})

    def fill_example(self) -> None:
        self._fill(EXAMPLE)

    def _fill(self, given: dict[str, dict[str, Any]]) -> None:
        self.trouble = ""
        self.sheets = {}
        for side in (self.ids.left, self.ids.right):
            side.clear_widgets()
        for section in SECTIONS:
            own = {**_defaults(section), **given.get(section, {})}
            sheet = SectionSheet(section, own, self._arrange)
            self.sheets[section] = sheet
            (self.ids.left if section in ("body", "recording") else self.ids.right).add_widget(sheet)
        self._arrange()

    def _chosen(self) -> dict[tuple[str, str], Any]:
        return {
            (section, key): row.value()
            for section, sheet in self.sheets.items()
            for key, row in sheet.rows.items()
            if isinstance(row, ChoiceEntry)
        } | {
            (section, key): sheet.given[key]
            for section, sheet in self.sheets.items()
            for key in ("shape", "arrangement", "mode")
            if key in sheet.given and key not in sheet.rows
        }

    def _arrange(self) -> None:
        chosen = self._chosen()
        for sheet in self.sheets.values():
            sheet.arrange(chosen)

    def use(self) -> None:
        """Check the whole bench; keep it, or mark what is wrong and bring it into view."""
        setup = self._checked()
        if setup is not None:
            self.model.save_setup(setup)
            self.back()

    def _checked(self) -> Setup | None:
        self.trouble = ""
        chosen = self._chosen()
        made: dict[str, Any] = {}
        faulty: list[Any] = []
        for section, sheet in self.sheets.items():
            try:
                values = sheet.values(chosen)
            except BadSetup:
                faulty += [row for row in sheet.rows.values() if row.fault]
                continue
            faulty += _missing(sheet, values) + _out_of_range(sheet, values)
            if not faulty:
                made[section] = SECTIONS[section](**values)
        if not faulty:
            setup = Setup(**made)
            found = problems(setup)
            if not found:
                return setup
            for problem in found:
                faulty += self._mark(problem.section, problem.key, problem.fault)
        self.trouble = _("Not yet: {field}.").format(field="; ".join(row.label for row in faulty[:3]))
        self.ids.page.scroll_to(faulty[0], padding=40)
        return None

    def _mark(self, section: str, key: str, fault: str) -> list[Any]:
        sheet = self.sheets[section]
        if key not in sheet.rows:
            sheet.unfold()
        row = sheet.rows[key]
        row.fault = f"{field_label(section, key)} {say(fault)}"
        return [row]


def _as_given(setup: Setup) -> dict[str, dict[str, Any]]:
    return {
        section: {part.name: getattr(getattr(setup, section), part.name) for part in fields(SECTIONS[section])}
        for section in SECTIONS
    }


def _defaults(section: str) -> dict[str, Any]:
    parts = fields(SECTIONS[section])
    kept = {part.name: part.default for part in parts if isinstance(part.default, str | float | int)}
    if section == "body":
        kept["shape"] = "cylinder"
    if section == "recording":
        kept["mode"] = "change"
    return kept


def _missing(sheet: SectionSheet, values: dict[str, Any]) -> list[Any]:
    from core.bench.setup_check import required

    rows = [sheet.rows[key] for key in required(sheet.section) if key in sheet.rows and key not in values]
    for row in rows:
        row.fault = _("This is needed.")
    return rows


def _out_of_range(sheet: SectionSheet, values: dict[str, Any]) -> list[Any]:
    rows = []
    for key, value in values.items():
        fault = value_fault(descriptions(sheet.section)[key], value)
        if fault and key in sheet.rows:
            sheet.rows[key].fault = f"{field_label(sheet.section, key)} {say(fault)}"
            rows.append(sheet.rows[key])
    return rows
