"""The uncertainty budget: every input, its sensitivity by hand, nothing twice, and the advice that follows."""

from dataclasses import replace
from math import sqrt

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from core.bench.body import thermal_body
from core.judgement.budget import budget_of, monte_carlo_of
from core.judgement.improve import next_improvement
from tests.judgement.benches import bench, invented_fit


def part(budget, name, output="h"):
    """Sensitivity of one input."""
    at = [one.name for one in budget.inputs].index(name)
    return getattr(budget, output).sensitivities[at]


def test_every_input_of_the_bench_has_its_line_largest_first():
    setup = bench(body={"stem_loss_W_K": 0.01, "stem_loss_u_W_K": 0.002}, recording={"tap_lag_u_s": 0.05})
    lines = budget_of(invented_fit(setup, h_per_lag_W_m2Ks=0.02), setup).lines()
    assert {one.input for one in lines} == {
        "diameter", "length", "mass", "heat capacity", "emissivity", "stem loss", "thermometer offset",
        "thermometer gain", "air temperature", "tap delay", "readings and their fit",
    }  # fmt: skip
    shares = [one.share for one in lines]
    assert shares == sorted(shares, reverse=True)
    assert sum(shares) == pytest.approx(1.0)


def test_sensitivities_are_those_of_the_heat_balance_by_hand():
    """h = m·c/(τ·A) − G/A − h_r, so dh/dc = U/c, dh/dm = U/m, dh/dD = −(U − G/A)/D with a weighed mass."""
    setup = bench(body={"stem_loss_W_K": 0.01})
    setup = replace(setup, body=replace(setup.body, stem_loss_u_W_K=0.002, heat_capacity_u_rel=0.01))
    fit = invented_fit(setup)
    budget, body = budget_of(fit, setup), thermal_body(setup.body)
    total = fit.h_total_W_m2K
    c = body.specific_heat_J_kgK(fit.body_mean_C)
    assert part(budget, "heat capacity") == pytest.approx(total / c, rel=1e-4)
    assert part(budget, "mass") == pytest.approx(total / 0.1875, rel=1e-4)
    convective = total - 0.01 / body.area_m2
    assert part(budget, "diameter") == pytest.approx(-convective / 0.016, rel=1e-4)
    assert part(budget, "length") == pytest.approx(-convective / 0.11, rel=1e-4)
    assert part(budget, "stem loss") == pytest.approx(-1 / body.area_m2, rel=1e-6)
    assert part(budget, "emissivity") == pytest.approx(-fit.h_radiation_W_m2K / 0.08, rel=1e-4)


def test_without_a_balance_the_diameter_acts_through_the_mass_too():
    """m = ρ·π·D²·L/4: dh/dD turns from −U/D to +U/D, and the length drops out."""
    setup = bench(body={"mass_kg": None})
    fit = invented_fit(setup)
    budget = budget_of(fit, setup)
    assert part(budget, "diameter") == pytest.approx(fit.h_total_W_m2K / 0.016, rel=1e-3)
    assert part(budget, "length") == pytest.approx(0.0, abs=1.0)
    assert "density" in {one.input for one in budget.lines()}


def test_a_weighed_bodys_nusselt_number_hardly_depends_on_its_diameter():
    """Nu = h·D/λ and h ~ 1/D: one diameter moved everywhere at once carries the correlation."""
    setup = bench()
    budget = budget_of(invented_fit(setup), setup)
    nu = budget.nusselt.value
    assert abs(part(budget, "diameter", "nusselt")) * 0.016 / nu < 0.1
    assert part(budget, "diameter", "reynolds") * 0.016 / budget.reynolds.value == pytest.approx(1.0, abs=0.06)


def test_readings_and_measured_air_together_are_the_fits_own_uncertainty():
    """The fit's variance holds the air's; the budget splits it and adds nothing."""
    setup = bench(air={"temperature_u_K": 0.02})
    fit = invented_fit(setup, h_u_W_m2K=0.09, h_per_measured_air_W_m2K2=2.0)
    lines = {one.input: one for one in budget_of(fit, setup).lines()}
    both = sqrt(sum((lines[name].u * lines[name].sensitivity) ** 2
                    for name in ("readings and their fit", "air temperature")))  # fmt: skip
    assert both == pytest.approx(fit.h_u_W_m2K, rel=1e-3)
    assert lines["air temperature"].u == 0.02
    assert not any("resolution" in name for name in lines)


