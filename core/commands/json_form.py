"""Answers as the JSON objects that outsiders rely on: plain numbers, `null` for what cannot be had, never NaN."""

from __future__ import annotations

import json
from collections.abc import Iterable
from dataclasses import asdict
from math import isfinite
from typing import Any

from core.bench.air import Air
from core.bench.setup_file import setup_to_dict
from core.convection.correlation import Expectation
from core.judgement.answer import Answer
from core.judgement.expect import Expected
from core.judgement.series import Series
from core.judgement.stem import measured_stem_loss

Form = dict[str, Any]


def line(form: Form) -> str:
    """One JSON object on one line."""
    return json.dumps(_plain(form), ensure_ascii=False, allow_nan=False)


def _plain(value: Any) -> Any:
    """The value with every number finite or None, sequences as lists."""
    if isinstance(value, dict):
        return {key: _plain(one) for key, one in value.items()}
    if isinstance(value, list | tuple):
        return [_plain(one) for one in value]
    if isinstance(value, float):
        return float(value) if isfinite(value) else None
    return value


def expected_form(expected: Iterable[Expectation]) -> list[Form]:
    """What published correlations say."""
    return [
        {
            "correlation": one.correlation,
            "source": one.source,
            "nusselt": one.nusselt,
            "h_W_m2K": one.h_W_m2K,
            "band_rel": one.band_rel,
            "in_range": one.in_range,
        }
        for one in expected
    ]


def answer_form(answer: Answer, about: Form) -> Form:
    """The answer to one run; `about` (its file, or its run in a folder) stands first."""
    stem = measured_stem_loss(answer.fit, answer.setup)
    return {
        **about,
        "time_constant_s": answer.time_constant_s,
        "time_constant_u_s": answer.time_constant_u_s,
        "h_W_m2K": answer.h_W_m2K,
        "h_u_W_m2K": answer.h_u_W_m2K,
        "h_U95_W_m2K": answer.h_U95_W_m2K,
        "h_total_W_m2K": answer.h_total_W_m2K,
        "h_radiation_W_m2K": answer.h_radiation_W_m2K,
        "biot": answer.biot,
        "nusselt": answer.nusselt,
        "nusselt_u": answer.nusselt_u,
        "reynolds": answer.reynolds,
        "reynolds_u": answer.reynolds_u,
        "asymptote_C": answer.asymptote_C,
        "readings": answer.readings,
        "readings_left_out": [{"row": row, "reason": reason} for row, reason in answer.readings_left_out],
        "window_s": answer.window_s,
        "expected": expected_form(answer.expected),
        "budget": [asdict(one) for one in answer.budget],
        "checks": [asdict(one) for one in answer.checks],
        "verdict": answer.verdict,
        "reason": answer.reason,
        "coverage_factor": answer.coverage_factor,
        "degrees_of_freedom": answer.degrees_of_freedom,
        "film_temperature_C": answer.film_temperature_C,
        "prandtl": answer.prandtl,
        "velocity_at_body_m_s": answer.velocity_m_s,
        "model": answer.fit.model,
        "stem_loss_W_K": stem and stem.loss_W_K,
        "stem_loss_u_W_K": stem and stem.u_W_K,
        "setup": setup_to_dict(answer.setup),
    }


def air_form(air: Air) -> Form:
    """Properties of air."""
    return asdict(air)


def expect_form(expected: Expected) -> Form:
    """What to expect of a run."""
    return asdict(expected) | {"expected": expected_form(expected.expected)}


def series_form(series: Series, left_out: list[Form]) -> Form:
    """The law over several runs, and the runs that are not in it."""
    return {
        "C": series.C,
        "m": series.m,
        "C_u": series.C_u,
        "m_u": series.m_u,
        "correlation_ln_C_m": series.correlation_ln_C_m,
        "runs": [
            {
                "run": one.run,
                "reynolds": one.reynolds,
                "reynolds_u": one.reynolds_u,
                "nusselt": one.nusselt,
                "nusselt_u": one.nusselt_u,
                "residual": one.residual,
                "velocity_m_s": one.velocity_m_s,
                "prandtl": one.prandtl,
            }
            for one in series.runs
        ],
        "next_velocity_m_s": series.next_velocity_m_s,
        "next_reason": series.next_reason,
        "repeatability_rel": series.repeatability_rel,
        "scatter_rel": series.scatter_rel,
        "chi_square": series.chi_square,
        "degrees_of_freedom": series.degrees_of_freedom,
        "left_out": left_out,
    }
