"""From readings and a set-up to the whole answer: the single entry for commands and app."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from math import hypot

from core.bench.body import thermal_body
from core.bench.readings import Readings, Ruling
from core.bench.setup import Setup
from core.convection.expected import expected_for
from core.convection.flow import velocity_at_body, velocity_before_m_s
from core.convection.numbers import grashof, richardson
from core.cooling.estimator import fit_cooling
from core.cooling.fit import CoolingFit
from core.errors import NoAnswer
from core.judgement.answer import Answer
from core.judgement.budget import Budget, budget_of
from core.judgement.evidence import Earlier, Evidence
from core.judgement.relation import film_air, mid_air_C
from core.judgement.series import CALIBRATION_SHARE, SAME_SPEED_REL
from core.judgement.verdict import conclude, run_checks

FREE_AIR_K = 5.0  # far wider than any thermometer is off
SPEED_EXPONENT = 0.6  # h ~ v^0.6 between two almost equal speeds: Zukauskas 1972, Re 10³ to 2·10⁵


def judge(
    readings: Readings,
    setup: Setup,
    *,
    start_s: float | None = None,
    rulings: Sequence[Ruling] = (),
    warm: CoolingFit | None = None,
    earlier: Sequence[Answer] = (),
    fit: CoolingFit | None = None,
) -> Answer:
    """The answer to one run.

    Parameters
    ----------
    readings : what the display showed, and when [s, °C]
    setup : the bench [any]
    start_s : a person's word on the start of the fit window; the program chooses where it is left out [s]
    rulings : a person's word on single readings
    warm : an earlier fit of the same run, to start from
    earlier : answers to earlier runs; those of the same body at the same speed are compared with
    fit : a fit of these very readings with this set-up, if there is one already

    Returns
    -------
    Answer

    Raises
    ------
    NoAnswer where the readings cannot give a fit; BadSetup where the set-up lacks something
    """
    if fit is None:
        fit = fit_cooling(readings, setup, start_s=start_s, rulings=rulings, warm=warm)
    budget = budget_of(fit, setup)
    body = thermal_body(setup.body)
    forced = setup.recording.kind == "forced"
    air_C = mid_air_C(setup)
    film_C = 0.5 * (fit.body_mean_C + air_C)
    film = film_air(setup, film_C)
    expected = expected_for(setup, fit.body_mean_C)
    reynolds, nusselt = budget.reynolds, budget.nusselt
    buoyancy = None
    if reynolds is not None and reynolds.value > 0.0:
        gr = grashof(fit.body_mean_C, air_C, body.across_m, film.kinematic_viscosity_m2_s)
        buoyancy = richardson(gr, reynolds.value)
    ratio, ratio_u = mass_ratio(setup)
    whole = fit.h_W_m2K + fit.h_radiation_W_m2K + fit.h_stem_W_m2K
    checks = run_checks(
        Evidence(
            readings=readings,
            setup=setup,
            fit=fit,
            h_U95_rel=budget.h.U / abs(fit.h_W_m2K),
            free_air_K=free_air_K(readings, setup, fit, rulings),
            radiation_share=fit.h_radiation_W_m2K / whole,
            stem_share=fit.h_stem_W_m2K / whole,
            velocity_before_m_s=velocity_before_m_s(setup) if forced else None,
            richardson=buoyancy,
            mass_ratio=ratio,
            mass_ratio_u=ratio_u,
            expected=tuple(expected),
            earlier=comparable(fit, setup, budget, earlier),
        )
    )
    verdict, reason = conclude(checks)
    return Answer(
        time_constant_s=fit.time_constant_s,
        time_constant_u_s=fit.time_constant_u_s,
        h_W_m2K=fit.h_W_m2K,
        h_u_W_m2K=budget.h.u,
        h_U95_W_m2K=budget.h.U,
        h_total_W_m2K=fit.h_total_W_m2K,
        h_radiation_W_m2K=fit.h_radiation_W_m2K,
        biot=fit.biot,
        nusselt=None if nusselt is None else nusselt.value,
        nusselt_u=None if nusselt is None else nusselt.u,
        reynolds=None if reynolds is None else reynolds.value,
        reynolds_u=None if reynolds is None else reynolds.u,
        asymptote_C=fit.asymptote_C,
        readings=sum(fit.used),
        readings_left_out=tuple((one.row + 1, one.reason) for one in fit.left_out),
        window_s=fit.window_s,
        expected=tuple(expected),
        budget=budget.lines(),
        checks=checks,
        verdict=verdict,
        reason=reason,
        coverage_factor=budget.h.coverage_factor,
        degrees_of_freedom=budget.h.dof,
        film_temperature_C=film_C,
        prandtl=film.prandtl,
        velocity_m_s=velocity_at_body(setup) if forced else None,
        setup=setup,
        fit=fit,
    )


def free_air_K(
    readings: Readings, setup: Setup, fit: CoolingFit, rulings: Sequence[Ruling]
) -> tuple[float, float] | None:
    """Asymptote of the readings alone minus the measured air, and its standard uncertainty [K]: the same fit with
    the air temperature left almost free. None where the readings do not say."""
    loose = replace(setup, air=replace(setup.air, temperature_u_K=FREE_AIR_K))
    try:
        free = fit_cooling(readings, loose, start_s=fit.window_s[0], rulings=rulings, warm=fit)
    except NoAnswer:
        return None
    if free.asymptote_u_K > 0.5 * FREE_AIR_K:
        return None
    return free.asymptote_shift_K, free.asymptote_u_K


def mass_ratio(setup: Setup) -> tuple[float | None, float]:
    """Weighed mass over density times volume, None where it was not weighed, and the ratio's u [-]."""
    body = setup.body
    if body.mass_kg is None:
        return None, 0.0
    computed = thermal_body(replace(body, mass_kg=None))
    sizes = {
        "cylinder": ((2.0, body.diameter_m, body.diameter_u_m), (1.0, body.length_m, body.length_u_m)),
        "sphere": ((3.0, body.diameter_m, body.diameter_u_m),),
        "block": tuple((1.0, one, body.length_u_m) for one in (body.side_a_m, body.side_b_m, body.side_c_m)),
    }[body.shape]
    parts = [power * u / size for power, size, u in sizes if size]
    return body.mass_kg / computed.mass_kg, hypot(computed.density_u_rel, body.mass_u_kg / body.mass_kg, *parts)


