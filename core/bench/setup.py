"""The bench as one frozen value: body, thermometer, recording, air, flow, limits.

Every field carries its description (`core.bench.fields`); `core.bench.setup_file` reads and writes the same
fields as TOML. Temperatures are in °C, everything else in SI units. All `*_u_*` are standard uncertainties."""

from __future__ import annotations

from dataclasses import dataclass

from core.bench.fields import choice, integer, number, numbers, text

SHAPES = ("cylinder", "sphere", "block")
EXPOSED = ("side", "side+end", "all")
ROUNDINGS = ("nearest", "down")
MODES = ("change", "beat")
KINDS = ("forced", "still-air")
ARRANGEMENTS = ("single", "inline", "staggered")
POSITIONS = ("centre", "surface")


@dataclass(frozen=True, slots=True)
class Body:
    """The heated body. A cylinder has a diameter and a length, a sphere a diameter, a block three sides
    (side a across the stream, side b along it, side c its length)."""

    shape: str = choice(SHAPES, "Shape of the heated body.")
    diameter_m: float | None = number(
        "m", 5e-4, 1.0, "Outer diameter of the cylinder or sphere.", default=None, typical="0.010 to 0.040"
    )
    length_m: float | None = number(
        "m", 1e-3, 5.0, "Length of the cylinder in the stream.", default=None, typical="0.08 to 0.30"
    )
    side_a_m: float | None = number(
        "m", 5e-4, 5.0, "Side of the block across the stream.", default=None, typical="0.010 to 0.040"
    )
    side_b_m: float | None = number(
        "m", 5e-4, 5.0, "Side of the block along the stream.", default=None, typical="0.010 to 0.040"
    )
    side_c_m: float | None = number(
        "m", 5e-4, 5.0, "Length of the block, across the stream.", default=None, typical="0.08 to 0.30"
    )
    material: str | None = text(
        "Material from the table of solids; or give its three properties.", default=None, typical="brass"
    )
    density_kg_m3: float | None = number(
        "kg/m³", 10.0, 25000.0, "Density, if the material is not in the table.", default=None, typical="8500"
    )
    heat_capacity_J_kgK: float | None = number(
        "J/(kg·K)",
        50.0,
        6000.0,
        "Specific heat capacity at 20 °C, if not from the table.",
        default=None,
        typical="380",
    )
    conductivity_W_mK: float | None = number(
        "W/(m·K)", 0.01, 500.0, "Thermal conductivity, if not from the table.", default=None, typical="115"
    )
    mass_kg: float | None = number(
        "kg", 1e-5, 500.0, "Mass as weighed; it replaces density times volume.", default=None, typical="0.189"
    )
    emissivity: float = number("", 0.0, 1.0, "Emissivity of the surface.", default=0.1, typical="0.03 to 0.95")
    exposed: str = choice(EXPOSED, "Which faces the air sweeps: side, side and one end, or all.", default="side")
    stem_loss_W_K: float = number(
        "W/K",
        0.0,
        10.0,
        "Conductance of holder and sensor stem, from a still-air run.",
        default=0.0,
        typical="0 to 0.02",
    )
    position: str = choice(POSITIONS, "Where in the cross-section the thermometer sits.", default="centre")
    axial_offset_m: float = number(
        "m", 0.0, 2.5, "Distance of the thermometer from the middle of the length.", default=0.0, typical="0"
    )
    diameter_u_m: float = number("m", 0.0, 0.1, "Standard uncertainty of the diameter.", default=2e-5)
    length_u_m: float = number("m", 0.0, 0.1, "Standard uncertainty of the length or of a side.", default=5e-5)
    mass_u_kg: float = number("kg", 0.0, 10.0, "Standard uncertainty of the weighed mass.", default=1e-4)
    density_u_rel: float = number("", 0.0, 0.5, "Relative standard uncertainty of the density.", default=0.005)
    heat_capacity_u_rel: float | None = number(
        "",
        0.0,
        0.5,
        "Relative standard uncertainty of the heat capacity; from the table of solids if left out.",
        default=None,
    )
    conductivity_u_rel: float = number(
        "", 0.0, 0.5, "Relative standard uncertainty of the conductivity.", default=0.05
    )
    emissivity_u: float = number("", 0.0, 0.5, "Standard uncertainty of the emissivity.", default=0.02)
    stem_loss_u_W_K: float = number("W/K", 0.0, 5.0, "Standard uncertainty of the stem loss.", default=0.0)


