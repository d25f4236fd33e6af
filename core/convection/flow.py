"""The stream: velocity from what was read, what a duct and a bank make of it at the body."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import expm1, hypot, inf, log1p, pi, sqrt

from core.bench.air import air_properties
from core.bench.body import thermal_body
from core.bench.setup import Setup
from core.errors import BadSetup, OutOfRange

HEAT_CAPACITY_RATIO = 1.4  # of air, diatomic


def velocity_from_dynamic_pressure_m_s(
    dynamic_pressure_Pa: float, density_kg_m3: float, pressure_Pa: float
) -> float:
    """Velocity by a Pitot tube, [m/s].

    V = √(2 γ/(γ − 1) · p/ρ · [(1 + Δp/p)^((γ−1)/γ) − 1]), which is √(2 Δp/ρ) for a slow stream.

    Parameters
    ----------
    dynamic_pressure_Pa : total minus static pressure [Pa]
    density_kg_m3 : density of the (moist) air of the stream [kg/m³]
    pressure_Pa : static pressure [Pa]

    Raises
    ------
    OutOfRange : a negative pressure difference (the hoses are exchanged), or a density or pressure of zero

    Notes
    -----
    Compressible and isentropic; the slow form is 0.04 % high at 20 m/s and 0.4 % at 60 m/s. The tube's own factor,
    misalignment and the viscous error below a tube Reynolds number of about 30 are not in it.

    References
    ----------
    ISO 3966:2020, Measurement of fluid flow in closed conduits, velocity area method with Pitot static tubes.
    """
    if dynamic_pressure_Pa < 0.0:
        raise OutOfRange(
            f"A dynamic pressure of {dynamic_pressure_Pa:g} Pa is negative: exchange the hoses, or zero the gauge."
        )
    if density_kg_m3 <= 0.0 or pressure_Pa <= 0.0:
        raise OutOfRange("A velocity from dynamic pressure needs a density and a pressure above zero.")
    exponent = (HEAT_CAPACITY_RATIO - 1.0) / HEAT_CAPACITY_RATIO
    rise = expm1(exponent * log1p(dynamic_pressure_Pa / pressure_Pa))
    return sqrt(2.0 / exponent * pressure_Pa / density_kg_m3 * rise)


def velocity_from_flow_m_s(flow_m3_s: float, height_m: float, width_m: float) -> float:
    """Mean velocity in a rectangular duct, flow over area, [m/s].

    Parameters
    ----------
    flow_m3_s : volume flow at the state of the stream [m³/s]
    height_m, width_m : inner sizes of the duct [m]

    Raises
    ------
    OutOfRange : a size that is not above zero

    Notes
    -----
    The mean over the section: in a developed duct flow the middle, where a body sits, is 10–25 % faster.
    """
    if height_m <= 0.0 or width_m <= 0.0:
        raise OutOfRange(
            "A velocity from volume flow needs the height and the width of the duct, both above zero."
        )
    return flow_m3_s / (height_m * width_m)


@dataclass(frozen=True, slots=True)
class Mean:
    """Mean of several readings, its standard uncertainty and degrees of freedom (0 for one reading)."""

    value: float
    u: float
    dof: int


def mean_of(readings: Sequence[float]) -> Mean:
    """Mean of repeated readings with the standard uncertainty s/√n from their scatter, [unit of the readings].

    Parameters
    ----------
    readings : one or more readings [any]

    Returns
    -------
    `Mean`; u is 0 with 0 degrees of freedom for one reading, which says nothing of scatter

    Raises
    ------
    OutOfRange : no reading

    References
    ----------
    JCGM 100:2008, 4.2.
    """
    n = len(readings)
    if n == 0:
        raise OutOfRange("A mean needs at least one reading.")
    mean = sum(readings) / n
    if n == 1:
        return Mean(mean, 0.0, 0)
    variance = sum((one - mean) ** 2 for one in readings) / (n - 1)
    return Mean(mean, sqrt(variance / n), n - 1)


def drift_rel(before: float, after: float) -> float:
    """Relative change from before the run to after it, (after − before) / mean of both, [-].

    Parameters
    ----------
    before, after : the reading before and after [any]
    """
    mean = 0.5 * (before + after)
    return 0.0 if mean == 0.0 else (after - before) / mean


def narrowest_velocity_m_s(
    velocity_m_s: float, diameter_m: float, transverse_m: float, longitudinal_m: float, staggered: bool
) -> float:
    """Velocity in the narrowest section of a bank, [m/s].

    V_max = V S_T / (S_T − D); in a staggered bank V S_T / (2 (S_D − D)) where the two diagonal gaps together are
    narrower, 2 (S_D − D) < S_T − D, with S_D = √(S_L² + (S_T/2)²).

    Parameters
    ----------
    velocity_m_s : velocity of the undisturbed stream [m/s]
    diameter_m : diameter of the tubes [m]
    transverse_m, longitudinal_m : pitches across and along the stream [m]
    staggered : whether every second row is shifted by half a pitch

    Raises
    ------
    OutOfRange : tubes would touch or overlap

    References
    ----------
    Žukauskas, Adv. Heat Transfer 8 (1972) 93–160. Incropera et al., 7th ed. (2011), equations 7.60–7.61.
    """
    gap = transverse_m - diameter_m
    if staggered:
        gap = min(gap, 2.0 * (hypot(longitudinal_m, 0.5 * transverse_m) - diameter_m))
    if gap <= 0.0:
        raise OutOfRange("The tubes of the bank would touch: give pitches larger than the diameter.")
    return velocity_m_s * transverse_m / gap


@dataclass(frozen=True, slots=True)
class Blockage:
    """What the walls of a duct do to the stream at one body: `ratio` of frontal to duct area, `factor` on the
    velocity, whether the formula holds there, and its source."""

    ratio: float
    factor: float
    in_range: bool
    source: str


DRAG = {"cylinder": 1.2, "block": 2.1, "sphere": 0.45}
"""Drag coefficients of a long cylinder, a square bar with a face to the stream, and a sphere, at Re of 1e3 to 1e5:
White, Fluid Mechanics, 7th ed. (2011), tables 7.2 and 7.3 and figure 7.16, from memory."""

BLOCKAGE_LIMIT = 0.2


def blockage(shape: str, across_m: float, span_m: float, height_m: float, width_m: float) -> Blockage:
    """Rise of the velocity at a single body because the walls hold the stream together.

    Long bodies: V/V∞ = 1 + ¼ C_D q + 0.82 q² (wake and body by images in the walls), q = d/h; sphere:
    V/V∞ = √(1 + 2.5 C_D q); q = frontal area over duct area, so that a body that leaves part of the width free
    counts for its part.

    Parameters
    ----------
    shape : "cylinder", "block" or "sphere"
    across_m : diameter, or side across the stream [m]
    span_m : length across the stream, the diameter for a sphere [m]
    height_m, width_m : inner sizes of the duct, the width along the body [m]

    Raises
    ------
    OutOfRange : the body fills the duct

    Notes
    -----
    Held valid up to q = 0.2 (common practice); beyond it the factor is still given, `in_range` False. For
    cylinders at subcritical Re the first form, or Maskell's, agreed best with measurements of all that Anthoine
    et al. compared. Taking the mean over the void, 1/(1 − π q/4), or the narrowest section, 1/(1 − q), instead
    gives a velocity 4.5 % and 7 % higher at q = 0.1: that much of Re is convention between laboratories.

    References
    ----------
    Allen and Vincenti, NACA Report 782 (1944). Maskell, ARC R&M 3400 (1963), for the sphere.
    Anthoine, Olivari and Portugaels, Wind Struct. 12 (2009) 541–551.
    """
    frontal = 0.25 * pi * across_m**2 if shape == "sphere" else across_m * min(span_m, width_m)
    ratio = frontal / (height_m * width_m)
    if across_m >= height_m or ratio >= 1.0:
        raise OutOfRange(
            "The body fills the duct: check the height and the width of the duct and the body's sizes."
        )
    drag = DRAG[shape]
    if shape == "sphere":
        factor, source = sqrt(1.0 + 2.5 * drag * ratio), "Maskell, ARC R&M 3400 (1963)"
    else:
        factor, source = 1.0 + 0.25 * drag * ratio + 0.82 * ratio**2, "Allen and Vincenti, NACA Report 782 (1944)"
    return Blockage(ratio, factor, ratio <= BLOCKAGE_LIMIT, source)


@dataclass(frozen=True, slots=True)
class Velocity:
    """Velocity of the undisturbed stream during the run, its standard uncertainty and degrees of freedom."""

    value_m_s: float
    u_m_s: float
    dof: float


def _stated(setup: Setup) -> Velocity:
    """Velocity before the run, by whichever of the four ways the set-up gives."""
    flow, air = setup.flow, setup.air
    if flow.velocity_m_s is not None:
        return Velocity(flow.velocity_m_s, flow.velocity_u_m_s, inf)
    if flow.velocity_readings_m_s:
        mean = mean_of(flow.velocity_readings_m_s)
        u = hypot(mean.u, flow.velocity_u_m_s)
        dof = inf if mean.u == 0.0 else mean.dof * (u / mean.u) ** 4
        return Velocity(mean.value, u, dof)
    if flow.dynamic_pressure_Pa is not None:
        density = air_properties(air.temperature_C, air.pressure_Pa, air.relative_humidity).density_kg_m3
        reading, u = flow.dynamic_pressure_Pa, flow.dynamic_pressure_u_Pa
        value, high, low = (
            velocity_from_dynamic_pressure_m_s(max(one, 0.0), density, air.pressure_Pa)
            for one in (reading, reading + u, reading - u)
        )
        return Velocity(value, 0.5 * (high - low), inf)
    if flow.flow_m3_s is not None:
        height, width = flow.duct_height_m, flow.duct_width_m
        if height is None or width is None:
            raise BadSetup("[flow] flow_m3_s needs duct_height_m and duct_width_m: give both.")
        value = velocity_from_flow_m_s(flow.flow_m3_s, height, width)
        return Velocity(value, velocity_from_flow_m_s(flow.flow_u_m3_s, height, width), inf)
    raise BadSetup("[flow] says nothing of the velocity: give velocity_m_s, or readings, or dynamic_pressure_Pa.")


def velocity_before_m_s(setup: Setup) -> float:
    """Velocity of the undisturbed stream as set before the run, [m/s].

    Parameters
    ----------
    setup : the bench

    Raises
    ------
    BadSetup : no way to the velocity is given
    """
    return _stated(setup).value_m_s


def undisturbed_velocity(setup: Setup) -> Velocity:
    """Velocity of the undisturbed stream during the run: the mean of before and after, where both are known.

    How it went from one to the other is not known, so a rectangular distribution between the two joins the
    uncertainty, |after − before|/√12 (JCGM 100:2008, 4.3.7).

    Parameters
    ----------
    setup : the bench

    Returns
    -------
    `Velocity` [m/s]

    Raises
    ------
    BadSetup : no way to the velocity is given
    """
    before, after = _stated(setup), setup.flow.velocity_end_m_s
    if after is None:
        return before
    u = hypot(before.u_m_s, abs(after - before.value_m_s) / sqrt(12.0))
    dof = inf if before.u_m_s == 0.0 else before.dof * (u / before.u_m_s) ** 4
    return Velocity(0.5 * (before.value_m_s + after), u, dof)


def blockage_of(setup: Setup) -> Blockage | None:
    """Blockage of the single body in the duct of a set-up; None in a bank, or where no duct height is given.

    Without a width the body is taken to span the duct.

    Parameters
    ----------
    setup : the bench
    """
    flow = setup.flow
    if flow.arrangement != "single" or flow.duct_height_m is None:
        return None
    body = thermal_body(setup.body)
    width = body.span_m if flow.duct_width_m is None else flow.duct_width_m
    return blockage(body.shape, body.across_m, body.span_m, flow.duct_height_m, width)


def velocity_at_body(setup: Setup) -> float:
    """Velocity that Re at the body is formed with: after blockage in a duct, in a bank that of the narrowest
    section, [m/s].

    Parameters
    ----------
    setup : the bench

    Raises
    ------
    BadSetup : no way to the velocity, or a bank without its pitches
    OutOfRange : the body fills the duct, or the tubes of the bank touch
    """
    undisturbed, flow = undisturbed_velocity(setup).value_m_s, setup.flow
    if flow.arrangement == "single":
        blocked = blockage_of(setup)
        return undisturbed if blocked is None else undisturbed * blocked.factor
    across, along = flow.pitch_transverse_m, flow.pitch_longitudinal_m
    if across is None or along is None:
        raise BadSetup(f"[flow] arrangement {flow.arrangement} needs pitch_transverse_m and pitch_longitudinal_m.")
    diameter = thermal_body(setup.body).across_m
    return narrowest_velocity_m_s(undisturbed, diameter, across, along, flow.arrangement == "staggered")
