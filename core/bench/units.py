"""What a person types, with its unit, to SI; and a number with its uncertainty to what a person reads.

Factors are exact by definition: BIPM, The International System of Units, 9th ed. (2019); NIST Special Publication
811 (2008), appendix B.8, for inch, foot, pound and Btu (International Table). Columns of mercury and of water are
the conventional ones of that appendix (13 595.1 and 1000 kg/m³ at standard gravity)."""

from __future__ import annotations

import re
from decimal import ROUND_HALF_EVEN, Decimal
from math import isfinite

from core.bench.setup_check import shown
from core.errors import BadSetup

FOOT_M = 0.3048
INCH_M = 0.0254
POUND_KG = 0.45359237
STANDARD_GRAVITY_M_S2 = 9.80665
BTU_J = 1055.05585262
MILE_M = 1609.344
NAUTICAL_MILE_M = 1852.0

_LENGTH = {"m": 1.0, "cm": 1e-2, "mm": 1e-3, "µm": 1e-6, "in": INCH_M, '"': INCH_M, "ft": FOOT_M}
_TIME = {"s": 1.0, "ms": 1e-3, "min": 60.0, "h": 3600.0}
_DIFFERENCE = {"K": 1.0, "°C": 1.0, "C": 1.0, "mK": 1e-3, "°F": 5 / 9, "F": 5 / 9}

# SI unit of a field -> what may be typed there, and its factor
FACTORS: dict[str, dict[str, float]] = {
    "m": _LENGTH,
    "s": _TIME,
    "K": _DIFFERENCE,
    "kg": {"kg": 1.0, "g": 1e-3, "mg": 1e-6, "lb": POUND_KG, "oz": POUND_KG / 16},
    "m/s": {
        "m/s": 1.0,
        "cm/s": 1e-2,
        "km/h": 1 / 3.6,
        "ft/s": FOOT_M,
        "ft/min": FOOT_M / 60,
        "fpm": FOOT_M / 60,
        "mph": MILE_M / 3600,
        "kn": NAUTICAL_MILE_M / 3600,
    },
    "m³/s": {
        "m³/s": 1.0,
        "m³/min": 1 / 60,
        "m³/h": 1 / 3600,
        "L/s": 1e-3,
        "L/min": 1e-3 / 60,
        "cfm": FOOT_M**3 / 60,
        "ft³/min": FOOT_M**3 / 60,
    },
    "Pa": {
        "Pa": 1.0,
        "hPa": 100.0,
        "mbar": 100.0,
        "kPa": 1e3,
        "bar": 1e5,
        "atm": 101325.0,
        "mmH2O": STANDARD_GRAVITY_M_S2,
        "cmH2O": 10 * STANDARD_GRAVITY_M_S2,
        "inH2O": 25.4 * STANDARD_GRAVITY_M_S2,
        "mmHg": 13.5951 * STANDARD_GRAVITY_M_S2,
        "inHg": 25.4 * 13.5951 * STANDARD_GRAVITY_M_S2,
        "psi": POUND_KG * STANDARD_GRAVITY_M_S2 / INCH_M**2,
    },
    "kg/m³": {
        "kg/m³": 1.0,
        "g/cm³": 1e3,
        "kg/L": 1e3,
        "lb/ft³": POUND_KG / FOOT_M**3,
        "lb/in³": POUND_KG / INCH_M**3,
    },
    "J/(kg·K)": {"J/(kg·K)": 1.0, "kJ/(kg·K)": 1e3, "J/(g·K)": 1e3, "Btu/(lb·°F)": BTU_J / POUND_KG / (5 / 9)},
    "W/(m·K)": {"W/(m·K)": 1.0, "W/(cm·K)": 100.0, "Btu/(h·ft·°F)": BTU_J / 3600 / FOOT_M / (5 / 9)},
    "W/K": {"W/K": 1.0, "mW/K": 1e-3},
    "": {"": 1.0, "%": 1e-2},
}
TEMPERATURES = ("°C", "C", "°F", "F", "K")

_NUMBER = re.compile(
    r"([+\-−]?)(\d[\d\u2009\u202f\u00a0 ]*\d|\d*)(?:([.,])(\d+|(?=\D|$)))?(?:[eE]([+\-−]?\d{1,3}))?\s*(.*)",
    re.ASCII,
)
_SPELLINGS = {
    "^3": "³",
    "m3": "m³",
    "ft3": "ft³",
    "in3": "in³",
    "*": "·",
    "μ": "µ",
    "ºC": "°C",
    "ºF": "°F",
    " ": "",
}
THIN = "\N{NARROW NO-BREAK SPACE}"
MINUS = "\N{MINUS SIGN}"
SMALLEST_PLAIN = -3  # 0.001; smaller values are shown with a power of ten
_RAISED = str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹")


def fahrenheit_to_C(temperature_F: float) -> float:
    """Temperature [°C] of a temperature in °F: (t − 32)·5/9, exact (NIST SP 811, B.8)."""
    return (temperature_F - 32.0) * 5.0 / 9.0


def kelvin_to_C(temperature_K: float) -> float:
    """Temperature [°C] of a temperature in K: T − 273.15, exact (BIPM 2019)."""
    return temperature_K - 273.15


def _canonical(unit: str) -> str:
    for written, meant in _SPELLINGS.items():
        unit = unit.replace(written, meant)
    return unit


