"""While a run goes on, a tap is added to the fit that stands, and tells the same as a fit made anew."""

from dataclasses import replace

import numpy as np
import pytest

from core.bench.readings import Readings
from core.bench.setup import Body, Flow, Recording, Setup, Surrounding, Thermometer
from core.cooling import estimator
from core.cooling.estimator import fit_cooling
from core.cooling.simulator import Hand, Truth, simulate

ROD = Body("cylinder", diameter_m=0.016, length_m=0.11, material="brass", emissivity=0.1)
STEADY = Setup(
    ROD,
    Thermometer(resolution_K=1.0, accuracy_K=0.2, refresh_s=0.7),
    Recording("change"),
    Surrounding(23.0),
    Flow(velocity_m_s=8.0),
)
SCATTERED = replace(STEADY, recording=Recording("change", tap_jitter_s=0.3))  # the display's clock is not heard
BENCHES = {"the display's clock is heard": STEADY, "each tap stands alone": SCATTERED}


def run_of(setup, seed, hand=None):
    return simulate(Truth(setup, 90.0, 90.3, 31.0), seed, hand)


def first(readings, count):
    return Readings(readings.time_s[:count], readings.reading_C[:count])


def tapped_through(readings, setup):
    """The fits after each tap, each begun from the one before."""
    fit, fits = None, {}
    for count in range(12, len(readings) + 1):
        fits[count] = fit = fit_cooling(first(readings, count), setup, warm=fit)
    return fits


@pytest.fixture
def made_anew(monkeypatch):
    """How often a fit was made anew and not followed."""
    calls, solve = [], estimator.solve
    monkeypatch.setattr(estimator, "solve", lambda *words: calls.append(1) or solve(*words))
    return calls


@pytest.mark.parametrize("bench", BENCHES)
def test_followed_fits_tell_what_fits_made_anew_tell(bench):
    setup = BENCHES[bench]
    off, wider = [], []
    for seed in range(4):
        readings = run_of(setup, seed)
        for count, fit in tapped_through(readings, setup).items():
            anew = fit_cooling(first(readings, count), setup)
            if fit.window_s == anew.window_s:
                off.append((fit.h_W_m2K - anew.h_W_m2K) / anew.h_u_W_m2K)
                wider.append(fit.h_u_W_m2K / anew.h_u_W_m2K)
    assert len(off) > 150
    assert np.sqrt(np.mean(np.square(off))) < 0.15
    assert np.max(np.abs(off)) < 0.7
    assert np.median(wider) == pytest.approx(1.0, abs=0.04)
    assert np.quantile(wider, 0.02) > 0.75


@pytest.mark.parametrize("bench", BENCHES)
def test_most_taps_are_followed(bench, made_anew):
    """Made anew are the searches for the start at each eighth row, and few more."""
    readings = run_of(BENCHES[bench], 7)
    fits = tapped_through(readings, BENCHES[bench])
    assert len(made_anew) < 0.35 * len(fits)


def test_the_rest_of_the_answer_follows_too():
    """Residuals, curve and the share of each row stand for all readings, the new ones as well."""
    readings = run_of(STEADY, 3)
    before = fit_cooling(first(readings, 49), STEADY)
    fit, anew = (fit_cooling(first(readings, 50), STEADY, warm=warm) for warm in (before, None))
    assert len(fit.used) == len(fit.residual_s) == 50
    assert fit.window_s == anew.window_s
    assert fit.curve_time_s == anew.curve_time_s
    assert fit.curve_C == pytest.approx(anew.curve_C, abs=0.02)
    assert fit.residual_s[1:] == pytest.approx(anew.residual_s[1:], abs=0.03)
    assert fit.refresh_found_s == pytest.approx(anew.refresh_found_s, abs=1e-3)
    assert fit.h_per_lag_W_m2Ks == pytest.approx(anew.h_per_lag_W_m2Ks, rel=0.02)


def test_a_late_tap_is_named_as_soon_as_it_came():
    hand = Hand(STEADY.recording.tap_lag_s, STEADY.recording.tap_jitter_s, late={45: 3.0})
    readings = run_of(STEADY, 5, hand)
    fits = tapped_through(first(readings, 50), STEADY)
    for count in (46, 47, 50):
        assert [(one.row, one.cause) for one in fits[count].left_out] == [(45, "late")]
    anew = fit_cooling(first(readings, 50), STEADY)
    assert fits[50].h_W_m2K == pytest.approx(anew.h_W_m2K, abs=0.5 * anew.h_u_W_m2K)


@pytest.mark.parametrize(
    ("what", "setup", "change"),
    [
        ("a tap taken back", STEADY, lambda r: first(r, 40)),
        ("another number", STEADY, lambda r: replace(r, reading_C=(*r.reading_C[:20], 99.0, *r.reading_C[21:]))),
        ("another bench", SCATTERED, lambda r: r),
        ("a pause beyond the curve", STEADY, lambda r: Readings((*r.time_s, 2000.0), (*r.reading_C, 24.0))),
    ],
)
def test_what_is_no_mere_further_tap_is_fitted_anew(what, setup, change, made_anew):
    readings = first(run_of(STEADY, 2), 45)
    warm = fit_cooling(readings, STEADY)
    made_anew.clear()
    fit_cooling(change(first(run_of(STEADY, 2), 46)), setup, warm=warm)
    assert made_anew