def comparable(fit: CoolingFit, setup: Setup, budget: Budget, answers: Sequence[Answer]) -> tuple[Earlier, ...]:
    """Earlier runs of the same body in the same place at the same speed, their h brought to this run's speed.

    What both runs share cancels in the difference: of the budget only the readings and the air temperature count,
    and of the velocity the part that is no calibration."""
    if budget.reynolds is None:
        return ()
    own_rel = _own_u_rel(budget)
    here = velocity_at_body(setup)
    found = []
    for answer in answers:
        if answer.velocity_m_s is None or answer.setup.body != setup.body or not _same_place(answer.setup, setup):
            continue
        ratio = here / answer.velocity_m_s
        if abs(ratio - 1.0) > SAME_SPEED_REL:
            continue
        h = answer.h_W_m2K * ratio**SPEED_EXPONENT
        found.append(Earlier(h, h * hypot(own_rel, _own_u_rel(budget_of(answer.fit, answer.setup)))))
    return tuple(found)


def _same_place(one: Setup, other: Setup) -> bool:
    return (one.flow.arrangement, one.flow.row) == (other.flow.arrangement, other.flow.row)


def _own_u_rel(budget: Budget) -> float:
    """Relative standard uncertainty of h at the set speed from what is this run's alone."""
    parts = []
    for one, part in zip(budget.inputs, budget.h.contributions, strict=True):
        if one.name in {"readings and their fit", "air temperature"}:
            parts.append(part / budget.h.value)
        if one.name == "velocity" and one.value > 0.0:
            parts.append(SPEED_EXPONENT * (1.0 - CALIBRATION_SHARE) ** 0.5 * one.u / one.value)
    return hypot(*parts)
