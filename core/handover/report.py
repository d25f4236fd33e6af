"""The report of an exported folder: one page that needs nothing else, and its figures as PNG.

Every number stands with the file, line and column of the export that it comes from, or says that it was computed
here from them; what was computed again and differs from the export is listed."""

from __future__ import annotations

import platform
from collections.abc import Sequence
from hashlib import sha256
from pathlib import Path

import numpy as np

from core import __version__
from core.bench.setup_check import shown, shown_path
from core.bench.units import in_digits, with_u
from core.errors import BenchError, HandoverFault, NoAnswer
from core.handover.columns import READING_COLUMNS, RESULTS, RUN_COLUMNS, cell
from core.handover.csv_text import decoded, named_table, read_bytes
from core.handover.export import read_session, write_folder
from core.handover.figures import series_figure
from core.handover.page import METHOD, figure, mark, page, table, text
from core.handover.recompute import answers_to, law_over
from core.handover.report_run import PER_AREA, Stored, percent, run_part, title_of
from core.handover.session import ExportRun, ExportSession
from core.handover.session_files import READINGS, RUNS
from core.judgement.answer import Answer
from core.judgement.series import Series

PAGE = "index.html"
AGREE_REL = 1e-9  # results of the export and of this machine: the same sums in another order of the processor


def write_report(folder: Path) -> Path:
    """Write the report of an exported folder into the folder `report` within it; the path of the page.

    Raises MissingLibrary without Matplotlib, BadReadings for a damaged export, HandoverFault where nothing can be
    written or where `report` holds other things."""
    files = report_files(folder)
    target = folder / "report"
    if target.exists():
        foreign = [one.name for one in target.iterdir() if one.name != PAGE and one.suffix != ".png"]
        if foreign:
            raise HandoverFault(
                f"{shown_path(target)} holds '{shown(foreign[0])}', which no report wrote; move it away."
            )
    write_folder(target, files)
    return target / PAGE


def report_files(folder: Path) -> dict[str, bytes]:
    """The page and the figures of an exported folder, name to bytes."""
    session = read_session(folder)
    answers = answers_to(session)
    stored = _stored(folder)
    figures: dict[str, bytes] = {}
    parts = [_summary(session, answers, stored), _law(session, answers, stored, figures)]
    for number, (run, answer) in enumerate(zip(session.runs, answers, strict=True), 1):
        parts.append(run_part(number, run, answer, stored[run.run], figures))
    parts += [_differences(session, answers, stored), _method(folder)]
    title = session.name or folder.resolve().name
    invented = any(run.invented for run in session.runs)
    notice = (
        '<p class="invented">The numbers of this session are invented; they show what a report looks like.</p>'
    )
    dates = sorted(run.recorded_at[:10] for run in session.runs if run.recorded_at)
    when = f", {dates[0]}" + (f" to {dates[-1]}" if dates[-1] != dates[0] else "") if dates else ""
    count = f"{len(session.runs)} run" + ("s" if len(session.runs) != 1 else "")
    head = f'<h1>{text(title)}</h1>\n<p class="soft">Forced convection from cooling curves: {count}{when}</p>\n'
    body = head + (notice if invented else "") + "\n".join(parts)
    return {PAGE: page(title, body).encode(), **figures}


def _stored(folder: Path) -> dict[str, Stored]:
    lines: dict[str, list[int]] = {}
    for line, row in _fields(folder / READINGS, [one.name for one in READING_COLUMNS]):
        lines.setdefault(row["run"].removeprefix("'"), []).append(line)
    found = {}
    for line, row in _fields(folder / RUNS, [one.name for one in RUN_COLUMNS]):
        run = row["run"].removeprefix("'")
        found[run] = Stored(line, row, tuple(lines.get(run, ())))
    return found


def _fields(path: Path, known: Sequence[str]) -> list[tuple[int, dict[str, str]]]:
    return list(named_table(decoded(read_bytes(path), str(path)), str(path), known, ["run"]))


def _summary(session: ExportSession, answers: Sequence[Answer | BenchError], stored: dict[str, Stored]) -> str:
    rows = []
    for number, (run, answer) in enumerate(zip(session.runs, answers, strict=True), 1):
        link = f'<a href="#run-{number}">{text(title_of(run))}</a>'
        decided = text(run.decision)
        place = f"{RUNS}:{stored[run.run].line}"
        if isinstance(answer, BenchError):
            rows.append([link, text(str(answer)), "", "", "", "", decided, place])
            continue
        rows.append(
            [
                link,
                with_u(answer.h_W_m2K, answer.h_U95_W_m2K),
                percent(answer.h_U95_W_m2K / answer.h_W_m2K),
                with_u(answer.nusselt, answer.nusselt_u),
                with_u(answer.reynolds, answer.reynolds_u),
                mark(answer.verdict),
                decided,
                place,
            ]
        )
    head = ["run", f"h ± U95 in {PER_AREA}", "U95", "Nu ± u", "Re ± u", "verdict", "decided", "from"]
    return '<h2 class="flow">All runs</h2>\n' + table(head, rows)


