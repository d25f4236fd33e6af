"""The normal distribution on arrays, with NumPy alone."""

from __future__ import annotations

from math import pi, sqrt

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

_SQRT2 = sqrt(2.0)
_REACH = 9.0
_STEP = 1.0 / 512.0


def density(x: Array) -> Array:
    """Standard normal density."""
    return np.exp(-0.5 * x * x) / sqrt(2.0 * pi)


def _erfc_table() -> tuple[Array, Array, Array]:
    from math import erfc

    grid = np.arange(-_REACH, _REACH + _STEP / 2, _STEP)
    value = np.array([0.5 * erfc(-x / _SQRT2) for x in grid])
    return grid, value, density(grid)


_GRID, _VALUE, _SLOPE = _erfc_table()


def cdf(x: Array) -> Array:
    """Standard normal distribution function, any shape, absolute error below 1e-11.

    Cubic Hermite interpolation in a table of the exact function with step 1/512; the error bound of that
    interpolation is step⁴/384 times the largest fourth derivative (about 1.4)."""
    place = (np.minimum(np.maximum(x, -_REACH + _STEP), _REACH - _STEP) + _REACH) / _STEP
    index = place.astype(np.intp)
    s = place - index
    r = 1.0 - s
    result: Array = (
        _VALUE[index] * (1.0 + 2.0 * s) * r * r
        + _VALUE[index + 1] * (3.0 - 2.0 * s) * s * s
        + _STEP * s * r * (_SLOPE[index] * r - _SLOPE[index + 1] * s)
    )
    return result


def quantile(p: Array) -> Array:
    """Standard normal quantile for probabilities inside (0, 1), any shape, straight in the same table."""
    result: Array = np.interp(p, _VALUE, _GRID)
    return result
