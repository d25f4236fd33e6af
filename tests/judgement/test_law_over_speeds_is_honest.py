"""Nu = C·Re^m·Pr^(1/3) over a session: what it recovers, how sure it is, and what it refuses."""

from dataclasses import replace
from math import hypot, log, pi

import numpy as np
import pytest

from core.bench.body import thermal_body
from core.convection.flow import velocity_at_body
from core.errors import NoAnswer
from core.judgement.power_law import fit_line
from core.judgement.relation import film_air, mid_air_C, radiation_W_m2K
from core.judgement.series import law_of
from tests.judgement.benches import bench, invented_answer

C, M = 0.24, 0.60
SPEEDS = (12.0, 10.0, 8.0, 6.0)
U_VELOCITY = 0.12


def session(generator, speeds=SPEEDS):
    """Answers of one simulated session: a rod that differs from its set-up within the stated uncertainties, an
    anemometer with half its variance in the calibration, and noise of each run's own. Worked out by hand from the
    lumped balance, without the budget's relation."""
    nominal = bench(flow={"velocity_u_m_s": U_VELOCITY})
    body = nominal.body
    diameter = body.diameter_m + generator.normal(0, body.diameter_u_m)
    length = body.length_m + generator.normal(0, body.length_u_m)
    mass = body.mass_kg + generator.normal(0, body.mass_u_kg)
    heat = 1.0 + generator.normal(0, thermal_body(body).heat_capacity_u_rel)
    emissivity = body.emissivity + generator.normal(0, body.emissivity_u)
    calibration = generator.normal(0, U_VELOCITY * 0.5**0.5)
    real_body = replace(body, diameter_m=diameter, length_m=length)
    body_C, air_C = 53.0, mid_air_C(nominal)
    answers = []
    for speed in speeds:
        real = replace(nominal, body=real_body, flow=replace(nominal.flow, velocity_m_s=speed))
        film = film_air(real, 0.5 * (body_C + air_C))
        reynolds = velocity_at_body(real) * diameter / film.kinematic_viscosity_m2_s
        h = C * reynolds**M * film.prandtl ** (1 / 3) * film.conductivity_W_mK / diameter
        area = pi * diameter * length
        c = thermal_body(body).specific_heat_J_kgK(body_C)
        total = h + radiation_W_m2K(emissivity, body_C, air_C, air_C)
        tau = mass * c * heat / (total * area) * (1.0 + generator.normal(0, 0.0007))
        read = speed + calibration + generator.normal(0, U_VELOCITY * 0.5**0.5)
        setup = replace(nominal, flow=replace(nominal.flow, velocity_m_s=read))
        seen = body.mass_kg * c / (tau * pi * body.diameter_m * body.length_m)
        measured = seen - radiation_W_m2K(body.emissivity, body_C, air_C, air_C)
        answers.append(invented_answer(setup, measured, body_mean_C=body_C, h_u_W_m2K=0.0007 * total,
                                       h_per_measured_air_W_m2K2=0.0))  # fmt: skip
    return answers


def test_c_and_m_are_covered_in_95_of_100_sessions_and_not_if_shared_inputs_are_ignored():
    """300 sessions of four speeds: the 95 % intervals of C, of m and of Nu at mid-range hold the truth in 92 to 98
    of 100. With the same uncertainties taken as each run's own, the interval at mid-range is far too narrow."""
    generator = np.random.default_rng(11)
    level = log(9000.0)
    truth = log(C) + M * level
    inside = {"C": 0, "m": 0, "level": 0, "level, nothing shared": 0}
    for _ in range(300):
        law = law_of(session(generator))
        u_ln_C = law.C_u / law.C
        u = hypot(u_ln_C, level * law.m_u)
        u = (u**2 + 2 * level * law.correlation_ln_C_m * u_ln_C * law.m_u) ** 0.5
        inside["m"] += abs(law.m - M) < 1.96 * law.m_u
        inside["C"] += abs(log(law.C / C)) < 1.96 * u_ln_C
        inside["level"] += abs(log(law.C) + law.m * level - truth) < 1.96 * u
        runs = law.runs
        own_x = [one.reynolds_u / one.reynolds for one in runs]
        own_y = [one.nusselt_u / one.nusselt for one in runs]
        y = np.array([log(one.nusselt) - log(one.prandtl) / 3 for one in runs])
        line = fit_line(np.log([one.reynolds for one in runs]), y, np.diag(np.square(own_x + own_y)))
        u = (np.array([1.0, level]) @ line.covariance @ np.array([1.0, level])) ** 0.5
        inside["level, nothing shared"] += abs(line.intercept + line.slope * level - truth) < 1.96 * u
    share = {name: count / 300 for name, count in inside.items()}
    assert 0.92 <= share["m"] <= 0.98, share
    assert 0.92 <= share["C"] <= 0.98, share
    assert 0.92 <= share["level"] <= 0.98, share
    assert share["level, nothing shared"] < 0.85, share


