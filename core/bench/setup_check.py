"""What makes a bench impossible: single values out of range, and values that contradict each other.

The set-up file and the form on the screen ask the same functions, so both refuse alike."""

from __future__ import annotations

import datetime
from collections.abc import Iterator, Sequence
from dataclasses import MISSING, dataclass, fields, replace
from difflib import get_close_matches
from math import hypot, isfinite
from typing import Any

from core.bench.body import thermal_body
from core.bench.fields import Description
from core.bench.setup import SECTIONS, Body, Flow, Setup, Surrounding
from core.bench.solids import SOLIDS, solid
from core.errors import BadSetup

PROPERTIES = ("density_kg_m3", "heat_capacity_J_kgK", "conductivity_W_mK")
SIZES = {
    "cylinder": ("diameter_m", "length_m"),
    "sphere": ("diameter_m",),
    "block": ("side_a_m", "side_b_m", "side_c_m"),
}
VELOCITIES = ("velocity_m_s", "velocity_readings_m_s", "dynamic_pressure_Pa", "flow_m3_s")
LONGEST_TEXT = 80
AIR_JUMP_K = 25.0  # a larger step of the air temperature in one run is a slip or another unit
MASS_FACTOR = 4.0  # a weighed mass further than this from density times volume is another unit

_SLIPS = {  # a value that would fit if it were read in another unit
    "m": ((1e-3, "mm"), (1e-2, "cm")),
    "kg": ((1e-3, "g"),),
    "Pa": ((100.0, "hPa"), (1000.0, "kPa")),
    "kg/m³": ((1000.0, "g/cm³"),),
    "": ((0.01, "%"),),
    "s": ((1e-3, "ms"),),
}


@dataclass(frozen=True, slots=True)
class Problem:
    """One thing wrong with a set-up: `fault` goes on after the name of the key, in `section`."""

    section: str
    key: str
    fault: str


def descriptions(section: str) -> dict[str, Description]:
    """The keys of a section and their descriptions, in order."""
    return {one.name: one.metadata["description"] for one in fields(SECTIONS[section])}


def required(section: str) -> tuple[str, ...]:
    """The keys of a section that have no default."""
    return tuple(one.name for one in fields(SECTIONS[section]) if one.default is MISSING)


def nearest(word: str, known: Sequence[str]) -> str:
    """The known word that looks most like `word`."""
    found = get_close_matches(word.lower(), [one.lower() for one in known], 1, 0.0)
    return next(one for one in known if not found or one.lower() == found[0])


def shown(value: object) -> str:
    """A value as a sentence may quote it: printable, on one line, short."""
    text = value if isinstance(value, str) else repr(value)
    text = "".join(c if c.isprintable() else "\N{REPLACEMENT CHARACTER}" for c in text[:60])
    return text[:40] + "…" if len(text) > 40 else text


def shown_path(path: object) -> str:
    """A path as a sentence may quote it: whole, printable, on one line."""
    return "".join(c if c.isprintable() else "\N{REPLACEMENT CHARACTER}" for c in str(path))


def allowed(description: Description) -> str:
    """What a value may be, in words."""
    unit = f" {description.unit}" if description.unit else ""
    if description.kind == "choice":
        return f"one of {', '.join(description.choices)}"
    if description.kind == "text":
        return f"a text of 1 to {LONGEST_TEXT} characters in quotes"
    if description.low is None or description.high is None:
        return "a number" + unit
    span = f"from {description.low:.10g} to {description.high:.10g}{unit}"
    if description.above_low:
        span = f"above {description.low:.10g} and up to {description.high:.10g}{unit}"
    whole, each = f"a whole number {span}", f"a list of numbers, each {span}"
    return {"integer": whole, "numbers": each}.get(description.kind, f"a number {span}")


def _kind_of(value: object) -> str:
    if isinstance(value, bool):
        return "true or false"
    if isinstance(value, str):
        return f"the text '{shown(value)}'"
    if isinstance(value, int | float):
        return f"the number {shown(value)}"
    if isinstance(value, list | tuple):
        return "a list"
    if isinstance(value, dict):
        return "a table"
    if isinstance(value, datetime.date | datetime.time):
        return "a date or time"
    return shown(value)


