"""A bench of a small maker of fruit-drying cabinets, and fits invented for tests that need no readings."""

from dataclasses import replace

from core.bench.body import thermal_body
from core.bench.setup import Body, Flow, Limits, Recording, Setup, Surrounding, Thermometer
from core.cooling.fit import CoolingFit
from core.judgement.answer import Answer
from core.judgement.relation import anchor_of, film_air, mid_air_C, radiation_W_m2K, relate


def bench(*, body=None, thermometer=None, recording=None, air=None, flow=None, limits=None) -> Setup:
    """A brass rod, weighed, in a square duct at 8 m/s; each section can be changed."""
    return Setup(
        Body(**{"shape": "cylinder", "diameter_m": 0.016, "length_m": 0.11, "material": "brass",
                "mass_kg": 0.1875, "emissivity": 0.08, **(body or {})}),
        Thermometer(**{"resolution_K": 1.0, **(thermometer or {})}),
        Recording(**{"mode": "change", **(recording or {})}),
        Surrounding(**{"temperature_C": 23.0, **(air or {})}),
        Flow(**{"velocity_m_s": 8.0, "duct_height_m": 0.15, "duct_width_m": 0.15, **(flow or {})}),
        Limits(**(limits or {})),
    )  # fmt: skip


def invented_fit(setup: Setup, h_W_m2K: float = 80.0, **changes) -> CoolingFit:
    """A sound fit of 58 readings that gives h, without any readings behind it."""
    body, air_C, body_C = thermal_body(setup.body), mid_air_C(setup), mid_air_C(setup) + 30.0
    radiation = radiation_W_m2K(setup.body.emissivity, body_C, air_C, air_C)
    stem = setup.body.stem_loss_W_K / body.area_m2
    total = h_W_m2K + radiation + stem
    n = 58
    fit = CoolingFit(
        h_W_m2K=h_W_m2K, h_u_W_m2K=0.00088 * h_W_m2K, h_u_fixed_air_W_m2K=0.0007 * h_W_m2K,
        h_total_W_m2K=total, h_radiation_W_m2K=radiation,
        h_stem_W_m2K=stem, time_constant_s=body.capacity_J_K(body_C) / (total * body.area_m2),
        time_constant_u_s=0.1, start_C=90.0, start_u_K=0.02, asymptote_C=air_C, asymptote_u_K=0.018,
        asymptote_shift_K=0.0, h_per_air_W_m2K2=0.03 * h_W_m2K,
        h_per_measured_air_W_m2K2=0.027 * h_W_m2K, h_per_lag_W_m2Ks=0.0, phase_s=None,
        covariance=(), parameters=("rate", "start", "asymptote"), model="lumped", biot=0.005,
        window_s=(0.0, 300.0), start_by="program", used=(True,) * n, left_out=(), residual_s=(None,) * n,
        residual_K=(None,) * n, residual_score=(None,) * n, curve_time_s=(), curve_C=(),
        iterations=5, profile_interval_W_m2K=None, body_mean_C=body_C,
    )  # fmt: skip
    return replace(fit, **changes)


def invented_answer(setup: Setup, h_W_m2K: float = 80.0, **changes) -> Answer:
    """The answer to an invented fit, with the numbers that a law over speeds needs; uncertainties are left at 0,
    as such a law reckons its own."""
    fit = invented_fit(setup, h_W_m2K, **changes)
    _, nusselt, reynolds = relate(setup, anchor_of(fit, setup)).outputs({})
    film_C = 0.5 * (fit.body_mean_C + mid_air_C(setup))
    return Answer(
        time_constant_s=fit.time_constant_s, time_constant_u_s=fit.time_constant_u_s, h_W_m2K=h_W_m2K,
        h_u_W_m2K=0.0, h_U95_W_m2K=0.0, h_total_W_m2K=fit.h_total_W_m2K,
        h_radiation_W_m2K=fit.h_radiation_W_m2K, biot=fit.biot, nusselt=nusselt, nusselt_u=0.0,
        reynolds=reynolds, reynolds_u=0.0, asymptote_C=fit.asymptote_C, readings=58, readings_left_out=(),
        window_s=fit.window_s, expected=(), budget=(), checks=(), verdict="keep", reason="", coverage_factor=1.96,
        degrees_of_freedom=float("inf"), film_temperature_C=film_C, prandtl=film_air(setup, film_C).prandtl,
        velocity_m_s=None, setup=setup, fit=fit,
    )  # fmt: skip
