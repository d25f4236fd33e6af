"""What published correlations expect of one body in one stream: the family that fits it, each with its band."""

from __future__ import annotations

from dataclasses import replace

from core.bench.air import TEMPERATURE_RANGE_C, air_properties
from core.bench.body import thermal_body
from core.bench.setup import Setup
from core.convection import bank, block, cylinder, sphere
from core.convection.correlation import Correlation, Expectation, expectation
from core.convection.flow import blockage_of, velocity_at_body
from core.convection.natural import still_air
from core.convection.numbers import film_temperature_C


def family(
    shape: str,
    across_m: float,
    along_m: float,
    arrangement: str = "single",
    pitch_transverse_m: float | None = None,
    pitch_longitudinal_m: float | None = None,
    rows: int | None = None,
    row: int | None = None,
) -> tuple[Correlation, ...]:
    """The published correlations for a body and its arrangement; none for other bodies than tubes in a bank.

    Parameters
    ----------
    shape : "cylinder", "sphere" or "block"
    across_m : diameter, or side across the stream [m]
    along_m : side of a block along the stream, the diameter of the others [m]
    arrangement : "single", "inline" or "staggered"
    pitch_transverse_m, pitch_longitudinal_m : pitches of a bank [m]
    rows : rows of a bank; None for 20 or more
    row : row of the one heated body, 1 = first in the stream; None for the mean over the bank

    Raises
    ------
    OutOfRange : the tubes of the bank would touch
    """
    if arrangement == "single":
        if shape == "block":
            return block.correlations(across_m, along_m)
        return sphere.CORRELATIONS if shape == "sphere" else cylinder.CORRELATIONS
    if shape != "cylinder" or pitch_transverse_m is None or pitch_longitudinal_m is None:
        return ()
    return bank.correlations(
        bank.Bank(
            arrangement == "staggered", pitch_transverse_m / across_m, pitch_longitudinal_m / across_m, rows, row
        )
    )


def expected(
    laws: tuple[Correlation, ...],
    length_m: float,
    velocity_m_s: float,
    surface_C: float,
    air_C: float,
    pressure_Pa: float,
    relative_humidity: float = 0.0,
) -> tuple[Expectation, ...]:
    """What each of a family's correlations expects, with properties at the temperatures of its source.

    Parameters
    ----------
    laws : the family, from `family`
    length_m : diameter, or side across the stream [m]
    velocity_m_s : velocity at the body: after blockage, in a bank that of the narrowest section [m/s]
    surface_C : temperature of the body's surface; beyond 120 °C the wall's properties are held at 120 °C and
        nothing is in range any more [°C]
    air_C : temperature of the undisturbed air [°C]
    pressure_Pa : absolute pressure [Pa]
    relative_humidity : of the undisturbed air [-]

    Returns
    -------
    tuple of `Expectation`; empty where there is no forced flow

    Raises
    ------
    OutOfRange : air outside its range
    """
    if velocity_m_s <= 0.0:
        return ()
    low, high = TEMPERATURE_RANGE_C
    film, stream, surface = (
        air_properties(temperature_C, pressure_Pa, relative_humidity, air_C)
        for temperature_C in (film_temperature_C(surface_C, air_C), air_C, min(max(surface_C, low), high))
    )
    found = (expectation(law, velocity_m_s, length_m, film, stream, surface) for law in laws)
    known = low <= surface_C <= high
    return tuple(one if known else replace(one, in_range=False) for one in found)


def expected_for(
    setup: Setup, surface_C: float, velocity_m_s: float | None = None, air_C: float | None = None
) -> tuple[Expectation, ...]:
    """What the published correlations expect on a bench; for a run in still air the law for still air.

    Parameters
    ----------
    setup : the bench
    surface_C : temperature of the body's surface [°C]
    velocity_m_s : velocity at the body; that of the set-up if left out [m/s]
    air_C : temperature of the undisturbed air; that of the set-up at mid-run if left out [°C]

    Returns
    -------
    tuple of `Expectation`; none is in range where the body blocks more of the duct than its correction holds for

    Raises
    ------
    BadSetup : the set-up lacks a size, a pitch or the velocity
    OutOfRange : air outside its range, a body that fills the duct, tubes that touch
    """
    body, flow, air = thermal_body(setup.body), setup.flow, setup.air
    along = body.across_m if setup.body.side_b_m is None else setup.body.side_b_m
    if air_C is None:
        end = air.temperature_C if air.temperature_end_C is None else air.temperature_end_C
        air_C = 0.5 * (air.temperature_C + end)
    if setup.recording.kind == "still-air":
        return (
            still_air(body.shape, body.across_m, along, surface_C, air_C, air.pressure_Pa, air.relative_humidity),
        )
    if velocity_m_s is None:
        velocity_m_s = velocity_at_body(setup)
    laws = family(
        body.shape,
        body.across_m,
        along,
        flow.arrangement,
        flow.pitch_transverse_m,
        flow.pitch_longitudinal_m,
        flow.rows,
        flow.row,
    )
    blocked = blockage_of(setup)
    if blocked is not None and not blocked.in_range:
        laws = tuple(replace(law, geometry_fits=False) for law in laws)
    return expected(laws, body.across_m, velocity_m_s, surface_C, air_C, air.pressure_Pa, air.relative_humidity)
