"""From a solution to the fit that judgement, plot and export take."""

from __future__ import annotations

from collections.abc import Sequence
from math import exp, sqrt

import numpy as np
from numpy.typing import NDArray

from core.bench.readings import Readings, Ruling
from core.cooling.diagnosis import doubtful, misses
from core.cooling.features import Features
from core.cooling.fit import CoolingFit, LeftOut
from core.cooling.follow import Trail
from core.cooling.likelihood import Evidence, Normal, as_normal
from core.cooling.model import PARAMETERS, STILL_PARAMETERS, CoolingModel
from core.cooling.optimiser import inverse
from core.cooling.prior import Prior
from core.cooling.solve import Solution

Array = NDArray[np.float64]

CURVE_POINTS = 97
CONDUCTION_COUNTS = 1e-3


def outcome(trail: Trail, prior: Prior, start_by: str, profile: bool) -> CoolingFit:
    """Everything that the readings say, in one frozen value."""
    readings, evidence, solution, start_row = trail.readings, trail.evidence, trail.solution, trail.start_row
    model, body = evidence.model, evidence.model.body
    still = model.natural_W_m2K > 0.0
    ln_h, start_C, last = (float(one) for one in solution.parameters)
    offset = 0.0 if still else last
    features = solution.tangent.at(solution.parameters)
    covariance = solution.covariance
    var_h, var_air = covariance[0, 0], 0.0 if still else covariance[2, 2]
    one = as_normal(evidence, features)
    per_air = covariance[0, 2] / var_air if var_air > 0.0 else _per_air(evidence, features, one)
    fixed = max(var_h - (covariance[0, 2] ** 2 / var_air if var_air > 0.0 else 0.0), 0.0)
    measured = per_air if var_air == 0.0 else covariance[0, 2] * prior.air_weight
    window = (readings.time_s[start_row], readings.time_s[-1])
    grid = np.linspace(0.0, readings.time_s[-1], CURVE_POINTS)
    curve = solution.tangent.shown_C(solution.parameters, grid)
    in_window = curve[grid >= window[0]]
    mean_C = float(np.mean(in_window))
    mid = (window[0] + window[1]) / 2.0
    asymptote = model.air_C + offset + model.air_rate_K_s * mid
    radiation = model.radiation_W_m2K(mean_C, offset)
    h = exp(ln_h) * (model.natural_W_m2K * (mean_C - asymptote) ** 0.25 if still else 1.0)
    stem = (last if still else model.stem_loss_W_K) / body.area_m2
    total = h + radiation + stem
    inside = trail.conduction_share
    tau = body.capacity_J_K(mean_C) / (inside * total * body.area_m2)
    found = misses(evidence, features)
    left_out = _left_out(start_row, start_by, readings, trail.rulings, doubtful(evidence, found, readings))
    out = {left.row for left in left_out}
    first_row = len(readings) - len(evidence.rows)
    return CoolingFit(
        h_W_m2K=h,
        h_u_W_m2K=h * sqrt(var_h),
        h_u_fixed_air_W_m2K=h * sqrt(fixed),
        h_total_W_m2K=total,
        h_radiation_W_m2K=radiation,
        h_stem_W_m2K=stem,
        time_constant_s=tau,
        time_constant_u_s=tau * sqrt(var_h) * h / total,
        start_C=start_C,
        start_u_K=sqrt(covariance[1, 1]),
        asymptote_C=asymptote,
        asymptote_u_K=sqrt(var_air),
        asymptote_shift_K=offset,
        h_per_air_W_m2K2=h * per_air,
        h_per_measured_air_W_m2K2=h * measured,
        h_per_lag_W_m2Ks=h * _per_lag(evidence, features, one, prior),
        phase_s=None if solution.renewals is None else solution.renewals[0] % solution.renewals[1],
        refresh_found_s=None if solution.renewals is None else solution.renewals[1],
        covariance=tuple(map(tuple, covariance.tolist())),
        parameters=STILL_PARAMETERS if still else PARAMETERS,
        model=_model_name(model, inside),
        biot=total * body.volume_m3 / body.area_m2 / body.conductivity_W_mK,
        window_s=window,
        start_by=start_by,
        used=tuple(row not in out for row in range(len(readings))),
        left_out=left_out,
        residual_s=_per_row(found.miss_s, first_row, out),
        residual_K=_per_row(found.miss_K, first_row, out),
        residual_score=_per_row(found.score, first_row, out),
        curve_time_s=tuple(grid.tolist()),
        curve_C=tuple(curve.tolist()),
        iterations=solution.rounds,
        profile_interval_W_m2K=_interval(solution) if profile else None,
        body_mean_C=mean_C,
        stem_loss_W_K=last if still else None,
        stem_loss_u_W_K=sqrt(covariance[2, 2]) if still else None,
        trail=trail,
    )


