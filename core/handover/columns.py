"""The columns of runs.csv and readings.csv: name, datatype, unit and meaning, to write, read and describe."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from math import isfinite
from typing import Literal

from core import __version__
from core.bench.setup import SECTIONS
from core.bench.setup_check import descriptions
from core.handover.csv_text import harmless
from core.handover.session import ExportRun, ExportSession
from core.judgement.stem import measured_stem_loss

Datatype = Literal["string", "double", "integer", "boolean", "dateTime", "doubles"]


@dataclass(frozen=True, slots=True)
class Column:
    """One column. Numbers are written so that they read back to the same binary value; None is an empty field."""

    name: str
    datatype: Datatype
    meaning: str
    unit: str = ""
    needed: bool = False


def cell(value: object) -> str:
    """A value as the text of a field: empty for None and for what is no finite number."""
    if value is None:
        return ""
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, tuple):
        return " ".join(repr(float(one)) for one in value)
    if isinstance(value, str):
        return harmless(value)
    if isinstance(value, int):
        return str(value)
    if isinstance(value, float):
        return repr(float(value)) if isfinite(value) else ""
    raise TypeError(f"no field can hold a {type(value).__name__}")


def setup_columns() -> dict[str, tuple[str, str, Column]]:
    """Column name -> section, key and column of every value of a set-up."""
    kinds: dict[str, Datatype] = {
        "number": "double",
        "integer": "integer",
        "numbers": "doubles",
        "choice": "string",
        "text": "string",
    }
    return {
        f"{section}_{key}": (section, key, Column(f"{section}_{key}", kinds[one.kind], one.meaning, one.unit))
        for section in SECTIONS
        for key, one in descriptions(section).items()
    }


RunValue = Callable[[ExportSession, ExportRun], object]

ABOUT: tuple[tuple[Column, RunValue], ...] = (
    (Column("session", "string", "Name of the session."), lambda s, r: s.name),
    (Column("run", "string", "The run's name, unique in the session.", needed=True), lambda s, r: r.run),
    (Column("name", "string", "What the person called the run."), lambda s, r: r.name),
    (Column("note", "string", "What the person wrote to it."), lambda s, r: r.note),
    (Column("kind", "string", "measured, still-air, rehearsal or imported.", needed=True), lambda s, r: r.kind),
    (Column("invented", "boolean", "Whether the numbers are made up.", needed=True), lambda s, r: r.invented),
    (
        Column("recorded_at", "dateTime", "Wall time at the start, for the record only."),
        lambda s, r: r.recorded_at,
    ),
    (Column("stamp_source", "string", "Which clock stamped the taps."), lambda s, r: r.stamp_source),
    (
        Column("stamp_halfwidth_s", "double", "Half-width of the time stamps' error.", "s", needed=True),
        lambda s, r: r.readings.stamp_halfwidth_s,
    ),
    (
        Column(
            "start_s", "double", "Start of the fit window as a person set it; empty if the program chose.", "s"
        ),
        lambda s, r: r.start_s,
    ),
    (Column("marks", "string", "Moments that are no readings, with their time in s."), lambda s, r: r.marks),
    (Column("decision", "string", "A person's word on the run: keep, look or discard."), lambda s, r: r.decision),
    (Column("decision_reason", "string", "The reason given for it."), lambda s, r: r.decision_reason),
    (
        Column("true_h_W_m2K", "double", "The h that a simulation was made with.", "W/(m²·K)"),
        lambda s, r: r.true_h_W_m2K,
    ),
)


def _of(name: str) -> RunValue:
    return lambda s, r: getattr(r.answer, name) if r.answer else None


def _of_fit(name: str) -> RunValue:
    return lambda s, r: getattr(r.answer.fit, name) if r.answer else None


def _stem(name: str) -> RunValue:
    def value(_: ExportSession, r: ExportRun) -> object:
        stem = measured_stem_loss(r.answer.fit, r.answer.setup) if r.answer else None
        return getattr(stem, name) if stem else None

    return value


def _checks(_: ExportSession, r: ExportRun) -> object:
    return "; ".join(f"{one.name}: {one.outcome}" for one in r.answer.checks) if r.answer else None


def _budget(_: ExportSession, r: ExportRun) -> object:
    return "; ".join(f"{one.input}: {one.share!r}" for one in r.answer.budget) if r.answer else None


def _expected(_: ExportSession, r: ExportRun) -> object:
    return "; ".join(f"{one.correlation}: {one.h_W_m2K!r}" for one in r.answer.expected) if r.answer else None


RESULTS: tuple[tuple[Column, RunValue], ...] = (
    (Column("verdict", "string", "keep, look or again."), _of("verdict")),
    (Column("reason", "string", "The sentence that matters most."), _of("reason")),
    (Column("no_answer", "string", "Why there is no answer."), lambda s, r: r.no_answer or None),
    (Column("h_W_m2K", "double", "Coefficient of forced convection.", "W/(m²·K)"), _of("h_W_m2K")),
    (Column("h_u_W_m2K", "double", "Its standard uncertainty, whole budget.", "W/(m²·K)"), _of("h_u_W_m2K")),
    (Column("h_U95_W_m2K", "double", "Its expanded uncertainty, 95 %.", "W/(m²·K)"), _of("h_U95_W_m2K")),
    (Column("coverage_factor", "double", "U95 over u."), _of("coverage_factor")),
    (
        Column("degrees_of_freedom", "double", "Effective degrees of freedom; empty if infinite."),
        _of("degrees_of_freedom"),
    ),
    (
        Column("h_total_W_m2K", "double", "Before radiation and stem loss are taken off.", "W/(m²·K)"),
        _of("h_total_W_m2K"),
    ),
    (
        Column("h_radiation_W_m2K", "double", "Share of radiation in h_total.", "W/(m²·K)"),
        _of("h_radiation_W_m2K"),
    ),
    (Column("h_stem_W_m2K", "double", "Share of the stem loss in h_total.", "W/(m²·K)"), _of_fit("h_stem_W_m2K")),
    (Column("stem_loss_W_K", "double", "Stem loss that a still-air run measured.", "W/K"), _stem("loss_W_K")),
    (Column("stem_loss_u_W_K", "double", "Its standard uncertainty.", "W/K"), _stem("u_W_K")),
    (Column("time_constant_s", "double", "Time constant of the cooling.", "s"), _of("time_constant_s")),
    (
        Column("time_constant_u_s", "double", "Its standard uncertainty, readings and fit alone.", "s"),
        _of("time_constant_u_s"),
    ),
    (Column("biot", "double", "Biot number."), _of("biot")),
    (Column("nusselt", "double", "Nusselt number."), _of("nusselt")),
    (Column("nusselt_u", "double", "Its standard uncertainty."), _of("nusselt_u")),
    (Column("reynolds", "double", "Reynolds number."), _of("reynolds")),
    (Column("reynolds_u", "double", "Its standard uncertainty."), _of("reynolds_u")),
    (Column("prandtl", "double", "Prandtl number of the air at film temperature."), _of("prandtl")),
    (Column("film_temperature_C", "double", "Mean of surface and air.", "°C"), _of("film_temperature_C")),
    (
        Column("velocity_at_body_m_s", "double", "Velocity after narrowing and blockage.", "m/s"),
        _of("velocity_m_s"),
    ),
    (
        Column("asymptote_C", "double", "Fitted temperature towards which the body cools.", "°C"),
        _of("asymptote_C"),
    ),
    (Column("start_C", "double", "Fitted temperature at the start of the window.", "°C"), _of_fit("start_C")),
    (Column("readings", "integer", "Readings in the fit."), _of("readings")),
    (
        Column("window_from_s", "double", "Start of the fit window.", "s"),
        lambda s, r: r.answer.window_s[0] if r.answer else None,
    ),
    (
        Column("window_to_s", "double", "End of the fit window.", "s"),
        lambda s, r: r.answer.window_s[1] if r.answer else None,
    ),
    (Column("window_start_by", "string", "Who set its start: program or person."), _of_fit("start_by")),
    (Column("model", "string", "Model of conduction in the body."), _of_fit("model")),
    (Column("checks", "string", "Every check and its outcome."), _checks),
    (Column("budget", "string", "Every input of the uncertainty budget and its share of the variance."), _budget),
    (Column("expected", "string", "h by published correlations, in W/(m²·K)."), _expected),
    (Column("program", "string", "Version that computed the results."), lambda s, r: f"Cooltally {__version__}"),
)

READING_COLUMNS: tuple[Column, ...] = (
    Column("run", "string", "The run, as in runs.csv.", needed=True),
    Column("row", "integer", "Number of the reading in its run, from 1.", needed=True),
    Column("time_s", "double", "Time from the start of the record.", "s", needed=True),
    Column("reading_C", "double", "What the display showed.", "°C", needed=True),
    Column("used", "boolean", "Whether the reading is in the fit; empty where there is no fit."),
    Column("left_out_cause", "string", "Why it is left out, in a word."),
    Column("left_out_reason", "string", "Why it is left out, in a sentence."),
    Column("left_out_by", "string", "Who left it out: program or person."),
    Column("ruling", "string", "A person's word on it: keep or leave-out; empty if none was said."),
    Column("ruling_by", "string", "Who said so."),
    Column("residual_s", "double", "Tapped minus fitted moment; empty where there is none.", "s"),
    Column("residual_K", "double", "Shown minus fitted temperature; empty where there is none.", "K"),
    Column("residual_score", "double", "Residual over its expected spread; about N(0, 1) for a sound reading."),
)

RUN_COLUMNS: tuple[Column, ...] = (
    *(column for column, _ in ABOUT),
    *(column for _, _, column in setup_columns().values()),
    *(column for column, _ in RESULTS),
)


def run_row(session: ExportSession, run: ExportRun) -> list[str]:
    """The fields of one run, in the order of RUN_COLUMNS."""
    setup = [cell(getattr(getattr(run.setup, section), key)) for section, key, _ in setup_columns().values()]
    return [
        *(cell(value(session, run)) for _, value in ABOUT),
        *setup,
        *(cell(value(session, run)) for _, value in RESULTS),
    ]


def reading_rows(run: ExportRun) -> list[list[str]]:
    """The fields of the readings of one run, in the order of READING_COLUMNS."""
    fit = run.answer.fit if run.answer else None
    left_out = {one.row: one for one in fit.left_out} if fit else {}
    rulings = {one.row: one for one in run.rulings}
    rows = []
    for i, (time_s, reading_C) in enumerate(zip(run.readings.time_s, run.readings.reading_C, strict=True)):
        out, said = left_out.get(i), rulings.get(i)
        values = (
            run.run,
            i + 1,
            time_s,
            reading_C,
            fit.used[i] if fit else None,
            out.cause if out else None,
            out.reason if out else None,
            out.by if out else None,
            ("keep" if said.keep else "leave-out") if said else None,
            said.by if said else None,
            fit.residual_s[i] if fit else None,
            fit.residual_K[i] if fit else None,
            fit.residual_score[i] if fit else None,
        )
        rows.append([cell(one) for one in values])
    return rows
