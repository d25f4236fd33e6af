"""Answers as lines that an engineer reads in a terminal: aligned, with units, uncertainties and reasons."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from core.bench.air import Air
from core.bench.units import in_digits, with_u
from core.convection.correlation import Expectation
from core.judgement.answer import Answer
from core.judgement.expect import Expected
from core.judgement.series import Series
from core.judgement.stem import measured_stem_loss

PER_AREA = "W/(m²·K)"


def columns(rows: Iterable[Sequence[str]], indent: int = 2) -> str:
    """Rows of cells as lines, each column as wide as its widest cell."""
    rows = [list(row) for row in rows]
    widths = [max(len(row[i]) for row in rows if i < len(row)) for i in range(max(map(len, rows), default=0))]
    lines = ("  ".join(cell.ljust(width) for cell, width in zip(row, widths, strict=False)) for row in rows)
    return "\n".join(" " * indent + line.rstrip() for line in lines)


def percent(share: float | None, digits: int = 2) -> str:
    """A ratio as a percentage."""
    if share is None:
        return "—"
    return "< 0.01 %" if 0.0 < abs(share) < 1e-4 else f"{in_digits(100 * share, digits)} %"


def _expected(expected: Sequence[Expectation]) -> str:
    if not expected:
        return "  none for this body and this flow"
    head = ("correlation", "Nu", "h", "band", "valid here", "source")
    rows = [
        (
            one.correlation,
            in_digits(one.nusselt),
            f"{in_digits(one.h_W_m2K)} {PER_AREA}",
            f"± {percent(one.band_rel)}",
            "yes" if one.in_range else "no",
            one.source,
        )
        for one in expected
    ]
    return columns([head, *rows])


def answer_text(answer: Answer, title: str) -> str:
    """The whole answer to one run."""
    rel = answer.h_U95_W_m2K / answer.h_W_m2K if answer.h_W_m2K else None
    from_s, to_s = answer.window_s
    numbers = [
        ("h", with_u(answer.h_W_m2K, answer.h_U95_W_m2K, PER_AREA), f"U95 = {percent(rel)}, k = {_k(answer)}"),
        ("h with radiation and stem", in_digits(answer.h_total_W_m2K, 4) + f" {PER_AREA}"),
        ("radiation", in_digits(answer.h_radiation_W_m2K) + f" {PER_AREA}"),
        (
            "time constant",
            with_u(answer.time_constant_s, answer.time_constant_u_s, "s"),
            "u, readings and fit alone",
        ),
        ("Nusselt number", with_u(answer.nusselt, answer.nusselt_u), "u"),
        ("Reynolds number", with_u(answer.reynolds, answer.reynolds_u), "u"),
        ("Biot number", in_digits(answer.biot), f"model: {answer.fit.model}"),
        ("asymptote", f"{in_digits(answer.asymptote_C, 4)} °C"),
        ("film temperature", f"{in_digits(answer.film_temperature_C)} °C"),
        ("velocity at the body", f"{in_digits(answer.velocity_m_s)} m/s"),
        (
            "readings",
            f"{answer.readings} used, {len(answer.readings_left_out)} left out",
            f"{from_s:.1f} to {to_s:.1f} s",
        ),
    ]
    stem = measured_stem_loss(answer.fit, answer.setup)
    if stem is not None:
        most = f"u, most of it from {stem.parts[0][0]}"
        numbers.append(("stem loss", with_u(stem.loss_W_K, stem.u_W_K, "W/K"), most))
    parts = [f"{title}\n{answer.verdict.upper()}: {answer.reason}", columns(numbers)]
    if answer.readings_left_out:
        parts.append("left out\n" + columns((f"row {row}", reason) for row, reason in answer.readings_left_out))
    parts.append("published correlations\n" + _expected(answer.expected))
    budget = [("share", "input", "value", "u")]
    for one in sorted(answer.budget, key=lambda one: -one.share):
        u = f"{in_digits(one.u, 2)} {one.unit}".rstrip()
        budget.append((percent(one.share), one.input, f"{in_digits(one.value, 4)} {one.unit}".rstrip(), u))
    parts.append("budget of h\n" + columns(budget))
    checks = [
        (one.outcome, one.name, _found(one.value, one.unit), f"limit {_found(one.limit, one.unit)}", one.advice)
        for one in answer.checks
    ]
    parts.append("checks\n" + columns(checks))
    return "\n\n".join(parts)


def _k(answer: Answer) -> str:
    return in_digits(answer.coverage_factor)


def _found(value: float | None, unit: str) -> str:
    return f"{in_digits(value)} {unit}".rstrip() if value is not None else "—"


def air_text(air: Air) -> str:
    """Properties of air."""
    return columns(
        [
            ("density", in_digits(air.density_kg_m3, 5), "kg/m³"),
            ("viscosity", in_digits(1e6 * air.viscosity_Pa_s, 5), "µPa·s"),
            ("kinematic viscosity", in_digits(1e6 * air.kinematic_viscosity_m2_s, 5), "mm²/s"),
            ("conductivity", in_digits(1e3 * air.conductivity_W_mK, 5), "mW/(m·K)"),
            ("heat capacity", in_digits(air.heat_capacity_J_kgK, 5), "J/(kg·K)"),
            ("Prandtl number", in_digits(air.prandtl, 4)),
        ],
        indent=0,
    )


def expect_text(expected: Expected) -> str:
    """What to expect of a run."""
    head = columns(
        [
            ("h", f"{in_digits(expected.h_W_m2K)} {PER_AREA}"),
            ("time constant", f"{in_digits(expected.time_constant_s)} s"),
            ("length of the run", f"{in_digits(expected.run_length_s)} s"),
            ("changes of the display", f"{in_digits(expected.changes_per_s_start, 2)} a second at the start"),
            ("record by", expected.mode, expected.mode_reason),
            ("U95 of h", percent(expected.h_U95_rel)),
            ("film temperature", f"{in_digits(expected.film_temperature_C)} °C"),
            ("velocity at the narrowest", f"{in_digits(expected.velocity_narrowest_m_s)} m/s"),
            ("Reynolds number", in_digits(expected.reynolds)),
        ],
        indent=0,
    )
    return f"{head}\n\npublished correlations\n{_expected(expected.expected)}"


def series_text(series: Series, left_out: Sequence[tuple[str, str]]) -> str:
    """The law over several runs."""
    head = columns(
        [
            ("Nu = C·Re^m·Pr^(1/3)",),
            ("C", with_u(series.C, series.C_u), "u"),
            ("m", with_u(series.m, series.m_u), "u"),
            ("correlation of ln C and m", in_digits(series.correlation_ln_C_m, 4)),
            ("next speed", f"{in_digits(series.next_velocity_m_s)} m/s", series.next_reason),
        ],
        indent=0,
    )
    rows = [("run", "Re (u)", "Nu (u)", "off the law")]
    rows += [
        (one.run, with_u(one.reynolds, one.reynolds_u), with_u(one.nusselt, one.nusselt_u), percent(one.residual))
        for one in series.runs
    ]
    parts = [head, columns(rows)]
    if left_out:
        parts.append("not in the law\n" + columns(left_out))
    return "\n\n".join(parts)
