"""Gauss–Newton with bounded steps, on normal equations that a problem gives at each point."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from core.errors import NoAnswer

Array = NDArray[np.float64]

NOT_SETTLED = "The fit does not settle on these readings; check them, the mode and the air temperature."


@dataclass(frozen=True, slots=True)
class Settled:
    """Where the search came to rest: the point, the inverse of the last normal matrix, the rounds it took."""

    point: Array
    covariance: Array
    rounds: int


def gauss_newton(
    normal_equations: Callable[[Array], tuple[Array, Array]],
    guess: Array,
    largest_step: Array,
    tolerance: float,
    most_rounds: int,
) -> Settled:
    """The point at which the gradient of the normal equations vanishes.

    Parameters
    ----------
    normal_equations : point (p,) → normal matrix (p, p) and gradient (p,), in units of inverse variance
    guess : first point
    largest_step : bound on one step of each parameter, shape (p,)
    tolerance : the search rests when no step exceeds this share of its standard deviation
    most_rounds : the search rests after so many rounds at the latest

    Raises
    ------
    NoAnswer : the normal equations cannot be solved.
    """
    point = guess.copy()
    covariance = np.eye(len(guess))
    for done in range(1, most_rounds + 1):
        matrix, gradient = normal_equations(point)
        scale = np.sqrt(np.diag(matrix))
        if not np.all(np.isfinite(matrix)) or not np.all(np.isfinite(gradient)) or np.any(scale == 0.0):
            raise NoAnswer(NOT_SETTLED)
        covariance = inverse(matrix, scale)
        step = covariance @ gradient
        deviation = np.sqrt(np.maximum(np.diag(covariance), 1e-300))
        rests = np.max(np.abs(step) / deviation) < tolerance
        step *= min(1.0, float(np.min(largest_step / np.maximum(np.abs(step), 1e-300))))
        point = point + step
        if rests:
            return Settled(point, covariance, done)
    return Settled(point, covariance, most_rounds)


def inverse(matrix: Array, scale: Array) -> Array:
    """Inverse of a symmetric matrix, scaled by the roots of its diagonal; the pseudo-inverse where it has none."""
    outer = scale[:, None] * scale
    try:
        result: Array = np.linalg.inv(matrix / outer) / outer
    except np.linalg.LinAlgError:
        result = np.linalg.pinv(matrix / outer) / outer
    return result