def test_a_common_offset_of_the_thermometer_hardly_touches_h():
    setup = bench(thermometer={"accuracy_K": 0.5})
    budget = budget_of(invented_fit(setup), setup)
    lines = {one.input: one for one in budget.lines()}
    assert 0.0 < abs(lines["thermometer offset"].sensitivity) * 0.5 < 0.0005 * budget.h.value


def test_conductivity_has_a_line_where_conduction_inside_is_modelled():
    setup = bench(body={"material": "stainless steel 304", "mass_kg": None, "diameter_m": 0.04})
    fit = invented_fit(setup, model="cylinder", biot=0.13)
    assert part(budget_of(fit, setup), "conductivity") < 0.0
    assert "conductivity" not in {one.input for one in budget_of(invented_fit(setup), setup).lines()}


@settings(max_examples=25, deadline=None)
@given(
    st.floats(0.004, 0.04), st.floats(0.05, 0.3), st.floats(15, 300), st.floats(0.02, 0.9), st.booleans(),
    st.sampled_from(["cylinder", "sphere", "block"]),
)  # fmt: skip
def test_halving_every_uncertainty_halves_that_of_h(diameter, length, h, emissivity, weighed, shape):
    sizes = {"shape": shape, "diameter_m": diameter, "length_m": length, "side_a_m": diameter,
             "side_b_m": diameter, "side_c_m": length, "mass_kg": None, "emissivity": emissivity}  # fmt: skip
    setup = bench(body={**sizes, "heat_capacity_u_rel": 0.02, "emissivity_u": 0.01})
    if weighed:
        setup = replace(setup, body=replace(setup.body, mass_kg=thermal_body(setup.body).mass_kg))
    body, thermometer = setup.body, setup.thermometer
    half = replace(
        setup,
        body=replace(body, diameter_u_m=body.diameter_u_m / 2, length_u_m=body.length_u_m / 2,
                     mass_u_kg=body.mass_u_kg / 2, density_u_rel=body.density_u_rel / 2,
                     heat_capacity_u_rel=0.01, emissivity_u=0.005),
        thermometer=replace(thermometer, accuracy_K=thermometer.accuracy_K / 2,
                            gain_u_rel=thermometer.gain_u_rel / 2),
        air=replace(setup.air, temperature_u_K=setup.air.temperature_u_K / 2),
        recording=replace(setup.recording, tap_lag_u_s=setup.recording.tap_lag_u_s / 2),
    )  # fmt: skip
    fit = invented_fit(setup, h)
    calm = replace(fit, h_u_W_m2K=fit.h_u_W_m2K / 2)
    assert budget_of(calm, half).h.u == pytest.approx(budget_of(fit, setup).h.u / 2, rel=2e-3)


def test_monte_carlo_agrees_with_the_straight_line_and_can_be_had_again():
    setup = bench(body={"emissivity": 0.3, "emissivity_u": 0.05}, flow={"velocity_u_m_s": 0.3})
    fit = invented_fit(setup)
    budget = budget_of(fit, setup)
    drawn = monte_carlo_of(fit, setup, seed=3, draws=8000)
    for linear, one in zip((budget.h, budget.nusselt, budget.reynolds), drawn, strict=True):
        assert one.u == pytest.approx(linear.u, rel=0.03)
        assert one.half_width == pytest.approx(linear.U, rel=0.03)
    assert monte_carlo_of(fit, setup, seed=3, draws=50) == monte_carlo_of(fit, setup, seed=3, draws=50)


def test_the_advice_names_the_largest_line_and_what_half_of_it_would_bring():
    setup = bench(body={"heat_capacity_u_rel": 0.02})
    budget = budget_of(invented_fit(setup), setup)
    lines = budget.lines()
    said = next_improvement(lines, budget.h.U / budget.h.value)
    assert lines[0].input == "heat capacity"
    assert "heat capacity" in said
    half = budget_of(invented_fit(setup), bench(body={"heat_capacity_u_rel": 0.01}))
    assert f"± {100 * half.h.U / half.h.value:.1f} %" in said


def test_a_budget_of_zeros_says_so():
    assert "none was set to 0" in next_improvement((), 0.0)
