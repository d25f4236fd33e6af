"""Which of several published correlations a bench is held against."""

from __future__ import annotations

from collections.abc import Sequence

from core.convection.correlation import Expectation


def middle(expected: Sequence[Expectation]) -> Expectation | None:
    """The correlation whose h lies in the middle of those that hold here, the lower of two; None where none holds.

    The middle one is the least swayed by a single author's wind tunnel (the median as a robust choice: Huber and
    Ronchetti, Robust Statistics, 2nd ed. (2009), 1.2)."""
    valid = sorted((one for one in expected if one.in_range), key=lambda one: one.h_W_m2K)
    return valid[(len(valid) - 1) // 2] if valid else None