def _law(
    session: ExportSession,
    answers: Sequence[Answer | BenchError],
    stored: dict[str, Stored],
    figures: dict[str, bytes],
) -> str:
    try:
        series, left_out = law_over(session, answers)
    except NoAnswer as error:
        return f'<h2 class="flow">The law over the speeds</h2>\n<p>{text(str(error))}</p>\n'
    names = {one.run for one in series.runs}
    pairs = zip(session.runs, answers, strict=True)
    inside = [answer for run, answer in pairs if run.run in names and isinstance(answer, Answer)]
    figures["law.png"] = series_figure(series, inside)
    caption = (
        "Every run with its standard uncertainties, the law, and published correlations where they are valid."
    )
    C, m = with_u(series.C, series.C_u), with_u(series.m, series.m_u)
    joint = in_digits(series.correlation_ln_C_m, 4)
    return (
        '<h2 class="flow">The law over the speeds</h2>\n'
        f'<p class="number">Nu = ({C}) · Re<sup>{m}</sup> · Pr<sup>1/3</sup></p>\n'
        f'<p class="soft">± standard uncertainty; the correlation of ln C and m is {joint}. '
        f"{text(series.next_reason)}</p>\n"
        + figure(figures["law.png"], "Nusselt number over Reynolds number with the fitted law", caption)
        + _law_table(series, stored)
        + "".join(f"<p>Not in the law: {text(run)}. {text(reason)}</p>\n" for run, reason in left_out)
    )


def _law_table(series: Series, stored: dict[str, Stored]) -> str:
    rows = [
        [
            text(one.run),
            f"{in_digits(one.velocity_m_s)} m/s",
            with_u(one.reynolds, one.reynolds_u),
            with_u(one.nusselt, one.nusselt_u),
            f"{100 * one.residual:+.2f} %".replace("-", "−"),
            stored[one.run].at("reynolds, nusselt"),
        ]
        for one in series.runs
    ]
    return table(["run", "speed", "Re ± u", "Nu ± u", "off the law", "from"], rows)


def _differences(session: ExportSession, answers: Sequence[Answer | BenchError], stored: dict[str, Stored]) -> str:
    rows = []
    for run, answer in zip(session.runs, answers, strict=True):
        if isinstance(answer, BenchError) or not stored[run.run].fields.get("h_W_m2K"):
            continue
        again = ExportRun(run.run, run.kind, run.setup, run.readings, answer=answer)
        for column, value in RESULTS:
            old, new = stored[run.run].fields.get(column.name, ""), cell(value(session, again))
            if column.datatype == "double" and not _agree(old, new):
                rows.append(
                    [
                        text(run.run),
                        column.name,
                        text(old or "—"),
                        text(new or "—"),
                        stored[run.run].at(column.name),
                    ]
                )
    if not rows:
        said = "Every result was computed again from the readings and agrees with the export."
        return f'<h2 class="flow">Export and report</h2>\n<p>{said}</p>\n'
    said = "These results, computed again from the readings, differ from the export; another version wrote it."
    head = ["run", "quantity", "in the export", "here", "from"]
    return f'<h2 class="flow">Export and report</h2>\n<p>{said}</p>\n' + table(head, rows)


def _agree(old: str, new: str) -> bool:
    if not old or not new:
        return old == new
    return abs(float(old) - float(new)) <= AGREE_REL * max(abs(float(old)), abs(float(new)), 1e-12)


def _method(folder: Path) -> str:
    import matplotlib as mpl

    rows = [
        ["Cooltally", __version__],
        ["Python", platform.python_version()],
        ["NumPy", np.__version__],
        ["Matplotlib", mpl.__version__],
    ]
    sums = [[name, f"<code>{sha256(read_bytes(folder / name)).hexdigest()}</code>"] for name in (RUNS, READINGS)]
    return (
        "<h2>How it was computed</h2>\n"
        + METHOD
        + f"<p><b>Traceability.</b> <code>{RUNS}:3 h_W_m2K</code> is line 3, column h_W_m2K of that file in the "
        "exported folder; readings are named by their lines. csv-metadata.json tells the meaning and unit of each "
        "column.</p>\n<h3>Versions</h3>\n"
        + table(["program", "version"], rows)
        + "<h3>Files read (SHA-256)</h3>\n"
        + table(["file", "sum"], sums)
    )