def _per_row(values: Array, first_row: int, out: set[int]) -> tuple[float | None, ...]:
    """Values of the rows from `first_row` on, a value a row; None for the rows before, and for those left out."""
    known = [*[None] * first_row, *values.tolist()]
    return tuple(None if row in out else value for row, value in enumerate(known))


def _model_name(model: CoolingModel, inside: float) -> str:
    """Lumped, where conduction inside changes h by no more than a thousandth; else the shape that conducts."""
    if 1.0 - inside <= CONDUCTION_COUNTS:
        return "lumped"
    names = {1: {"cylinder": "cylinder", "sphere": "sphere"}, 2: {"cylinder": "short cylinder"}}
    return names.get(len(model.factors), {}).get(model.body.shape, "block")


def _per_lag(evidence: Evidence, features: Features, one: Normal, prior: Prior) -> float:
    """d ln h for 1 s more in the mean tap delay: the shift of all taps, through the normal equations."""
    if evidence.mode == "beat":
        return 0.0
    return _response(evidence, features, one, list(prior.free), np.full(len(evidence.rows), -1.0))


def _per_air(evidence: Evidence, features: Features, one: Normal) -> float:
    """d ln h for 1 K in an asymptote that is taken as known; not worked out for a run in still air."""
    if evidence.model.natural_W_m2K > 0.0:
        return 0.0
    return _response(evidence, features, one, [0, 1], -one.slope[:, 2])


def _response(evidence: Evidence, features: Features, one: Normal, free: list[int], miss: Array) -> float:
    """Step of the first parameter by which the normal equations answer to misses of all rows."""
    weight = one.good / one.sd**2 * evidence.counts[evidence.rows]
    slope = one.slope[:, free]
    hessian = (slope * weight[:, None]).T @ slope
    place = features.start_slope[free] / evidence.start_u_K
    hessian += np.outer(place, place)
    scale = np.sqrt(np.diag(hessian))
    return float((inverse(hessian, scale) @ (slope.T @ (weight * miss)))[0])


def _interval(solution: Solution) -> tuple[float, float]:
    """95 % interval of h from the weighted points of its marginal posterior."""
    order = np.argsort(solution.points[:, 0])
    heard = np.cumsum(solution.weights[order])
    low, high = np.interp([0.025, 0.975], heard, solution.points[order, 0])
    return exp(float(low)), exp(float(high))


def _left_out(
    start_row: int, start_by: str, readings: Readings, rulings: Sequence[Ruling], named: Sequence[LeftOut]
) -> tuple[LeftOut, ...]:
    why = "before the start that you set" if start_by == "person" else "before the curve has settled"
    found = [
        LeftOut(row, "start", f"Row {row + 1} ({readings.reading_C[row]:g} °C) lies {why}.", start_by)
        for row in range(start_row)
    ]
    found += [
        LeftOut(one.row, "dropped", f"Row {one.row + 1} was dropped by a person.", one.by)
        for one in rulings
        if not one.keep and start_row <= one.row < len(readings)
    ]
    return tuple(sorted([*found, *named], key=lambda one: one.row))
