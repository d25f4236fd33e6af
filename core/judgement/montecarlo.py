"""Propagation of distributions by JCGM 101: the judge of the straight-line budget, run on demand."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from math import isinf

import numpy as np

from core.judgement.propagation import Input, Model, Vector, covariance


@dataclass(frozen=True, slots=True)
class Distribution:
    """What a Monte Carlo says of one output: mean, standard deviation and the shortest or symmetric 95 %
    interval's ends, over `draws` draws."""

    mean: float
    u: float
    low: float
    high: float
    draws: int

    @property
    def half_width(self) -> float:
        """Half the width of the coverage interval, to hold against an expanded uncertainty."""
        return 0.5 * (self.high - self.low)


def draw(
    inputs: Sequence[Input],
    draws: int,
    generator: np.random.Generator,
    correlations: Mapping[tuple[str, str], float] | None = None,
) -> Vector:
    """Draws of all inputs, shape (draws, n): joint normal for the correlated and the exactly known, scaled and
    shifted t with ν degrees of freedom for a type A estimate (JCGM 101:2008, 6.4.7, 6.4.8 and 6.4.9.4).

    A draw outside an input's physical bounds is folded back at the bound."""
    matrix = covariance(inputs, correlations)
    values, vectors = np.linalg.eigh(matrix)
    root = vectors * np.sqrt(np.clip(values, 0.0, None))
    sample: Vector = generator.standard_normal((draws, len(inputs))) @ root.T
    for i, one in enumerate(inputs):
        if not isinf(one.dof):
            sample[:, i] *= np.sqrt(one.dof / generator.chisquare(one.dof, draws))
        sample[:, i] += one.value
        sample[:, i] = np.where(sample[:, i] < one.low, 2 * one.low - sample[:, i], sample[:, i])
        sample[:, i] = np.where(sample[:, i] > one.high, 2 * one.high - sample[:, i], sample[:, i])
    return sample


def simulate(
    model: Model,
    inputs: Sequence[Input],
    *,
    seed: int,
    draws: int = 20_000,
    correlations: Mapping[tuple[str, str], float] | None = None,
    coverage: float = 0.95,
) -> tuple[Distribution, ...]:
    """Distribution of every output of a measurement model.

    Parameters
    ----------
    model : function of the inputs, shape (n,), to the outputs, shape (outputs,) [any]
    inputs : sequence of n `Input` [any]
    seed : seed of the generator, so that a result can be had again [-]
    draws : number of draws [-]
    correlations : correlation coefficients by pairs of input names [-]
    coverage : coverage probability of the interval, probabilistically symmetric [-]

    Returns
    -------
    tuple of `Distribution`, one an output

    References
    ----------
    JCGM 101:2008, Propagation of distributions using a Monte Carlo method, clauses 6 and 7.
    """
    sample = draw(inputs, draws, np.random.default_rng(seed), correlations)
    results = np.array([np.atleast_1d(model(row)) for row in sample])
    low, high = np.quantile(results, [(1 - coverage) / 2, (1 + coverage) / 2], axis=0)
    return tuple(
        Distribution(float(m), float(s), float(a), float(b), draws)
        for m, s, a, b in zip(results.mean(axis=0), results.std(axis=0, ddof=1), low, high, strict=True)
    )
