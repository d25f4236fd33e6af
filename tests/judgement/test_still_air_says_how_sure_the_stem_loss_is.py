"""A run in still air gives the stem loss with an uncertainty that takes in what nobody knows of natural convection.

`python -m tests.bench.still_air_table` does the same at length: 200 runs of each kind."""

from dataclasses import replace

import numpy as np
import pytest

from core.cooling.estimator import fit_cooling
from core.cooling.simulator import Truth, simulate
from core.errors import NoAnswer
from core.judgement.stem import stem_loss
from tests.bench.still_air_table import BALL, ROD, Row, bench, measure


@pytest.mark.parametrize("law", ["quarter", "published"])
@pytest.mark.parametrize(("body", "stem_W_K"), [(ROD, 0.015), (BALL, 0.01)], ids=["rod", "ball"])
def test_the_truth_lies_within_the_stated_uncertainty_whatever_law_holds(body, stem_W_K, law):
    """Level of convection, emissivity, heat capacity and air drawn; U95 misses at most one run in ten."""
    error, u = measure(Row("", bench(body, stem_W_K), law), range(10))
    assert np.count_nonzero(np.abs(error) > 2.0 * u) <= 1
    assert np.all(u < 0.25 * stem_W_K)


def test_the_readings_alone_would_be_far_too_sure():
    """With the published law true, the fit's own uncertainty misses the truth in every run."""
    setup = bench()
    fits = [fit_cooling(simulate(_published(seed), seed), setup) for seed in range(3)]
    assert all(abs(fit.stem_loss_W_K - 0.015) > 10.0 * fit.stem_loss_u_W_K for fit in fits)
    assert stem_loss(fits[0], setup).parts[0][0] == "natural convection"


def _published(seed):
    from tests.bench.still_air_table import truth

    return truth(Row("", bench(), "published"), seed)


@pytest.mark.parametrize(
    ("part", "section", "changes"),
    [
        ("emissivity", "body", {"emissivity": 0.08}),
        ("heat capacity", "body", {"mass_kg": 0.1874 * 1.01}),
        ("air temperature", "air", {"temperature_C": 23.1, "temperature_end_C": 23.4}),
    ],
)
def test_each_part_is_what_a_new_fit_would_move(part, section, changes):
    body = {"emissivity_u": 0.02, "heat_capacity_u_rel": 0.01, "mass_u_kg": 0.0}
    setup = bench(replace(ROD, **body))
    setup = replace(setup, air=replace(setup.air, temperature_u_K=0.1))
    readings = simulate(Truth(setup, 8.0, end_C=34.0), 3)
    moved = replace(setup, **{section: replace(getattr(setup, section), **changes)})
    fit = fit_cooling(readings, setup)
    shift = fit_cooling(readings, moved).stem_loss_W_K - fit.stem_loss_W_K
    assert dict(stem_loss(fit, setup).parts)[part] == pytest.approx(abs(shift), rel=0.05, abs=5e-6)


def test_a_run_with_the_fan_on_measures_no_stem_loss():
    setup = bench()
    flow = replace(setup.flow, velocity_m_s=8.0)
    forced = replace(setup, recording=replace(setup.recording, kind="forced"), flow=flow)
    with pytest.raises(NoAnswer, match="still air"):
        stem_loss(fit_cooling(simulate(Truth(forced, 80.0), 1), forced), forced)