@dataclass(frozen=True, slots=True)
class Thermometer:
    """The digital thermometer in the body."""

    resolution_K: float = number("K", 1e-4, 10.0, "Step of the display.", typical="1 or 0.1")
    refresh_s: float = number(
        "s", 0.0, 30.0, "Time from one renewal of the display to the next.", default=0.5, typical="0.3 to 2.5"
    )
    rounding: str = choice(ROUNDINGS, "Whether the display rounds to nearest or cuts down.", default="nearest")
    accuracy_K: float = number(
        "K", 0.0, 10.0, "Standard uncertainty of its calibration, as one offset.", default=0.5, typical="0.1 to 1"
    )
    gain_u_rel: float = number(
        "", 0.0, 0.1, "Standard uncertainty of its scale, relative.", default=0.001, typical="0.001"
    )
    lag_s: float = number(
        "s", 0.0, 60.0, "Time constant of the sensor in the body.", default=0.0, typical="0 to 3"
    )
    noise_K: float = number(
        "K", 0.0, 5.0, "Standard deviation of the meter's own noise.", default=0.0, typical="0 to 0.05"
    )


@dataclass(frozen=True, slots=True)
class Recording:
    """How the readings come about."""

    mode: str = choice(MODES, "A tap at each change of the display, or a reading on a fixed beat.")
    tap_lag_s: float = number(
        "s", -1.0, 3.0, "Mean delay of this person's tap.", default=0.0, typical="0.2 to 0.3"
    )
    tap_jitter_s: float = number(
        "s", 0.0, 2.0, "Standard deviation of the tap's delay.", default=0.05, typical="0.03 to 0.08"
    )
    tap_lag_u_s: float = number("s", 0.0, 1.0, "Standard uncertainty of the mean delay.", default=0.05)
    beat_s: float = number("s", 0.5, 120.0, "Time between two beats.", default=5.0, typical="5 or 10")
    kind: str = choice(
        KINDS, "A run in forced flow, or one in still air that measures the stem loss.", default="forced"
    )


@dataclass(frozen=True, slots=True)
class Surrounding:
    """The air that cools the body, and what the body radiates to."""

    temperature_C: float = number("°C", -40.0, 120.0, "Air temperature before the run.", typical="15 to 30")
    temperature_end_C: float | None = number(
        "°C", -40.0, 120.0, "Air temperature after the run.", default=None, typical="15 to 30"
    )
    temperature_u_K: float = number(
        "K",
        0.0,
        10.0,
        "Standard uncertainty of the air temperature against the body's thermometer, compared in one air.",
        default=0.02,
        typical="0.01 to 0.1",
    )
    pressure_Pa: float = number(
        "Pa", 60e3, 105e3, "Absolute air pressure.", default=101325.0, typical="95000 to 103000"
    )
    pressure_u_Pa: float = number("Pa", 0.0, 10e3, "Standard uncertainty of the pressure.", default=200.0)
    relative_humidity: float = number("", 0.0, 1.0, "Relative humidity as a fraction.", default=0.4)
    relative_humidity_u: float = number("", 0.0, 0.5, "Standard uncertainty of the humidity.", default=0.1)
    surroundings_C: float | None = number(
        "°C",
        -80.0,
        150.0,
        "Temperature of the walls that the body radiates to; the air temperature if left out.",
        default=None,
    )