def _real(value: object) -> float | None:
    if isinstance(value, bool) or not isinstance(value, int | float):
        return None
    try:
        return float(value)
    except OverflowError:
        return float("inf")


def _number_fault(description: Description, value: float) -> str | None:
    low, high = description.low, description.high
    if low is None or high is None:
        return None if isfinite(value) else f"is {value}, where {allowed(description)} is wanted"

    def fits(x: float) -> bool:
        return low <= x <= high and not (description.above_low and x == low)

    if fits(value):
        return None
    slips = (
        (unit for factor, unit in _SLIPS.get(description.unit, ()) if fits(value * factor)) if value > 0 else ()
    )
    slip = next(iter(slips), None)
    hint = f" (is {value:.10g} in {slip}?)" if slip else ""
    return f"is {value:.10g}, where {allowed(description)} is wanted{hint}"


def _text_fault(description: Description, value: str) -> str | None:
    if not value.strip() or len(value) > LONGEST_TEXT or not value.isprintable():
        return f"is the text '{shown(value)}', where {allowed(description)} is wanted"
    return None


def value_fault(description: Description, value: Any) -> str | None:
    """What is wrong with one value by its description alone; None if nothing is."""
    wanted = f"is {_kind_of(value)}, where {allowed(description)} is wanted"
    if description.kind == "choice":
        if isinstance(value, str) and value not in description.choices:
            return f"{wanted}; '{nearest(value, description.choices)}' is the nearest"
        return None if isinstance(value, str) else wanted
    if description.kind == "text":
        return _text_fault(description, value) if isinstance(value, str) else wanted
    if description.kind == "numbers":
        if not isinstance(value, list | tuple):
            return wanted
        reals = [_real(one) for one in value]
        if any(one is None for one in reals):
            return f"holds something that is no number, where {allowed(description)} is wanted"
        return next(
            (fault for one in reals if one is not None and (fault := _number_fault(description, one))), None
        )
    real = _real(value)
    if real is None or (description.kind == "integer" and not isinstance(value, int)):
        return wanted
    return _number_fault(description, real)


def _body_problems(body: Body) -> Iterator[tuple[str, str]]:
    wanted = SIZES[body.shape]
    for key in wanted:
        if getattr(body, key) is None:
            yield key, f"is missing: a {body.shape} needs {' and '.join(wanted)}"
    for key in dict.fromkeys(key for keys in SIZES.values() for key in keys):
        if key not in wanted and getattr(body, key) is not None:
            yield key, f"does not belong to a {body.shape}, which is given by {' and '.join(wanted)}; take it out"
    missing = [key for key in PROPERTIES if getattr(body, key) is None]
    if body.material is None and missing:
        if len(missing) == len(PROPERTIES):
            yield "material", f"is missing: name one, or give {', '.join(PROPERTIES)}"
        else:
            yield missing[0], "is missing: without a material all three properties are needed"
    if body.material is not None and missing and not _is_known(body.material):
        yield (
            "material",
            f"is '{shown(body.material)}', which is not in the table of solids; the nearest there is "
            f"'{nearest(body.material, list(SOLIDS))}', or give {', '.join(PROPERTIES)}",
        )
    half = {"cylinder": body.length_m, "sphere": body.diameter_m, "block": body.side_c_m}[body.shape]
    if half is not None and body.axial_offset_m > half / 2:
        yield (
            "axial_offset_m",
            f"is {body.axial_offset_m} m, outside the body, which ends {half / 2} m from its middle",
        )
    yield from _mass_problems(body)


def _is_known(material: str) -> bool:
    try:
        solid(material)
    except BadSetup:
        return False
    return True


def _mass_problems(body: Body) -> Iterator[tuple[str, str]]:
    if body.mass_kg is None:
        return
    try:
        computed = thermal_body(replace(body, mass_kg=None)).mass_kg
    except BadSetup:  # a size or a property is missing, which is refused elsewhere
        return
    if not computed / MASS_FACTOR <= body.mass_kg <= computed * MASS_FACTOR:
        makes = f"where the sizes and the density make {computed:.3g} kg; correct one of them"
        yield "mass_kg", f"is {body.mass_kg} kg, {makes}"


