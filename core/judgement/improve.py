"""What to improve next on the bench, in words, from the uncertainty budget."""

from __future__ import annotations

from collections.abc import Sequence
from math import sqrt

from core.judgement.answer import BudgetLine

_CALIPER = "Measure it at several places with a micrometer, and give the mean and its uncertainty."
_ADVICE = {
    "diameter": _CALIPER,
    "length": _CALIPER,
    "side a": _CALIPER,
    "side b": _CALIPER,
    "side c": _CALIPER,
    "mass": "Weigh the body on a finer balance.",
    "density": "Weigh the body; the mass then takes the place of density times volume.",
    "heat capacity": "Take the value of this very alloy from its data sheet, or have a piece of it measured.",
    "conductivity": "Take the value of this very alloy from its data sheet, or use a thinner body.",
    "readings and their fit": "Start hotter, record longer, or use a display with a finer step.",
    "thermometer offset": "Have the thermometer calibrated near 30 and 90 °C.",
    "thermometer gain": "Have the thermometer calibrated near 30 and 90 °C.",
    "air temperature": "Hold both thermometers in the same air before the run, and enter the compared value.",
    "emissivity": "Polish the body, or measure its emissivity.",
    "stem loss": "Record a run in still air with this holder; it measures the stem loss.",
    "tap delay": "Measure the mean delay of your tap, or read on a beat.",
    "velocity": "Traverse the duct and average several readings of a calibrated anemometer.",
    "pressure": "Read the pressure from a barometer at the bench.",
    "humidity": "Read the humidity at the bench.",
}


def next_improvement(budget: Sequence[BudgetLine], h_U95_rel: float) -> str:
    """The input that is worth the most work, what to do, and what halving its uncertainty would bring.

    Parameters
    ----------
    budget : lines of the budget of h, largest share first [any]
    h_U95_rel : relative expanded uncertainty of h [-]

    Returns
    -------
    str, one or two sentences
    """
    if not budget or budget[0].share <= 0.0:
        return "No input has an uncertainty, so none is worth work; check that none was set to 0 by mistake."
    first = budget[0]
    halved = h_U95_rel * sqrt(1.0 - 0.75 * first.share)
    return (
        f"The {first.input} makes {100 * first.share:.0f} % of the variance. {_ADVICE[first.input]} "
        f"With half its uncertainty h would be sure to ± {100 * halved:.1f} %, not ± {100 * h_U95_rel:.1f} %."
    )