@dataclass(frozen=True, slots=True)
class Flow:
    """The undisturbed stream, by velocity, several readings of it, dynamic pressure or volume flow."""

    velocity_m_s: float | None = number(
        "m/s", 0.0, 120.0, "Velocity of the undisturbed stream.", default=None, typical="4 to 14"
    )
    velocity_readings_m_s: tuple[float, ...] = numbers(
        "m/s", 0.0, 120.0, "Several readings of the velocity; their mean is used.", typical="7.9, 8.1, 8.0"
    )
    dynamic_pressure_Pa: float | None = number(
        "Pa", 0.0, 9000.0, "Dynamic pressure of a Pitot tube.", default=None, typical="10 to 120"
    )
    dynamic_pressure_u_Pa: float = number(
        "Pa", 0.0, 900.0, "Standard uncertainty of the dynamic pressure.", default=0.5
    )
    flow_m3_s: float | None = number(
        "m³/s", 0.0, 100.0, "Volume flow through the duct.", default=None, typical="0.05 to 0.4"
    )
    flow_u_m3_s: float = number("m³/s", 0.0, 10.0, "Standard uncertainty of the volume flow.", default=0.002)
    velocity_end_m_s: float | None = number(
        "m/s", 0.0, 120.0, "Velocity after the run.", default=None, typical="4 to 14"
    )
    velocity_u_m_s: float = number(
        "m/s", 0.0, 20.0, "Standard uncertainty of the velocity.", default=0.1, typical="0.05 to 0.3"
    )
    duct_height_m: float | None = number(
        "m", 1e-3, 10.0, "Height of the duct, across the stream.", default=None, typical="0.15"
    )
    duct_width_m: float | None = number(
        "m", 1e-3, 10.0, "Width of the duct, along the body.", default=None, typical="0.15"
    )
    arrangement: str = choice(ARRANGEMENTS, "A single body, or a place in a bank of tubes.", default="single")
    pitch_transverse_m: float | None = number(
        "m", 1e-3, 5.0, "Distance between tubes across the stream.", default=None, typical="0.025"
    )
    pitch_longitudinal_m: float | None = number(
        "m", 1e-3, 5.0, "Distance between rows along the stream.", default=None, typical="0.025"
    )
    row: int | None = integer(1, 200, "Row of the heated body, 1 = first in the stream.", default=None)
    rows: int | None = integer(1, 200, "Number of rows in the bank.", default=None)


@dataclass(frozen=True, slots=True)
class Limits:
    """Where the checks draw their lines. Each default's source stands with the check that uses it."""

    target_U95_rel: float = number("", 0.001, 1.0, "Wanted expanded uncertainty of h, relative.", default=0.06)
    span_ratio_min: float = number(
        "", 1.05, 1000.0, "Smallest ratio of first to last excess temperature.", default=3.0
    )
    readings_min: int = integer(4, 10000, "Fewest readings in the fit.", default=12)
    air_drift_K: float = number("K", 0.0, 20.0, "Largest change of the air temperature in a run.", default=1.0)
    velocity_drift_rel: float = number("", 0.0, 1.0, "Largest change of the velocity in a run.", default=0.03)
    radiation_share: float = number("", 0.0, 1.0, "Largest share of radiation in the heat flow.", default=0.1)
    stem_share: float = number("", 0.0, 1.0, "Largest share of the stem loss in the heat flow.", default=0.1)
    richardson: float = number("", 0.0, 100.0, "Largest Gr/Re² for purely forced flow.", default=0.1)
    trimmed_share: float = number("", 0.0, 1.0, "Largest share of the record left out at the start.", default=0.25)
    doubtful_share: float = number("", 0.0, 1.0, "Largest share of readings in doubt.", default=0.1)


@dataclass(frozen=True, slots=True)
class Setup:
    """One bench, ready for a run; the sections and keys are those of SETUP.toml."""

    body: Body
    thermometer: Thermometer
    recording: Recording
    air: Surrounding
    flow: Flow
    limits: Limits = Limits()


SECTIONS: dict[str, type] = {
    "body": Body,
    "thermometer": Thermometer,
    "recording": Recording,
    "air": Surrounding,
    "flow": Flow,
    "limits": Limits,
}
