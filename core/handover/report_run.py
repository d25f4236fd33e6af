"""One run's part of a report: its answer, figures, budget, checks and bench, each number with where it stands."""

from __future__ import annotations

from dataclasses import dataclass

from core.bench.setup_check import descriptions
from core.bench.units import in_digits, with_u
from core.errors import BenchError
from core.handover.columns import cell, setup_columns
from core.handover.figures import budget_figure, curve_figure
from core.handover.page import figure, halves, mark, table, text
from core.handover.session import ExportRun
from core.handover.session_files import READINGS, RUNS
from core.judgement.answer import Answer

PER_AREA = "W/(m²·K)"


@dataclass(frozen=True, slots=True)
class Stored:
    """Where a run stands in the export: its line and fields in runs.csv, the lines of its readings."""

    line: int
    fields: dict[str, str]
    readings: tuple[int, ...]

    def at(self, column: str) -> str:
        """The place of one value."""
        return f"{RUNS}:{self.line} {column}"


def title_of(run: ExportRun) -> str:
    """What a run is called on the page."""
    return f"{run.run} · {run.name}" if run.name else run.run


def percent(share: float | None) -> str:
    """A ratio as a percentage."""
    if share is None:
        return "—"
    return "< 0.01 %" if 0.0 < abs(share) < 1e-4 else f"{in_digits(100 * share, 2)} %"


def run_part(
    number: int, run: ExportRun, answer: Answer | BenchError, stored: Stored, figures: dict[str, bytes]
) -> str:
    lines = stored.readings
    source = f"{READINGS}:{lines[0]}–{lines[-1]}" if lines else f"{READINGS}: no reading"
    head = f'<h2 id="run-{number}">{text(title_of(run))}</h2>\n'
    about = [run.kind, "invented numbers" if run.invented else "", run.recorded_at, run.note]
    head += f'<p class="soft">{text(" · ".join(one for one in about if one))}</p>\n'
    if run.decision:
        reason = f": {run.decision_reason}" if run.decision_reason else ""
        head += f"<p>Decided by a person: {text(run.decision + reason)}</p>\n"
    if isinstance(answer, BenchError):
        return head + f"<p>{text(str(answer))}</p>\n" + _setup_table(run, stored)
    curve = figures[f"run-{number}-curve.png"] = curve_figure(run.readings, answer)
    budget = figures[f"run-{number}-budget.png"] = budget_figure(answer)
    return (
        head
        + f"<p>{mark(answer.verdict)} {text(answer.reason)}</p>\n"
        + f'<p class="number">h = {text(with_u(answer.h_W_m2K, answer.h_U95_W_m2K, PER_AREA))}</p>\n'
        + figure(
            curve, "Cooling curve with readings, and residuals", f"Readings and fit, and what is left. {source}"
        )
        + _numbers(answer, stored)
        + "<h3>Where the uncertainty comes from</h3>\n"
        + figure(budget, "Shares of the variance of h", "Shares below 0.1 % are not drawn.")
        + _budget_table(answer)
        + "<h3>Checks</h3>\n"
        + _checks(answer)
        + "<h3>What published correlations expect</h3>\n"
        + _expected(answer)
        + _left_out(answer, stored)
        + _setup_table(run, stored)
    )


