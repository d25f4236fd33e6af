"""A run in still air measures what holder and stem carry away: what the readings tell where θ^(1/4) holds exactly.

What nobody knows of natural convection comes on top (tests/judgement)."""

import numpy as np
import pytest

from core.bench.setup import Body, Flow, Recording, Setup, Surrounding, Thermometer
from core.cooling.estimator import fit_cooling
from core.cooling.model import natural_W_m2K
from core.cooling.prior import NATURAL_SCATTER
from core.cooling.simulator import Truth, simulate

STEM_W_K = 0.015
BENCH = Setup(
    Body("cylinder", diameter_m=0.016, length_m=0.11, material="brass", emissivity=0.06, stem_loss_W_K=STEM_W_K),
    Thermometer(1.0, refresh_s=0.7, accuracy_K=0.0),
    Recording("change", kind="still-air"),
    Surrounding(23.0, temperature_u_K=0.0),
    Flow(),
)


def still_run(seed):
    scale = np.exp(NATURAL_SCATTER * np.random.default_rng(seed).normal())
    return simulate(Truth(BENCH, scale * natural_W_m2K(BENCH) * 67.0**0.25), seed)


def test_the_stem_loss_lies_within_its_stated_uncertainty():
    score = []
    for seed in range(30):
        fit = fit_cooling(still_run(seed), BENCH)
        score.append((fit.stem_loss_W_K - STEM_W_K) / fit.stem_loss_u_W_K)
        assert fit.stem_loss_u_W_K < 0.04 * STEM_W_K
    assert np.mean(np.abs(score) < 1.96) >= 0.85
    assert np.sqrt(np.mean(np.square(score))) < 1.4


def test_natural_convection_is_found_too():
    fit = fit_cooling(simulate(Truth(BENCH, 10.0), 1), BENCH)
    excess = fit.body_mean_C - fit.asymptote_C
    assert fit.h_W_m2K == pytest.approx(10.0 * (excess / 67.0) ** 0.25, rel=2e-3)
