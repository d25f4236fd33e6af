"""What the core found, in a person's words: names of checks, inputs and correlations, values with their units."""

from __future__ import annotations

from core.judgement.answer import BudgetLine, Check
from mobileapp.figures import NO_VALUE, THIN, number, percent, significant, with_uncertainty
from mobileapp.words import _, later

SHARES = frozenset(
    {
        "readings in doubt", "material", "airspeed drift", "start", "expected h", "earlier runs",
        "radiation share", "stem share", "target uncertainty",
    }
)  # fmt: skip
COUNTS = frozenset({"number of readings"})
_AUTHORS = {
    "zukauskas": "Žukauskas",
    "churchill-bernstein": "Churchill – Bernstein",
    "churchill-chu": "Churchill – Chu",
    "sanitjai-goldstein": "Sanitjai – Goldstein",
}


def outcome_shape(outcome: str) -> str:
    """The verdict's shape that stands for the outcome of one check."""
    return "keep" if outcome == "good" else outcome


def check_label(name: str) -> str:
    """The name of a check."""
    return {
        "recording mode": _("Way of recording"),
        "display step": _("Step of the display"),
        "temperature span": _("Span of the cooling"),
        "number of readings": _("Number of readings"),
        "readings in doubt": _("Readings in doubt"),
        "material": _("Mass against material"),
        "airspeed drift": _("Drift of the airspeed"),
        "air drift": _("Drift of the air"),
        "display refresh": _("Refresh of the display"),
        "start": _("Start left out"),
        "asymptote": _("Where the readings head"),
        "residual pattern": _("Pattern in the residuals"),
        "earlier runs": _("Earlier runs at this speed"),
        "expected h": _("Published h"),
        "Biot number": _("Biot number"),
        "mixed convection": _("Buoyancy, Gr/Re²"),
        "radiation share": _("Share of radiation"),
        "stem share": _("Share of the stem"),
        "target uncertainty": _("Wanted U95"),
    }.get(name, _(name))


def check_values(check: Check) -> str:
    """Value and limit of a check; empty where it has no value."""
    if check.value is None:
        return ""
    value = _check_value(check, check.value)
    if check.limit is None:
        return value
    return _("{value}, limit {limit}").format(value=value, limit=_check_value(check, check.limit))


def _check_value(check: Check, value: float) -> str:
    if check.name in COUNTS:
        return number(value, 0)
    if check.name in SHARES:
        return percent(value, 1)
    text = significant(value, 2) if abs(value) < 100 else number(value, 0)
    return f"{text}{THIN}{check.unit}" if check.unit else text


def input_label(name: str) -> str:
    """The name of an input of the budget."""
    return {
        later("diameter"): _("Diameter"),
        later("length"): _("Length"),
        later("side a"): _("Side across the stream"),
        later("side b"): _("Side along the stream"),
        later("side c"): _("Length across the stream"),
        later("mass"): _("Mass"),
        later("density"): _("Density"),
        later("heat capacity"): _("Specific heat"),
        later("conductivity"): _("Conductivity"),
        later("emissivity"): _("Emissivity"),
        later("stem loss"): _("Loss through holder and stem"),
        later("thermometer offset"): _("Calibration of the thermometer"),
        later("thermometer gain"): _("Scale of the thermometer"),
        later("air temperature"): _("Air temperature"),
        later("tap delay"): _("Delay of the tap"),
        later("readings and their fit"): _("Readings and their fit"),
    }.get(name, _(name))


def input_value(line: BudgetLine) -> str:
    """An input as `16.00 ± 0.02 mm`, with its standard uncertainty."""
    factor, unit = {"m": (1000.0, "mm"), "kg": (1000.0, "g")}.get(line.unit, (1.0, line.unit))
    if line.u == 0:
        value, u = significant(factor * line.value, 4), "0"
    else:
        value, u = with_uncertainty(factor * line.value, factor * line.u)
    return f"{value} ± {u}{THIN}{unit}" if unit else f"{value} ± {u}"


def law_label(correlation: str) -> str:
    """The authors of a published correlation."""
    author = correlation.removesuffix("-bank")
    name = _AUTHORS.get(author, author.title())
    return _("{author}, bank").format(author=name) if correlation.endswith("-bank") else name


def plus_minus(value: float | None, expanded: float | None) -> str:
    """`224.2 ± 8.9`, or a dash."""
    first, second = with_uncertainty(value, expanded)
    return NO_VALUE if second == NO_VALUE else f"{first} ± {second}"