def _numbers(answer: Answer, stored: Stored) -> str:
    at = stored.at
    fit = answer.fit
    rows = [
        [
            "coefficient of forced convection h",
            with_u(answer.h_W_m2K, answer.h_u_W_m2K, PER_AREA),
            "u",
            at("h_W_m2K"),
        ],
        [
            "expanded uncertainty",
            f"{in_digits(answer.h_U95_W_m2K, 2)} {PER_AREA}",
            f"k = {in_digits(answer.coverage_factor)}",
            at("h_U95_W_m2K"),
        ],
        [
            "with radiation and stem loss",
            f"{in_digits(answer.h_total_W_m2K, 4)} {PER_AREA}",
            "",
            at("h_total_W_m2K"),
        ],
        ["radiation", f"{in_digits(answer.h_radiation_W_m2K)} {PER_AREA}", "", at("h_radiation_W_m2K")],
        ["stem loss", f"{in_digits(fit.h_stem_W_m2K)} {PER_AREA}", "", at("h_stem_W_m2K")],
        [
            "time constant",
            with_u(answer.time_constant_s, answer.time_constant_u_s, "s"),
            "u, readings alone",
            at("time_constant_s"),
        ],
        ["Nusselt number", with_u(answer.nusselt, answer.nusselt_u), "u", at("nusselt")],
        ["Reynolds number", with_u(answer.reynolds, answer.reynolds_u), "u", at("reynolds")],
        ["Biot number", in_digits(answer.biot), f"model: {fit.model}", at("biot")],
        ["Prandtl number", in_digits(answer.prandtl), "", at("prandtl")],
        ["film temperature", f"{in_digits(answer.film_temperature_C)} °C", "", at("film_temperature_C")],
        ["velocity at the body", f"{in_digits(answer.velocity_m_s)} m/s", "", at("velocity_at_body_m_s")],
        ["asymptote", f"{in_digits(answer.asymptote_C, 4)} °C", "", at("asymptote_C")],
        ["readings in the fit", str(answer.readings), "", at("readings")],
        [
            "window",
            f"{answer.window_s[0]:.1f} to {answer.window_s[1]:.1f} s",
            f"start set by {fit.start_by}",
            at("window_from_s"),
        ],
    ]
    return table(["quantity", "value", "", "from"], [[*map(text, row)] for row in rows])


def _budget_table(answer: Answer) -> str:
    rows = [
        [
            text(one.input),
            text(f"{in_digits(one.value, 4)} {one.unit}".rstrip()),
            text(f"{in_digits(one.u, 2)} {one.unit}".rstrip()),
            in_digits(one.sensitivity),
            percent(one.share),
        ]
        for one in sorted(answer.budget, key=lambda one: -one.share)
    ]
    return table(["input", "value", "u", "dh/dinput", "share"], rows)


def _checks(answer: Answer) -> str:
    rows = [
        [
            mark(one.outcome),
            text(one.name),
            text(f"{in_digits(one.value)} {one.unit}".rstrip()) if one.value is not None else "—",
            text(f"{in_digits(one.limit)} {one.unit}".rstrip()) if one.limit is not None else "—",
            f"{text(one.advice)}<small>limit: {text(one.source)}</small>",
        ]
        for one in answer.checks
    ]
    return table(["outcome", "check", "found", "limit", "what it means"], rows)


def _expected(answer: Answer) -> str:
    rows = [
        [
            text(one.correlation),
            in_digits(one.nusselt),
            f"{in_digits(one.h_W_m2K)} {PER_AREA}",
            f"± {percent(one.band_rel)}",
            "yes" if one.in_range else "no",
            text(one.source),
        ]
        for one in answer.expected
    ]
    return table(["correlation", "Nu", "h", "stated band", "valid here", "source"], rows)


def _left_out(answer: Answer, stored: Stored) -> str:
    if not answer.readings_left_out:
        return ""
    rows = [
        [str(row), text(why), f"{READINGS}:{stored.readings[row - 1]}"] for row, why in answer.readings_left_out
    ]
    return "<h3>Readings left out</h3>\n" + table(["reading", "reason", "from"], rows)


def _setup_table(run: ExportRun, stored: Stored) -> str:
    rows = []
    for name, (section, key, column) in setup_columns().items():
        value = getattr(getattr(run.setup, section), key)
        if value not in (None, ()):
            meaning = text(descriptions(section)[key].meaning)
            written = value if isinstance(value, str) else cell(value)
            place = f'<small class="at">{stored.at(name)}</small>'
            rows.append([meaning + place, text(f"{written} {column.unit}".rstrip())])
    return "<h3>The bench</h3>\n" + halves(["", "value"], rows)
