"""Functions of time as polynomials on Chebyshev–Lobatto nodes.

Trefethen, Spectral Methods in MATLAB, SIAM 2000, chapters 6 (differentiation) and 12 (integration)."""

from __future__ import annotations

from functools import cache
from math import cos, pi

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

NODES = 20


@cache
def nodes() -> Array:
    """The nodes on [−1, 1], ascending, shape (NODES,)."""
    return np.array([-cos(pi * k / (NODES - 1)) for k in range(NODES)])


@cache
def _to_coefficients() -> Array:
    return np.asarray(np.linalg.inv(np.polynomial.chebyshev.chebvander(nodes(), NODES - 1)), dtype=np.float64)


@cache
def integration() -> Array:
    """Matrix Q with (Q f)(x) = ∫ from −1 to x of f, on the nodes, shape (NODES, NODES)."""
    columns = [
        np.polynomial.chebyshev.chebval(nodes(), np.polynomial.chebyshev.chebint(np.eye(NODES)[k], lbnd=-1.0))
        for k in range(NODES)
    ]
    return np.array(columns).T @ _to_coefficients()


@cache
def differentiation() -> Array:
    """Matrix D with (D f)(x) = df/dx on the nodes, shape (NODES, NODES)."""
    columns = [
        np.polynomial.chebyshev.chebval(nodes(), np.polynomial.chebyshev.chebder(np.eye(NODES)[k]))
        for k in range(NODES)
    ]
    return np.array(columns).T @ _to_coefficients()


def interpolation(x: Array) -> Array:
    """Matrix that takes values on the nodes to values at `x` in [−1, 1], shape (len(x), NODES)."""
    return np.cos(np.arccos(x)[:, None] * np.arange(NODES)) @ _to_coefficients()
