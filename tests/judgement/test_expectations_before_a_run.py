"""What is said before a run: h, pace, length, mode and how sure h will be."""

from dataclasses import replace
from math import log

import pytest

from core.bench.body import thermal_body
from core.cooling.estimator import fit_cooling
from core.cooling.simulator import Hand, Truth, simulate
from core.errors import BadSetup, NoAnswer
from core.judgement.expect import expect
from core.judgement.prediction import Planned, location_information, promise
from tests.judgement.benches import bench
from tests.judgement.faults import with_


def test_the_pace_follows_from_the_expected_h():
    """τ = m·c/((h + h_r)·A), length = τ·ln 6.7, changes = (90 − 23)/τ a second on a display of 1 K."""
    setup = bench(body={"emissivity": 0.0})
    said, body = expect(setup), thermal_body(setup.body)
    assert said.time_constant_s == pytest.approx(body.capacity_J_K(54.0) / (said.h_W_m2K * body.area_m2), rel=0.01)
    assert said.run_length_s == pytest.approx(said.time_constant_s * log(6.7), rel=1e-6)
    assert said.changes_per_s_start == pytest.approx(67.0 / said.time_constant_s, rel=1e-6)
    assert (said.start_C, round(said.end_C)) == (90.0, 33)
    assert said.h_W_m2K in {one.h_W_m2K for one in said.expected if one.in_range}


def test_a_display_cannot_change_faster_than_it_renews():
    said = expect(bench(thermometer={"resolution_K": 0.01, "refresh_s": 2.0}))
    assert said.changes_per_s_start == pytest.approx(0.5)


def test_a_coarse_display_is_tapped_and_a_fine_fast_one_is_read_on_a_beat():
    coarse = expect(bench())
    assert coarse.mode == "change"
    assert "times closer" in coarse.mode_reason
    fine = expect(bench(thermometer={"resolution_K": 0.1, "refresh_s": 0.3}))
    assert fine.mode == "beat"
    assert "faster than a hand follows" in fine.mode_reason


@pytest.mark.parametrize("mode", ["change", "beat"])
@pytest.mark.parametrize(("resolution_K", "refresh_s"), [(1.0, 0.5), (1.0, 2.0), (0.5, 0.7), (0.1, 1.0)])
def test_the_promised_uncertainty_is_what_a_run_then_has(mode, resolution_K, refresh_s):
    """The bound before the run, and the fit's own uncertainty after it, over six runs: within 0.5 to 2 of each
    other, for a number that tells one mode from the other."""
    setup = bench(
        thermometer={"resolution_K": resolution_K, "refresh_s": refresh_s}, recording={"mode": mode},
        body={"emissivity": 0.0},
    )  # fmt: skip
    h = 80.0
    body = thermal_body(setup.body)
    rate = h * body.area_m2 / body.capacity_J_K(50.0)
    promised = promise(Planned(rate, 67.0, 10.0), setup.thermometer, setup.recording, mode, 0.02)
    whole = (promised.rate_u_rel**2 + (promised.rate_per_air_rel_K * 0.02) ** 2) ** 0.5
    fits = [fit_cooling(simulate(Truth(setup, h), seed, Hand(0.0, 0.05)), setup, start_s=0.0) for seed in range(6)]
    had = sum(one.h_u_W_m2K / one.h_W_m2K for one in fits) / len(fits)
    assert 0.5 < whole / had < 2.0


def test_a_promise_improves_with_a_longer_run_a_finer_display_and_a_surer_air():
    setup = bench()

    def u(last_K=10.0, resolution_K=1.0, air_u_K=0.02):
        meter = replace(setup.thermometer, resolution_K=resolution_K)
        one = promise(Planned(1 / 160, 67.0, last_K), meter, setup.recording, "beat", air_u_K)
        return (one.rate_u_rel**2 + (one.rate_per_air_rel_K * air_u_K) ** 2) ** 0.5

    assert u(last_K=8.0) < u() < u(last_K=20.0)
    assert u(resolution_K=0.1) < u()
    assert u(air_u_K=0.005) < u() < u(air_u_K=0.1)


def test_information_of_a_window_has_its_known_limits():
    """Blur far wider than the window: 1/(blur² + width²/12); far narrower: 1.806/(width·blur), from two edges."""
    assert location_information(0.1, 2.0) == pytest.approx(1 / (4.0 + 0.01 / 12), rel=0.01)
    assert location_information(30.0, 1.0) == pytest.approx(1.806 / 30.0, rel=0.02)


def test_warm_air_shifts_the_start_and_still_air_has_no_reynolds_number():
    assert expect(bench(air={"temperature_C": 60.0})).start_C == pytest.approx(100.0)
    still = expect(bench(recording={"kind": "still-air"}))
    assert still.reynolds is None
    assert still.velocity_narrowest_m_s is None
    assert still.h_W_m2K < 15.0


def test_what_is_missing_is_named():
    with pytest.raises(BadSetup, match="velocity"):
        expect(with_(bench(), "flow", velocity_m_s=None))
    with pytest.raises(NoAnswer, match="No published correlation"):
        expect(with_(bench(), "flow", velocity_m_s=0.0))
