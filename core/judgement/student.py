"""Student's t and chi-square: the two distributions that judgement needs, with NumPy and the standard library alone."""

from __future__ import annotations

from math import erfc, exp, isinf, lgamma, log, log1p, pi, sqrt

_TINY = 1e-300
_CLOSE = 1e-15


def _beta_fraction(a: float, b: float, x: float) -> float:
    """Continued fraction of the incomplete beta function by the modified Lentz method (DLMF 8.17.22)."""
    c, d = 1.0, 1.0 - (a + b) * x / (a + 1.0)
    d = 1.0 / (d if abs(d) > _TINY else _TINY)
    result = d
    for m in range(1, 400):
        for numerator in (
            m * (b - m) * x / ((a + 2 * m - 1.0) * (a + 2 * m)),
            -(a + m) * (a + b + m) * x / ((a + 2 * m) * (a + 2 * m + 1.0)),
        ):
            d = 1.0 + numerator * d
            d = 1.0 / (d if abs(d) > _TINY else _TINY)
            c = 1.0 + numerator / c
            c = c if abs(c) > _TINY else _TINY
            result *= d * c
        if abs(d * c - 1.0) < _CLOSE:
            break
    return result


def _incomplete_beta(a: float, b: float, x: float) -> float:
    """Regularised incomplete beta function I_x(a, b), 0 ≤ x ≤ 1."""
    if x <= 0.0 or x >= 1.0:
        return min(max(x, 0.0), 1.0)
    front = exp(lgamma(a + b) - lgamma(a) - lgamma(b) + a * log(x) + b * log(1.0 - x))
    if x < (a + 1.0) / (a + b + 2.0):
        return front * _beta_fraction(a, b, x) / a
    return 1.0 - front * _beta_fraction(b, a, 1.0 - x) / b


def t_tail(t: float, dof: float) -> float:
    """Probability that |T| exceeds `t` ≥ 0 for Student's t with `dof` degrees of freedom.

    Parameters
    ----------
    t : float, size of the statistic [-]
    dof : float, degrees of freedom, may be infinite (normal distribution) [-]

    Returns
    -------
    float, two-sided tail probability [-]

    References
    ----------
    NIST Digital Library of Mathematical Functions, 8.17 (incomplete beta function); JCGM 100:2008, G.3.
    """
    if isinf(dof):
        return erfc(t / sqrt(2.0))
    if t * t < dof:
        return 1.0 - _incomplete_beta(0.5, dof / 2.0, t * t / (dof + t * t))
    return _incomplete_beta(dof / 2.0, 0.5, dof / (dof + t * t))


def t_quantile(coverage: float, dof: float) -> float:
    """The t that covers the fraction `coverage` between −t and t.

    Parameters
    ----------
    coverage : float, wanted coverage probability, between 0 and 1 [-]
    dof : float, degrees of freedom ≥ 1, may be infinite [-]

    Returns
    -------
    float, the quantile t_p(ν) of JCGM 100:2008, table G.2 [-]

    Raises
    ------
    ValueError if the coverage does not lie between 0 and 1 or `dof` is not positive

    Examples
    --------
    >>> round(t_quantile(0.95, 10), 2), round(t_quantile(0.99, 16), 2), round(t_quantile(0.95, 1e9), 2)
    (2.23, 2.92, 1.96)

    References
    ----------
    JCGM 100:2008, Evaluation of measurement data (GUM), G.3 and table G.2.
    """
    if not 0.0 < coverage < 1.0 or not dof > 0.0:
        raise ValueError(f"Coverage must lie in 0 to 1 and degrees of freedom above 0, not at {coverage}, {dof}.")
    tail = 1.0 - coverage
    low, high = 0.0, 1.0
    while t_tail(high, dof) > tail:
        low, high = high, 2.0 * high
    t = 0.5 * (low + high)
    for _ in range(100):
        excess = t_tail(t, dof) - tail
        low, high = (t, high) if excess > 0.0 else (low, t)
        newton = t + excess / (2.0 * _density(t, dof))
        before, t = t, newton if low < newton < high else 0.5 * (low + high)
        if abs(t - before) <= 1e-14 * t:
            break
    return t


def _density(t: float, dof: float) -> float:
    """Density of Student's t."""
    if isinf(dof):
        return exp(-0.5 * t * t) / sqrt(2.0 * pi)
    scale = lgamma((dof + 1.0) / 2.0) - lgamma(dof / 2.0) - 0.5 * log(dof * pi)
    return exp(scale - (dof + 1.0) / 2.0 * log1p(t * t / dof))


def chi_square_tail(x: float, dof: int) -> float:
    """Probability that a chi-square with `dof` degrees of freedom exceeds `x`.

    Parameters
    ----------
    x : float, the statistic, ≥ 0 [-]
    dof : int, degrees of freedom ≥ 1 [-]

    Returns
    -------
    float, upper tail probability [-]

    Examples
    --------
    >>> round(chi_square_tail(3.841459, 1), 4), round(chi_square_tail(9.487729, 4), 4)
    (0.05, 0.05)

    References
    ----------
    NIST Digital Library of Mathematical Functions, 8.4.10 and 8.4.12: closed sums for half-integer order.
    """
    if x <= 0.0:
        return 1.0
    half = x / 2.0
    if dof % 2:
        total, term, order = erfc(sqrt(half)), exp(-half) * sqrt(half) / (0.5 * sqrt(pi)), 1.5
    else:
        total, term, order = exp(-half), exp(-half) * half, 2.0
    for _ in range((dof - 1) // 2):
        total += term
        term *= half / order
        order += 1.0
    return min(total, 1.0)
