"""How the same readings are fitted without thinking of the display: for comparison only.

Each takes the shown number as the temperature at its time, finds one exponential, and takes radiation (at the mean
temperature) and stem loss off, as a careful person would by hand."""

import lmfit
import numpy as np
from scipy.optimize import curve_fit

from core.bench.body import thermal_body

BOLTZMANN = 5.670374419e-8


def _coefficient(setup, readings, rate_s):
    body = thermal_body(setup.body)
    air = setup.air.temperature_C
    mean = float(np.mean(readings.reading_C))
    radiation = setup.body.emissivity * BOLTZMANN * ((mean + 273.15) ** 4 - (air + 273.15) ** 4) / (mean - air)
    return rate_s * body.capacity_J_K(mean) / body.area_m2 - setup.body.stem_loss_W_K / body.area_m2 - radiation


def _points(setup, readings):
    air = setup.air.temperature_C
    if setup.air.temperature_end_C is not None:
        air = (air + setup.air.temperature_end_C) / 2
    return np.array(readings.time_s), np.array(readings.reading_C), air


def straight_line(setup, readings):
    """h by a straight line through ln(T − T∞)."""
    time, shown, air = _points(setup, readings)
    return _coefficient(setup, readings, -np.polyfit(time, np.log(shown - air), 1)[0])


def by_curve_fit(setup, readings):
    """h by least squares on T with scipy's curve_fit, the asymptote taken as measured."""
    time, shown, air = _points(setup, readings)
    found, _ = curve_fit(lambda t, a, k: air + a * np.exp(-k * t), time, shown, p0=(shown[0] - air, 1.0 / time[-1]))
    return _coefficient(setup, readings, found[1])


def lmfit_exponential(time, shown, air):
    """One lmfit fit of a plain exponential with its asymptote free."""
    model = lmfit.Model(lambda t, asymptote, height, rate: asymptote + height * np.exp(-rate * t))
    return model.fit(shown, t=time, asymptote=air, height=shown[0] - air, rate=2.0 / time[-1])


def by_lmfit(setup, readings):
    """h by least squares on T with lmfit, the asymptote free."""
    time, shown, air = _points(setup, readings)
    return _coefficient(setup, readings, lmfit_exponential(time, shown, air).params["rate"].value)
