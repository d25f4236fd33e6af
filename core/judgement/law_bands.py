"""The published correlations over a range of speeds, to stand behind the law of a series."""

from __future__ import annotations

from dataclasses import dataclass

from core.convection.expected import expected_for
from core.judgement.answer import Answer

STEPS = 41


@dataclass(frozen=True, slots=True)
class LawBand:
    """One correlation over Re: `reynolds` and `nusselt`, shape (n,), by film properties, as the runs have them;
    `in_range`, shape (n,), where its author vouches for it; `band_rel` is its stated accuracy."""

    correlation: str
    source: str
    band_rel: float
    reynolds: tuple[float, ...]
    nusselt: tuple[float, ...]
    in_range: tuple[bool, ...]


def law_bands(answer: Answer, lowest_reynolds: float, highest_reynolds: float) -> tuple[LawBand, ...]:
    """What the correlations for this run's body and flow expect from one Reynolds number to another.

    Surface and air temperature are the run's; each correlation takes its properties where its source says, and its
    h is then written as a Nusselt number by the properties of the run, so that all curves and runs share one axis.

    Parameters
    ----------
    answer : one run in forced flow [any]
    lowest_reynolds, highest_reynolds : the range [-]

    Returns
    -------
    tuple of LawBand; empty for a run without a Reynolds number
    """
    if answer.reynolds is None or answer.nusselt is None or not answer.velocity_m_s:
        return ()
    per_speed = answer.reynolds / answer.velocity_m_s
    nusselt_per_h = answer.nusselt / answer.h_W_m2K
    ratio = (highest_reynolds / lowest_reynolds) ** (1.0 / (STEPS - 1))
    grid = [lowest_reynolds * ratio**i for i in range(STEPS)]
    columns = [expected_for(answer.setup, answer.fit.body_mean_C, reynolds / per_speed) for reynolds in grid]
    return tuple(
        LawBand(
            correlation=row[0].correlation,
            source=row[0].source,
            band_rel=row[0].band_rel,
            reynolds=tuple(grid),
            nusselt=tuple(one.h_W_m2K * nusselt_per_h for one in row),
            in_range=tuple(one.in_range for one in row),
        )
        for row in zip(*columns, strict=True)
    )
