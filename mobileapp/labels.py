"""The short names under which a person meets the values of a set-up, and a bench in one line."""

from __future__ import annotations

from core.bench.setup import Setup
from mobileapp.figures import localised, significant
from mobileapp.words import _


def field_label(section: str, key: str) -> str:
    """The name beside a field."""
    return _labels().get(f"{section}.{key}", key)


def _labels() -> dict[str, str]:
    return {
        "body.shape": _("Shape"),
        "body.diameter_m": _("Diameter"),
        "body.length_m": _("Length"),
        "body.side_a_m": _("Side across the stream"),
        "body.side_b_m": _("Side along the stream"),
        "body.side_c_m": _("Length across the stream"),
        "body.material": _("Material"),
        "body.density_kg_m3": _("Density"),
        "body.heat_capacity_J_kgK": _("Specific heat"),
        "body.conductivity_W_mK": _("Conductivity"),
        "body.mass_kg": _("Weighed mass"),
        "body.emissivity": _("Emissivity"),
        "body.exposed": _("Faces in the air"),
        "body.stem_loss_W_K": _("Loss through holder and stem"),
        "body.position": _("Place of the sensor"),
        "body.axial_offset_m": _("Sensor off the middle by"),
        "body.diameter_u_m": _("u of the diameter"),
        "body.length_u_m": _("u of the length"),
        "body.mass_u_kg": _("u of the mass"),
        "body.density_u_rel": _("u of the density"),
        "body.heat_capacity_u_rel": _("u of the specific heat"),
        "body.conductivity_u_rel": _("u of the conductivity"),
        "body.emissivity_u": _("u of the emissivity"),
        "body.stem_loss_u_W_K": _("u of the stem loss"),
        "thermometer.resolution_K": _("Step of the display"),
        "thermometer.refresh_s": _("Display renewed every"),
        "thermometer.rounding": _("Rounding of the display"),
        "thermometer.accuracy_K": _("u of the calibration"),
        "thermometer.gain_u_rel": _("u of the scale"),
        "thermometer.lag_s": _("Lag of the sensor"),
        "thermometer.noise_K": _("Noise of the meter"),
        "recording.mode": _("Way of recording"),
        "recording.tap_lag_s": _("Your tap comes late by"),
        "recording.tap_jitter_s": _("Your tap scatters by"),
        "recording.tap_lag_u_s": _("u of your delay"),
        "recording.beat_s": _("Time between beats"),
        "recording.kind": _("Kind of run"),
        "air.temperature_C": _("Air temperature"),
        "air.temperature_end_C": _("Air temperature after"),
        "air.temperature_u_K": _("u of the air temperature"),
        "air.pressure_Pa": _("Air pressure"),
        "air.pressure_u_Pa": _("u of the pressure"),
        "air.relative_humidity": _("Relative humidity"),
        "air.relative_humidity_u": _("u of the humidity"),
        "air.surroundings_C": _("Walls around the body"),
        "flow.velocity_m_s": _("Airspeed"),
        "flow.velocity_readings_m_s": _("Several airspeed readings"),
        "flow.dynamic_pressure_Pa": _("Dynamic pressure"),
        "flow.dynamic_pressure_u_Pa": _("u of the dynamic pressure"),
        "flow.flow_m3_s": _("Volume flow"),
        "flow.flow_u_m3_s": _("u of the volume flow"),
        "flow.velocity_end_m_s": _("Airspeed after"),
        "flow.velocity_u_m_s": _("u of the airspeed"),
        "flow.duct_height_m": _("Duct height"),
        "flow.duct_width_m": _("Duct width"),
        "flow.arrangement": _("Arrangement"),
        "flow.pitch_transverse_m": _("Pitch across the stream"),
        "flow.pitch_longitudinal_m": _("Pitch along the stream"),
        "flow.row": _("Row of the body"),
        "flow.rows": _("Rows in the bank"),
        "limits.target_U95_rel": _("Wanted U95 of h"),
        "limits.span_ratio_min": _("Least fall, first to last excess"),
        "limits.readings_min": _("Fewest readings"),
        "limits.air_drift_K": _("Largest drift of the air"),
        "limits.velocity_drift_rel": _("Largest drift of the airspeed"),
        "limits.radiation_share": _("Largest share of radiation"),
        "limits.stem_share": _("Largest share of the stem"),
        "limits.richardson": _("Largest Gr/Re²"),
        "limits.trimmed_share": _("Largest share trimmed"),
        "limits.doubtful_share": _("Largest share in doubt"),
    }


def section_label(section: str) -> str:
    """The heading over a section of the set-up."""
    return {
        "body": _("Body"),
        "thermometer": _("Thermometer"),
        "recording": _("Recording"),
        "air": _("Air"),
        "flow": _("Flow"),
        "limits": _("Limits of the checks"),
    }[section]


def choice_label(word: str) -> str:
    """A choice of the set-up file as a person reads it."""
    return {
        "cylinder": _("Cylinder"),
        "sphere": _("Sphere"),
        "block": _("Block"),
        "side": _("Side"),
        "side+end": _("Side and one end"),
        "all": _("All faces"),
        "nearest": _("To nearest"),
        "down": _("Cut down"),
        "change": _("Tap at each change"),
        "beat": _("Digits on a beat"),
        "forced": _("Fan on"),
        "still-air": _("Still air"),
        "single": _("Single body"),
        "inline": _("Bank, in line"),
        "staggered": _("Bank, staggered"),
        "centre": _("Centre"),
        "surface": _("Surface"),
    }.get(word, _(word))


def body_line(setup: Setup) -> str:
    """The body as `Cylinder 16 × 110 mm, brass`."""
    body = setup.body
    sizes = {
        "cylinder": (body.diameter_m, body.length_m),
        "sphere": (body.diameter_m,),
        "block": (body.side_a_m, body.side_b_m, body.side_c_m),
    }[body.shape]
    millimetres = " × ".join(significant(1000 * size, 3) for size in sizes if size is not None)
    material = _(body.material) if body.material else _("own material")
    return f"{choice_label(body.shape)} {millimetres} mm, {material}"


def bench_line(setup: Setup) -> str:
    """The bench in two lines."""
    step = localised(f"{setup.thermometer.resolution_K:g}")
    display = _("display in steps of {step} °C").format(step=step)
    return f"{body_line(setup)}\n{display} · {choice_label(setup.recording.mode)}"