def _air_problems(air: Surrounding) -> Iterator[tuple[str, str]]:
    end = air.temperature_end_C
    if end is not None and abs(end - air.temperature_C) > AIR_JUMP_K:
        yield (
            "temperature_end_C",
            f"is {end} °C, more than {AIR_JUMP_K:g} K away from the {air.temperature_C} °C before the run; "
            "correct the one that is wrong",
        )


def _velocity_problems(flow: Flow) -> Iterator[tuple[str, str]]:
    given = [key for key in VELOCITIES if getattr(flow, key) not in (None, ())]
    if not given:
        yield "velocity_m_s", f"is missing: give one of {', '.join(VELOCITIES)}"
        return
    if len(given) > 1:
        yield given[1], f"and {given[0]} both give the velocity; keep one of them"
    for key in given:
        value = getattr(flow, key)
        if (max(value) if isinstance(value, tuple) else value) == 0.0:
            yield (
                key,
                'is 0, where a forced run needs moving air; for still air set kind = "still-air" in [recording]',
            )
    if flow.flow_m3_s is not None:
        for key in ("duct_height_m", "duct_width_m"):
            if getattr(flow, key) is None:
                yield key, "is missing: a volume flow needs the height and the width of its duct"


def _bank_problems(flow: Flow, body: Body) -> Iterator[tuple[str, str]]:
    if flow.row is not None and flow.rows is not None and flow.row > flow.rows:
        yield "row", f"is {flow.row}, behind the last of the {flow.rows} rows"
    if flow.arrangement == "single":
        return
    across = body.side_a_m if body.shape == "block" else body.diameter_m
    along = body.side_b_m if body.shape == "block" else body.diameter_m
    for key in ("pitch_transverse_m", "pitch_longitudinal_m"):
        if getattr(flow, key) is None:
            yield key, f'is missing: arrangement = "{flow.arrangement}" needs both pitches'
    s_t, s_l = flow.pitch_transverse_m, flow.pitch_longitudinal_m
    if across is None or along is None or s_t is None or s_l is None:
        return
    if s_t <= across:
        yield "pitch_transverse_m", f"is {s_t} m, not more than the {across} m of the body across the stream"
    if flow.arrangement == "inline" and s_l <= along:
        yield "pitch_longitudinal_m", f"is {s_l} m, not more than the {along} m of the body along the stream"
    if flow.arrangement == "staggered" and hypot(s_l, s_t / 2) <= max(across, along):
        yield "pitch_longitudinal_m", f"is {s_l} m, so near that tubes of neighbouring rows would touch"


def _duct_problems(flow: Flow, body: Body) -> Iterator[tuple[str, str]]:
    across = body.side_a_m if body.shape == "block" else body.diameter_m
    length = {"cylinder": body.length_m, "block": body.side_c_m, "sphere": body.diameter_m}[body.shape]
    if across is not None and flow.duct_height_m is not None and across >= flow.duct_height_m:
        yield "duct_height_m", f"is {flow.duct_height_m} m, which the body of {across} m would fill"
    if length is not None and flow.duct_width_m is not None and length > flow.duct_width_m:
        yield "duct_width_m", f"is {flow.duct_width_m} m, less than the {length} m of the body along it"


def problems(setup: Setup) -> tuple[Problem, ...]:
    """Everything wrong with a set-up, the most basic first; empty for a bench that can be used."""
    found = [
        Problem(section, key, fault)
        for section in SECTIONS
        for key, description in descriptions(section).items()
        if (value := getattr(getattr(setup, section), key)) is not None
        and (fault := value_fault(description, value))
    ]
    if found:
        return tuple(found)
    found += [Problem("body", *one) for one in _body_problems(setup.body)]
    found += [Problem("air", *one) for one in _air_problems(setup.air)]
    if setup.recording.kind == "forced":
        found += [Problem("flow", *one) for one in _velocity_problems(setup.flow)]
    found += [Problem("flow", *one) for one in _bank_problems(setup.flow, setup.body)]
    found += [Problem("flow", *one) for one in _duct_problems(setup.flow, setup.body)]
    return tuple(found)
