"""A straight line through points whose errors lie in both coordinates and are correlated from point to point:
the mathematics of Nu = C·Re^m·Pr^(1/3) on logarithmic axes."""

from __future__ import annotations

from dataclasses import dataclass
from math import sqrt

import numpy as np

from core.errors import NoAnswer
from core.judgement.propagation import Vector
from core.judgement.student import chi_square_tail

SIGNIFICANCE = 0.05  # chi-square above which scatter beyond the stated uncertainties is taken as real
_FLOOR = 1e-12  # variance below which an independent error is taken as zero; keeps the weights finite


@dataclass(frozen=True, slots=True)
class Line:
    """y = intercept + slope·x. `covariance` of (intercept, slope), shape (2, 2); `residuals` y − line, shape (n,);
    `scatter` the standard deviation added to each y because the points scatter more than their uncertainties
    say, 0 where they do not; `chi_square` of the points before that, with n − 2 degrees of freedom."""

    intercept: float
    slope: float
    covariance: Vector
    residuals: Vector
    chi_square: float
    scatter: float


def line_covariance(x: Vector, slope: float, joint: Vector, scatter: float = 0.0) -> Vector:
    """Covariance of (intercept, slope), shape (2, 2), from points at abscissae `x` with errors `joint`."""
    design = np.stack([np.ones(len(x)), x], axis=1)
    return _inverse(design.T @ _weight(slope, joint, scatter) @ design)


def _inverse(matrix: Vector) -> Vector:
    return np.asarray(np.linalg.inv(matrix), dtype=np.float64)


def _weight(slope: float, joint: Vector, scatter: float) -> Vector:
    n = len(joint) // 2
    xx, xy, yy = joint[:n, :n], joint[:n, n:], joint[n:, n:]
    return _inverse(yy - slope * (xy + xy.T) + slope**2 * xx + (scatter**2 + _FLOOR) * np.eye(n))


def _solve(x: Vector, y: Vector, joint: Vector, scatter: float) -> tuple[float, float, Vector, float]:
    """Intercept, slope, their covariance and chi-square, at a given extra scatter of y."""
    n = len(x)
    xx, xy = joint[:n, :n], joint[:n, n:]
    observed = np.stack([np.ones(n), x], axis=1)
    slope = float(np.polyfit(x, y, 1)[0])
    intercept = float(np.mean(y) - slope * np.mean(x))
    for _ in range(100):
        weight = _weight(slope, joint, scatter)
        residual = y - intercept - slope * x
        adjusted = x - (xy - slope * xx) @ weight @ residual
        design = np.stack([np.ones(n), adjusted], axis=1)
        weighted = design.T @ weight
        before = slope
        intercept, slope = (float(one) for one in np.linalg.solve(weighted @ observed, weighted @ y))
        if abs(slope - before) <= 1e-13 * max(1.0, abs(slope)):
            break
    residual = y - intercept - slope * x
    return intercept, slope, _inverse(weighted @ design), float(residual @ weight @ residual)


def fit_line(x: Vector, y: Vector, joint: Vector) -> Line:
    """Straight line by generalised least squares with errors in both variables.

    Minimises r^T Ω(b)⁻¹ r, r = y − a − b·x, Ω(b) = V_yy − b (V_xy + V_yx) + b² V_xx, by stepping to the zero of
    its gradient with the adjusted abscissae x̂ = x − (V_xy − b V_xx) Ω⁻¹ r. For independent points this is York's
    method; errors that points share are carried in full, so they widen the intercept or the slope and are never
    averaged away. Where chi-square says, at the 5 % level, that the points scatter more than their uncertainties,
    an independent scatter of y is added until chi-square equals its expectation (Mandel and Paule).

    Parameters
    ----------
    x, y : coordinates of the points, shape (n,), n ≥ 2 [-]
    joint : covariance of the errors, ordered (x_1 … x_n, y_1 … y_n), shape (2 n, 2 n) [-]

    Returns
    -------
    Line

    Raises
    ------
    NoAnswer if the points do not hold two different abscissae

    References
    ----------
    York, Evensen, López Martínez and De Basabe Delgado, Am. J. Phys. 72 (2004) 367–375, equations 13.
    Paule and Mandel, J. Res. Natl. Bur. Stand. 87 (1982) 377–385 (extra scatter).
    ISO/TS 28037:2010, clause 10 (straight line, errors in both variables, full covariance).
    """
    n = len(x)
    if n < 2 or float(np.ptp(x)) < 1e-9:
        raise NoAnswer("A law over speeds needs runs at two different speeds at least; measure one more speed.")
    intercept, slope, spread, chi_square = _solve(x, y, joint, 0.0)
    scatter = 0.0
    if n > 2 and chi_square_tail(chi_square, n - 2) < SIGNIFICANCE:
        low, high = 0.0, 2.0 * float(np.std(y - intercept - slope * x)) * sqrt(n / (n - 2)) + 1e-9
        while _solve(x, y, joint, high)[3] > n - 2:
            high *= 2.0
        for _ in range(60):
            scatter = 0.5 * (low + high)
            if _solve(x, y, joint, scatter)[3] > n - 2:
                low = scatter
            else:
                high = scatter
        intercept, slope, spread, _ = _solve(x, y, joint, scatter)
    return Line(intercept, slope, spread, y - intercept - slope * x, chi_square, scatter)