def split_entry(entry: str) -> tuple[float, str]:
    """The number and the unit that a person typed; comma and point both mark decimals.

    Raises BadSetup where it is no number, or where a comma could also group thousands."""
    found = _NUMBER.fullmatch(entry.strip())
    if found is None or not (found[2] or found[4]):
        raise BadSetup(f"'{shown(entry)}' does not begin with a number; type one such as 16 mm or 0,63.")
    sign, whole, mark, decimals, exponent, unit = found.groups()
    if mark == "," and len(decimals or "") == 3 and 1 <= len(whole) <= 3 and whole.lstrip("0"):
        raise BadSetup(
            f"'{shown(entry)}' can mean {whole}.{decimals} or {whole}{decimals}; type it with a point or none."
        )
    digits = re.sub(r"\s", "", whole) or "0"
    power = (exponent or "0").replace("−", "-")
    value = float(f"{'-' if sign in ('-', '−') else ''}{digits}.{decimals or '0'}e{power}")
    if not isfinite(value):
        raise BadSetup(f"'{shown(entry)}' is too large.")
    return value, _canonical(unit.strip())


def parse_entry(entry: str, si_unit: str, bare_unit: str | None = None) -> float:
    """The value in `si_unit` of an entry such as '16 mm', '0,63 in', '90 °F', '1500 fpm', '3 mmH2O'.

    A number alone is taken in `bare_unit`, or in `si_unit` if that is left out. '°C' takes temperatures, 'K'
    differences of temperature. Raises BadSetup for what is no number or has no unit of this kind."""
    value, unit = split_entry(entry)
    unit = unit or _canonical(bare_unit if bare_unit is not None else si_unit)
    if si_unit == "°C":
        if unit in ("°F", "F"):
            return fahrenheit_to_C(value)
        if unit in ("°C", "C", "K"):
            return kelvin_to_C(value) if unit == "K" else value
        known: tuple[str, ...] = TEMPERATURES
    else:
        factors = FACTORS.get(si_unit, {si_unit: 1.0})
        if unit in factors:
            return _scaled(value, factors[unit])
        known = tuple(factors)
    units = ", ".join(one or "no unit" for one in known)
    raise BadSetup(f"'{shown(unit)}' is no unit for this value; use one of {units}.")


def _scaled(value: float, factor: float) -> float:
    """value·factor; for a power of ten with the decimals kept as typed (16 mm is 0.016 m to the last digit)."""
    ten = Decimal(repr(factor)).normalize()
    if ten.as_tuple().digits == (1,):
        return float(Decimal(repr(value)) * ten)
    return value * factor


def grouped(digits: str) -> str:
    """A decimal number with its digits in threes by a narrow space (ISO 80000-1, 7.3.1) and a true minus.

    Groups of four digits alone stay together, as the standard allows."""
    sign, digits = (MINUS, digits[1:]) if digits.startswith("-") else ("", digits)
    whole, _, decimals = digits.partition(".")
    if len(whole) > 4:
        head = len(whole) % 3 or 3
        whole = THIN.join([whole[:head], *(whole[i : i + 3] for i in range(head, len(whole), 3))])
    if len(decimals) > 4:
        decimals = THIN.join(decimals[i : i + 3] for i in range(0, len(decimals), 3))
    return sign + whole + ("." + decimals if decimals else "")


def _rounded(value: float, exponent: int) -> Decimal:
    """The value rounded to a multiple of 10^exponent, half to even."""
    return Decimal(repr(float(value))).quantize(Decimal(1).scaleb(exponent), ROUND_HALF_EVEN)


def _plain(value: Decimal) -> str:
    text = f"{value:f}"
    return text.lstrip("-") if not value else text


def _last_place(u: float, digits: int) -> int:
    """Exponent of the last digit when u keeps `digits` significant digits after rounding."""
    exponent = Decimal(repr(float(u))).adjusted() - digits + 1
    return exponent + 1 if _rounded(u, exponent).adjusted() > exponent + digits - 1 else exponent


def in_digits(value: float | None, digits: int = 3) -> str:
    """The value with so many significant digits, small ones with a power of ten; a dash where there is none."""
    if value is None or not isfinite(value):
        return "—"
    if value == 0.0:
        return "0"
    place = _last_place(value, digits)
    rounded = _rounded(value, place)
    exponent = rounded.adjusted()
    if exponent >= SMALLEST_PLAIN:
        return grouped(_plain(rounded))
    return f"{grouped(_plain(rounded.scaleb(-exponent)))}·10{str(exponent).translate(_RAISED)}"


def with_u(value: float | None, u: float | None, unit: str = "") -> str:
    """'102.3 ± 1.7 W/(m²·K)': the uncertainty with two significant digits, the value to the same place.

    JCGM 100:2008, 7.2.6. `u` may be standard or expanded: say which beside it. Without an uncertainty the value
    has four digits; without a value there is a dash."""
    behind = f" {unit}" if unit else ""
    if value is None or not isfinite(value):
        return "—"
    if u is None or not isfinite(u) or u <= 0.0:
        return in_digits(value, 4) + behind
    place = _last_place(u, 2)
    return f"{grouped(_plain(_rounded(value, place)))} ± {grouped(_plain(_rounded(u, place)))}{behind}"
