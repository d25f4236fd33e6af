"""Moist-air density against CIPM-2007, written out here from its paper.

Picard, Davis, Gläser and Fujii, Revised formula for the density of moist air (CIPM-2007), Metrologia 45 (2008)
149–155, equations 1–2 and appendix A1; stated for 15–27 °C and 60–110 kPa with u(ρ)/ρ = 22e-6 for the equation."""

from math import exp

import numpy as np
import pytest

from core.bench.air import air_properties


def cipm_2007(temperature_C, pressure_Pa, humidity, carbon_dioxide=0.0004):
    """The published formula, constants in its order, kg/m³."""
    T, t, p = temperature_C + 273.15, temperature_C, pressure_Pa
    p_sv = exp(1.2378847e-5 * T**2 - 1.9121316e-2 * T + 33.93711047 - 6.3431645e3 / T)
    x = humidity * (1.00062 + 3.14e-8 * p + 5.6e-7 * t**2) * p_sv / p
    Z = (
        1.0
        - p
        / T
        * (
            1.58123e-6
            - 2.9331e-8 * t
            + 1.1043e-10 * t**2
            + (5.707e-6 - 2.051e-8 * t) * x
            + (1.9898e-4 - 2.376e-6 * t) * x**2
        )
        + p**2 / T**2 * (1.83e-11 - 0.765e-8 * x**2)
    )
    M_a = 28.96546e-3 + 12.011e-3 * (carbon_dioxide - 0.0004)
    return p * M_a / (Z * 8.314472 * T) * (1.0 - x * (1.0 - 18.01528e-3 / M_a))


PUBLISHED = [
    (10.0, 730 * 133.322, 0.40, 1.1957, 1e-4),  # Gupta, Mass Metrology (2012), appendix, p. 205: 730 mmHg, 40 %
    (40.0, 760 * 133.322, 0.40, 1.1150, 1e-4),  # the same table: 760 mmHg, 40 %
    (20.0, 101325.0, 0.50, 1.199, 5e-4),  # widely quoted for a weighing room; from memory
]


@pytest.mark.parametrize(("temperature_C", "pressure_Pa", "humidity", "density", "last_digit"), PUBLISHED)
def test_density_gives_the_published_values(temperature_C, pressure_Pa, humidity, density, last_digit):
    """Tabulated values of CIPM-2007, to their last digit: by the formula as written here, and by the program."""
    assert cipm_2007(temperature_C, pressure_Pa, humidity) == pytest.approx(density, abs=last_digit)
    by_program = air_properties(temperature_C, pressure_Pa, humidity).density_kg_m3
    assert by_program == pytest.approx(density, abs=last_digit)


def test_density_agrees_with_cipm_2007_inside_its_range():
    """15–27 °C, 60–105 kPa, any humidity: closer than the 22e-6 that the formula itself claims."""
    worst = max(
        abs(air_properties(t, p, rh).density_kg_m3 / cipm_2007(t, p, rh) - 1.0)
        for t in np.linspace(15.0, 27.0, 7)
        for p in np.linspace(60e3, 105e3, 6)
        for rh in np.linspace(0.0, 1.0, 6)
    )
    print(f"density against CIPM-2007 inside its range, worst relative deviation: {worst:.1e}")
    assert worst < 5e-6
