"""The figures of a report as PNG, drawn by Matplotlib; the same answer gives the same bytes."""

from __future__ import annotations

import io
from collections.abc import Sequence
from typing import Any

import numpy as np

from core.bench.readings import Readings
from core.errors import MissingLibrary
from core.judgement.answer import Answer
from core.judgement.series import Series

WIDTH_IN = 7.2
DOTS_PER_IN = 160
BLUE, RED, GREEN, GREY = "#0072B2", "#D55E00", "#009E73", "#767676"  # Okabe and Ito (2008), and a grey
_STYLE: dict[Any, Any] = {
    "font.size": 9.0,
    "axes.spines.top": False,
    "axes.spines.right": False,
    "axes.edgecolor": GREY,
    "axes.labelcolor": "#222222",
    "xtick.color": "#444444",
    "ytick.color": "#444444",
    "axes.unicode_minus": True,
    "legend.frameon": False,
}


def _figure(height_in: float) -> Any:
    """An empty figure. Raises MissingLibrary where Matplotlib is not installed."""
    try:
        import matplotlib as mpl
        from matplotlib.figure import Figure
    except ImportError:
        raise MissingLibrary(
            "The report's figures need Matplotlib, which is not installed; run: pip install 'cooltally[report]'."
        ) from None
    mpl.rcParams.update(_STYLE)
    return Figure(figsize=(WIDTH_IN, height_in), dpi=DOTS_PER_IN, layout="constrained")


def _png(figure: Any) -> bytes:
    out = io.BytesIO()
    figure.savefig(out, format="png", metadata={"Software": None})
    return out.getvalue()


def curve_figure(readings: Readings, answer: Answer) -> bytes:
    """The readings and the fitted curve above, the residuals of the readings in the fit below."""
    fit = answer.fit
    figure = _figure(4.6)
    upper, lower = figure.subplots(2, 1, sharex=True, height_ratios=(3, 1.2))
    used = np.array(fit.used, dtype=bool)
    time_s, reading_C = np.array(readings.time_s), np.array(readings.reading_C)
    upper.plot(fit.curve_time_s, fit.curve_C, color=BLUE, lw=1.4, label="fitted curve")
    upper.plot(time_s[used], reading_C[used], "o", ms=3.2, mfc="white", mec="#222222", mew=0.8, label="readings")
    if not used.all():
        upper.plot(time_s[~used], reading_C[~used], "x", ms=5, mew=1.2, color=RED, label="left out")
    upper.axhline(answer.asymptote_C, color=GREY, lw=0.8, ls=(0, (4, 3)), label="asymptote")
    upper.set_ylabel("display / °C")
    upper.legend(loc="upper right")
    change = answer.setup.recording.mode == "change"
    values = fit.residual_s if change else fit.residual_K
    kept = [(t, value) for t, value, one in zip(time_s, values, used, strict=True) if one and value is not None]
    lower.axhline(0.0, color=GREY, lw=0.8)
    if kept:
        times, residuals = zip(*kept, strict=True)
        lower.vlines(times, 0.0, residuals, color=BLUE, lw=0.8)
        lower.plot(times, residuals, "o", ms=2.6, color=BLUE)
    lower.set_ylabel("tapped − fitted / s" if change else "shown − fitted / K")
    lower.set_xlabel("time from the start of the record / s")
    for axes in (upper, lower):
        axes.axvspan(*answer.window_s, color=BLUE, alpha=0.05, lw=0)
    figure.align_ylabels()
    return _png(figure)


def budget_figure(answer: Answer) -> bytes:
    """The inputs' shares of the variance of h, the largest on top."""
    lines = sorted(answer.budget, key=lambda one: one.share)
    lines = [one for one in lines if one.share >= 0.001] or lines[-1:]
    figure = _figure(0.7 + 0.24 * len(lines))
    axes = figure.subplots()
    shares = [100 * one.share for one in lines]
    bars = axes.barh([one.input for one in lines], shares, color=BLUE, height=0.62)
    axes.bar_label(bars, [f"{share:.1f} %" for share in shares], padding=3, color="#222222")
    axes.set_xlabel("share of the variance of h / %")
    axes.set_xlim(0.0, 1.15 * max(*shares, 1.0))
    axes.tick_params(axis="y", length=0)
    return _png(figure)


def series_figure(series: Series, answers: Sequence[Answer]) -> bytes:
    """Nu·Pr^(−1/3) over Re with standard uncertainties, the law through them, and what correlations expect."""
    figure = _figure(4.4)
    axes = figure.subplots()
    Re = np.array([one.reynolds for one in series.runs])
    scaled = np.array([one.nusselt / one.prandtl ** (1 / 3) for one in series.runs])
    scaled_u = np.array([one.nusselt_u / one.prandtl ** (1 / 3) for one in series.runs])
    grid = np.geomspace(0.85 * Re.min(), 1.18 * Re.max(), 60)
    law = rf"$\mathrm{{Nu}} = {series.C:.3g}\;\mathrm{{Re}}^{{{series.m:.3f}}}\;\mathrm{{Pr}}^{{1/3}}$"
    axes.plot(grid, series.C * grid**series.m, color=BLUE, lw=1.4, label=law)
    axes.errorbar(
        Re,
        scaled,
        yerr=scaled_u,
        xerr=[one.reynolds_u for one in series.runs],
        fmt="o",
        ms=4,
        mfc="white",
        mec="#222222",
        ecolor="#222222",
        elinewidth=0.9,
        label="runs, ± u",
    )
    names = dict.fromkeys(one.correlation for answer in answers for one in answer.expected if one.in_range)
    for name, marker in zip(names, ("^", "s", "D", "v", "P", "*"), strict=False):
        points = [
            (answer.reynolds, one.nusselt / answer.prandtl ** (1 / 3))
            for answer in answers
            for one in answer.expected
            if one.correlation == name and one.in_range and answer.reynolds is not None
        ]
        axes.plot(
            *zip(*sorted(points), strict=True), marker=marker, ms=3.5, lw=0.7, ls=":", color=GREY, label=name
        )
    axes.set_xscale("log")
    axes.set_yscale("log")
    for axis in (axes.xaxis, axes.yaxis):
        axis.set_major_formatter("{x:g}")
        axis.set_minor_formatter("{x:g}")
    axes.tick_params(axis="both", which="both", labelsize=8)
    axes.set_xlabel("Reynolds number")
    axes.set_ylabel(r"$\mathrm{Nu}\;\mathrm{Pr}^{-1/3}$")
    axes.legend(loc="upper left")
    return _png(figure)
