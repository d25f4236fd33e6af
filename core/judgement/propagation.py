"""Propagation of uncertainty by JCGM 100 (GUM): inputs with u, correlation and degrees of freedom to u, shares,
effective degrees of freedom, coverage factor and expanded uncertainty."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from math import floor, inf, sqrt

import numpy as np
from numpy.typing import NDArray

from core.judgement.student import t_quantile

Vector = NDArray[np.float64]
Model = Callable[[Vector], Vector]


@dataclass(frozen=True, slots=True)
class Input:
    """One input quantity: its estimate, standard uncertainty and degrees of freedom (infinite for a
    type B evaluation taken as exactly known, JCGM 100 G.4.3). `low` and `high` are the physical bounds that a
    Monte Carlo draw keeps to."""

    name: str
    value: float
    u: float
    unit: str = ""
    dof: float = inf
    low: float = -inf
    high: float = inf


@dataclass(frozen=True, slots=True)
class Expanded:
    """One output of a propagation. `contributions` are c_i·u_i (signed); `shares` the parts of the variance,
    c_i·Σ_j c_j·u(x_i, x_j) over u², which add to 1 with correlated inputs too (an input's share can then be
    negative)."""

    value: float
    u: float
    sensitivities: tuple[float, ...]
    contributions: tuple[float, ...]
    shares: tuple[float, ...]
    dof: float
    coverage_factor: float
    U: float


def covariance(inputs: Sequence[Input], correlations: Mapping[tuple[str, str], float] | None = None) -> Vector:
    """Covariance matrix of the inputs, shape (n, n), from their u and the correlation coefficients by name."""
    u = np.array([one.u for one in inputs])
    place = {one.name: i for i, one in enumerate(inputs)}
    matrix = np.diag(u**2)
    for (first, second), r in (correlations or {}).items():
        i, j = place[first], place[second]
        matrix[i, j] = matrix[j, i] = r * u[i] * u[j]
    return matrix


def sensitivities(model: Model, inputs: Sequence[Input]) -> Vector:
    """Partial derivatives of the outputs, shape (outputs, n), by central differences over ± u/10.

    JCGM 100:2008, 5.1.3 note 2 allows ± u; a tenth of it keeps a curved model's derivative local. An input with
    u = 0 keeps a zero column: it cannot contribute."""
    centre = np.array([one.value for one in inputs])
    columns = []
    for i, one in enumerate(inputs):
        if one.u == 0.0:
            columns.append(np.zeros_like(model(centre)))
            continue
        up, down = centre.copy(), centre.copy()
        up[i] = min(one.value + 0.1 * one.u, one.high)
        down[i] = max(one.value - 0.1 * one.u, one.low)
        columns.append((model(up) - model(down)) / (up[i] - down[i]))
    return np.stack(columns, axis=-1)


def effective_dof(contributions: Sequence[float], dofs: Sequence[float], u: float) -> float:
    """Effective degrees of freedom by the Welch–Satterthwaite formula.

    ν_eff = u⁴ / Σ (c_i u_i)⁴ / ν_i  (JCGM 100:2008, G.4.1, equation G.2b; for uncorrelated inputs: correlated
    ones are taken as if they were not, common practice)."""
    below = sum(part**4 / dof for part, dof in zip(contributions, dofs, strict=True) if part != 0.0)
    return inf if below == 0.0 else u**4 / below


def coverage_factor(dof: float, coverage: float = 0.95) -> float:
    """Coverage factor k = t_p(ν), ν cut to the whole number below (JCGM 100:2008, G.4.1, note 1)."""
    return t_quantile(coverage, dof if dof == inf or dof > 1e6 else max(1.0, floor(dof)))


def expand(value: float, row: Vector, matrix: Vector, dofs: Sequence[float], coverage: float = 0.95) -> Expanded:
    """One output's u, shares, ν_eff, k and U from its sensitivities `row` (n,) and the input covariance (n, n)."""
    joint = matrix @ row
    variance = float(row @ joint)
    u = sqrt(max(variance, 0.0))
    contributions = tuple(float(part) for part in row * np.sqrt(np.diag(matrix)))
    shares = tuple(float(part) for part in row * joint / variance) if variance > 0.0 else (0.0,) * len(row)
    dof = effective_dof(contributions, dofs, u)
    k = coverage_factor(dof, coverage)
    return Expanded(value, u, tuple(float(c) for c in row), contributions, shares, dof, k, k * u)


def propagate(
    model: Model,
    inputs: Sequence[Input],
    correlations: Mapping[tuple[str, str], float] | None = None,
    coverage: float = 0.95,
) -> tuple[tuple[Expanded, ...], Vector]:
    """Uncertainty of every output of a measurement model, and the outputs' covariance.

    u²(y) = Σ_i Σ_j c_i c_j u(x_i, x_j), first order.

    Parameters
    ----------
    model : function of the inputs, shape (n,), to the outputs, shape (outputs,) [any]
    inputs : sequence of n `Input` [any]
    correlations : correlation coefficients by pairs of input names; the rest are 0 [-]
    coverage : coverage probability of the expanded uncertainty [-]

    Returns
    -------
    tuple of `Expanded`, one an output, and the covariance of the outputs, shape (outputs, outputs)

    Notes
    -----
    Valid while the model is straight over a few u of each input; `montecarlo.simulate` tells whether it is.

    References
    ----------
    JCGM 100:2008, 5.2.2 equation 13, H.2 equation for the covariance of outputs, G.4.
    """
    values = np.atleast_1d(model(np.array([one.value for one in inputs])))
    rows = np.atleast_2d(sensitivities(model, inputs))
    matrix = covariance(inputs, correlations)
    dofs = [one.dof for one in inputs]
    outputs = tuple(expand(float(y), row, matrix, dofs, coverage) for y, row in zip(values, rows, strict=True))
    return outputs, rows @ matrix @ rows.T
