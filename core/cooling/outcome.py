"""From a solution to the fit that judgement, plot and export take."""

from __future__ import annotations

from collections.abc import Sequence
from math import exp, sqrt

import numpy as np
from numpy.typing import NDArray

from core.bench.readings import Readings, Ruling
from core.cooling.diagnosis import doubtful, scores
from core.cooling.features import Features
from core.cooling.fit import CoolingFit, LeftOut
from core.cooling.likelihood import Evidence, as_normal, log_likelihood
from core.cooling.model import PARAMETERS, STILL_PARAMETERS, CoolingModel
from core.cooling.prior import Prior
from core.cooling.solve import Solution

Array = NDArray[np.float64]

CURVE_POINTS = 161
CONDUCTION_COUNTS = 1e-3


def outcome(
    readings: Readings,
    evidence: Evidence,
    solution: Solution,
    prior: Prior,
    start_row: int,
    start_by: str,
    rulings: Sequence[Ruling],
    profile: bool,
) -> CoolingFit:
    """Everything that the readings say, in one frozen value."""
    model, body = evidence.model, evidence.model.body
    still = model.natural_W_m2K > 0.0
    ln_h, start_C, last = (float(one) for one in solution.parameters)
    offset = 0.0 if still else last
    features = solution.tangent.at(solution.parameters)
    covariance = solution.covariance
    var_h, var_air = covariance[0, 0], 0.0 if still else covariance[2, 2]
    per_air = covariance[0, 2] / var_air if var_air > 0.0 else _per_air(evidence, features)
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
    inside = 1.0 if still else _conduction_share(model, solution)
    tau = body.capacity_J_K(mean_C) / (inside * total * body.area_m2)
    named = doubtful(evidence, features, readings)
    left_out = _left_out(start_row, start_by, readings, rulings, named)
    out = {one.row for one in left_out}
    miss_s, miss_K, score = scores(evidence, features)
    carries = {int(row): place for place, row in enumerate(evidence.rows)}

    def per_row(values: Array) -> tuple[float | None, ...]:
        return tuple(
            float(values[carries[row]]) if row in carries and row not in out else None
            for row in range(len(readings))
        )

    no_shift = np.zeros((1, 3))
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
        h_per_lag_W_m2Ks=h * _per_lag(evidence, features, prior),
        phase_s=None if solution.clock is None else solution.clock[0] % solution.clock[1],
        refresh_found_s=None if solution.clock is None else solution.clock[1],
        covariance=tuple(tuple(float(x) for x in row) for row in covariance),
        parameters=STILL_PARAMETERS if still else PARAMETERS,
        model=_model_name(model, inside),
        biot=total * body.volume_m3 / body.area_m2 / body.conductivity_W_mK,
        window_s=window,
        start_by=start_by,
        used=tuple(row not in out for row in range(len(readings))),
        left_out=left_out,
        residual_s=per_row(miss_s),
        residual_K=per_row(miss_K),
        residual_score=per_row(score),
        curve_time_s=tuple(float(x) for x in grid),
        curve_C=tuple(float(x) for x in curve),
        log_likelihood=float(log_likelihood(evidence, features, no_shift)[0]),
        iterations=solution.rounds,
        profile_interval_W_m2K=_interval(solution) if profile else None,
        body_mean_C=mean_C,
        stem_loss_W_K=last if still else None,
        stem_loss_u_W_K=sqrt(covariance[2, 2]) if still else None,
    )


def _conduction_share(model: CoolingModel, solution: Solution) -> float:
    """The share of the lumped conductance that conduction inside the body leaves."""
    h, start_C = np.exp(solution.parameters[:1]), solution.parameters[1:2]
    modes = model.modes(h, start_C, np.array([model.air_C + solution.parameters[2]]))
    return 1.0 if modes is None else float(modes.share[0])


def _model_name(model: CoolingModel, inside: float) -> str:
    """Lumped, where conduction inside changes h by no more than a thousandth; else the shape that conducts."""
    if 1.0 - inside <= CONDUCTION_COUNTS:
        return "lumped"
    names = {1: {"cylinder": "cylinder", "sphere": "sphere"}, 2: {"cylinder": "short cylinder"}}
    return names.get(len(model.factors), {}).get(model.body.shape, "block")


def _per_lag(evidence: Evidence, features: Features, prior: Prior) -> float:
    """d ln h for 1 s more in the mean tap delay: the shift of all taps, through the normal equations."""
    if evidence.mode == "beat":
        return 0.0
    return _response(evidence, features, list(prior.free), np.full(len(evidence.rows), -1.0))


def _per_air(evidence: Evidence, features: Features) -> float:
    """d ln h for 1 K in an asymptote that is taken as known; not worked out for a run in still air."""
    if evidence.model.natural_W_m2K > 0.0:
        return 0.0
    slope = as_normal(evidence, features).slope[:, 2]
    return _response(evidence, features, [0, 1], -slope)


def _response(evidence: Evidence, features: Features, free: list[int], miss: Array) -> float:
    one = as_normal(evidence, features)
    weight = one.good / one.sd**2 * evidence.counts[evidence.rows]
    slope = one.slope[:, free]
    hessian = (slope * weight[:, None]).T @ slope
    place = features.start_slope[free] / evidence.start_u_K
    hessian += np.outer(place, place)
    scale = np.sqrt(np.diag(hessian))
    step = np.linalg.pinv(hessian / np.outer(scale, scale)) @ (slope.T @ (weight * miss) / scale) / scale
    return float(step[0])


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