def exact(speeds, scatter=()):
    """Answers that lie on the law exactly, but for a relative scatter of h."""
    answers = []
    for i, speed in enumerate(speeds):
        setup = bench(flow={"velocity_m_s": speed})
        film = film_air(setup, 38.0)
        re = velocity_at_body(setup) * 0.016 / film.kinematic_viscosity_m2_s
        h = C * re**M * film.prandtl ** (1 / 3) * film.conductivity_W_mK / 0.016
        answers.append(invented_answer(setup, h * (1 + (scatter[i] if scatter else 0.0))))
    return answers


def test_runs_on_a_law_give_that_law():
    law = law_of(exact(SPEEDS), ["A", "B", "C", "D"])
    assert law.m == pytest.approx(M, abs=1e-6)
    assert pytest.approx(C, rel=1e-5) == law.C
    assert [one.run for one in law.runs] == ["A", "B", "C", "D"]
    assert max(abs(one.residual) for one in law.runs) < 1e-6
    assert law.scatter_rel == 0.0
    assert -1.0 < law.correlation_ln_C_m < -0.9


def test_two_runs_at_one_speed_are_refused_with_what_to_do():
    with pytest.raises(NoAnswer, match="measure one more speed"):
        law_of(exact([8.0, 8.1]))


def test_repeats_are_pooled_with_their_repeatability():
    """Pairs that differ by 2 % have a standard deviation of 2 %/√2 each."""
    law = law_of(exact([12.0, 12.0, 6.0, 6.0], [0.01, -0.01, 0.01, -0.01]))
    assert [len(one.runs) for one in law.speeds] == [2, 2]
    assert law.repeatability_dof == 2
    assert law.repeatability_rel == pytest.approx(0.02 / 2**0.5, rel=0.01)


def test_scatter_beyond_the_budget_widens_m_but_no_shared_error_does():
    calm, rough = law_of(exact(SPEEDS)), law_of(exact(SPEEDS, [0.05, -0.05, -0.05, 0.05]))
    assert rough.scatter_rel > 0.03
    assert rough.m_u > 2 * calm.m_u


def test_the_next_speed_is_where_m_gains_most():
    """With the fast end measured three times the slow side is next; a law with that run added has the promised
    uncertainty of m, and runs elsewhere would have brought less."""
    speeds = [12.0, 12.0, 12.0, 6.0]
    law = law_of(exact(speeds), speeds_m_s=(4.0, 14.0))

    def with_run_at(speed):
        return law_of(exact([*speeds, speed])).m_u

    assert law.next_velocity_m_s < 6.0
    assert with_run_at(law.next_velocity_m_s) == pytest.approx(law.next_m_u, rel=0.02)
    assert all(law.next_m_u < with_run_at(speed) for speed in (4.0, 7.5, 9.0, 12.0, 14.0))


def test_order_of_runs_does_not_matter():
    answers = exact(SPEEDS, [0.01, 0.0, -0.01, 0.005])
    forth, back = law_of(answers), law_of(answers[::-1])
    assert (back.C, back.m, back.m_u) == pytest.approx((forth.C, forth.m, forth.m_u), rel=1e-9)


def test_heat_capacity_moves_c_by_as_much_and_leaves_m():
    """An error of 1 % in a heat capacity that all runs share is 1 % in C and nothing in m (but for radiation)."""
    law, off = law_of(exact(SPEEDS)), law_of(exact(SPEEDS, [0.01] * 4))
    assert pytest.approx(1.01, rel=1e-3) == off.C / law.C
    assert off.m == pytest.approx(law.m, abs=1e-6)
    assert law.C_u / law.C > 0.018
