"""The law over several runs, Nu = C·Re^m·Pr^(1/3), and the speed that would sharpen it most."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from math import exp, log, sqrt

import numpy as np

from core.bench.setup import Body
from core.convection.flow import undisturbed_velocity
from core.errors import NoAnswer
from core.judgement.answer import Answer
from core.judgement.budget import BENCH_INPUTS, BODY_INPUTS, Budget, budget_of
from core.judgement.power_law import Line, fit_line, line_covariance
from core.judgement.propagation import Expanded, Vector

SAME_SPEED_REL = 0.03
CALIBRATION_SHARE = 0.5
CANDIDATES = 25


@dataclass(frozen=True, slots=True)
class SeriesRun:
    """One run in the law; `residual` is ln Nu − ln of the law. `velocity_m_s` is the undisturbed stream."""

    run: str
    velocity_m_s: float
    reynolds: float
    reynolds_u: float
    nusselt: float
    nusselt_u: float
    prandtl: float
    residual: float


@dataclass(frozen=True, slots=True)
class Repeats:
    """Runs at one speed, pooled: mean Reynolds and Nusselt number, and how many runs."""

    velocity_m_s: float
    reynolds: float
    nusselt: float
    runs: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Series:
    """The law and all that belongs to it. `scatter_rel` is the scatter of Nu beyond the stated uncertainties, 0
    where there is none; `repeatability_rel` the standard deviation of Nu over repeats of one speed, None without
    repeats; `chi_square` has `degrees_of_freedom`."""

    C: float
    m: float
    C_u: float
    m_u: float
    correlation_ln_C_m: float
    runs: tuple[SeriesRun, ...]
    speeds: tuple[Repeats, ...]
    repeatability_rel: float | None
    repeatability_dof: int
    scatter_rel: float
    chi_square: float
    degrees_of_freedom: int
    next_velocity_m_s: float
    next_m_u: float
    next_reason: str


@dataclass(frozen=True, slots=True)
class _Point:
    name: str
    velocity_m_s: float
    reynolds: float
    nusselt: float
    prandtl: float
    body: Body
    budget: Budget


def law_of(
    answers: Sequence[Answer],
    names: Sequence[str] = (),
    *,
    calibration_share: float = CALIBRATION_SHARE,
    speeds_m_s: tuple[float, float] | None = None,
) -> Series:
    """Nu = C·Re^m·Pr^(1/3) over runs at different speeds.

    On logarithmic axes a straight line with errors in both variables. Runs share what they share: sizes, mass,
    heat capacity, emissivity and stem loss of one body; thermometer, tap delay and barometer of the bench; and of
    the velocity's variance the part `calibration_share`, the anemometer's calibration. A shared error moves all
    runs together, so it goes into C (and, where it acts differently on different runs, into m) at full size and is
    not averaged away; scatter is judged without it.

    Parameters
    ----------
    answers : runs in forced flow, at two speeds at least [any]
    names : names of the runs, in the same order; run 1, run 2 … if left out
    calibration_share : part of the variance of the velocity that all runs share; half, common practice, as an
        anemometer's stated accuracy covers both its calibration and the single reading [-]
    speeds_m_s : lowest and highest speed of the bench, for the next speed [m/s]; from half the highest speed
        measured, or the lowest if that is lower, to the highest measured if left out (common practice: the first
        run has the damper wide open)

    Returns
    -------
    Series

    Raises
    ------
    NoAnswer with fewer than two speeds that differ by more than 3 %

    Notes
    -----
    The next speed is the one, on 25 steps over the bench's range, that makes the standard uncertainty of m
    smallest when a run there, as sure as the nearest one so far, is added (c-optimal design for the slope).

    References
    ----------
    `core.judgement.power_law.fit_line`.
    Atkinson, Donev and Tobias, Optimum Experimental Designs, with SAS (2007), 10.4 (c-optimality).
    """
    points = _points(answers, names)
    groups = _groups(points)
    if len(groups) < 2:
        raise NoAnswer(
            f"A law over speeds needs runs at two speeds at least, more than 3 % apart, not {len(groups)}; "
            "measure one more speed."
        )
    x = np.array([log(one.reynolds) for one in points])
    y = np.array([log(one.nusselt) - log(one.prandtl) / 3.0 for one in points])
    joint = joint_covariance([(one.body, one.budget) for one in points], calibration_share)
    line = fit_line(x, y, joint)
    u = np.sqrt(np.diag(line.covariance))
    low, high = speeds_m_s or _range(points)
    following, following_u = _next_speed(points, line, (low, high), calibration_share)
    repeatability, dof = _repeatability(groups, points, line.slope)
    constant = exp(line.intercept)
    return Series(
        C=constant,
        m=line.slope,
        C_u=constant * float(u[0]),
        m_u=float(u[1]),
        correlation_ln_C_m=float(line.covariance[0, 1] / (u[0] * u[1])),
        runs=tuple(
            SeriesRun(
                one.name,
                one.velocity_m_s,
                one.reynolds,
                _output(one.budget.reynolds).u,
                one.nusselt,
                _output(one.budget.nusselt).u,
                one.prandtl,
                float(residual),
            )
            for one, residual in zip(points, line.residuals, strict=True)
        ),
        speeds=tuple(_pooled([points[i] for i in group]) for group in groups),
        repeatability_rel=repeatability,
        repeatability_dof=dof,
        scatter_rel=line.scatter,
        chi_square=line.chi_square,
        degrees_of_freedom=len(points) - 2,
        next_velocity_m_s=following,
        next_m_u=following_u,
        next_reason=f"Of {low:.1f} to {high:.1f} m/s a run at {following:.1f} m/s sharpens m most: its standard "
        f"uncertainty falls from {float(u[1]):.4f} to {following_u:.4f}.",
    )


def joint_covariance(runs: Sequence[tuple[Body, Budget]], calibration_share: float = CALIBRATION_SHARE) -> Vector:
    """Covariance of (ln Re_1 … ln Re_n, ln Nu_1 … ln Nu_n), shape (2 n, 2 n), of runs that share inputs.

    An input of the body is one and the same in all runs with an equal body, an input of the bench in all runs;
    every other input is each run's own."""
    n = len(runs)
    columns: dict[object, Vector] = {}

    def add(key: object, row: int, effect: tuple[float, float], weight: float = 1.0) -> None:
        column = columns.setdefault(key, np.zeros(2 * n))
        column[row] += weight * effect[0]
        column[n + row] += weight * effect[1]

    for row, (body, budget) in enumerate(runs):
        reynolds, nusselt = _output(budget.reynolds), _output(budget.nusselt)
        for i, one in enumerate(budget.inputs):
            effect = (
                reynolds.contributions[i] / reynolds.value,
                nusselt.contributions[i] / nusselt.value,
            )
            if one.name in BODY_INPUTS:
                add((one.name, body), row, effect)
            elif one.name in BENCH_INPUTS:
                add(one.name, row, effect)
            elif one.name == "velocity":
                add("velocity", row, effect, sqrt(calibration_share))
                add(("velocity", row), row, effect, sqrt(1.0 - calibration_share))
            else:
                add((one.name, row), row, effect)
    matrix = np.stack(list(columns.values()), axis=1)
    return np.asarray(matrix @ matrix.T, dtype=float)


def _output(output: Expanded | None) -> Expanded:
    if output is None:
        raise NoAnswer("A run in still air has no Reynolds number and takes no part in a law over speeds.")
    return output


def _points(answers: Sequence[Answer], names: Sequence[str]) -> list[_Point]:
    points = []
    for i, answer in enumerate(answers):
        if answer.nusselt is None or answer.reynolds is None:
            continue
        name = names[i] if names else f"run {i + 1}"
        velocity = undisturbed_velocity(answer.setup).value_m_s
        budget = budget_of(answer.fit, answer.setup)
        points.append(
            _Point(name, velocity, answer.reynolds, answer.nusselt, answer.prandtl, answer.setup.body, budget)
        )
    return points


def _groups(points: Sequence[_Point]) -> list[list[int]]:
    """Indices of the runs at each speed, slowest first; a run within 3 % of a group's slowest belongs to it."""
    groups: list[list[int]] = []
    for i in sorted(range(len(points)), key=lambda i: points[i].velocity_m_s):
        if groups and points[i].velocity_m_s <= points[groups[-1][0]].velocity_m_s * (1.0 + SAME_SPEED_REL):
            groups[-1].append(i)
        else:
            groups.append([i])
    return groups


def _pooled(points: Sequence[_Point]) -> Repeats:
    def mean(values: Sequence[float]) -> float:
        return exp(sum(log(one) for one in values) / len(values))

    return Repeats(
        sum(one.velocity_m_s for one in points) / len(points),
        mean([one.reynolds for one in points]),
        mean([one.nusselt for one in points]),
        tuple(one.name for one in points),
    )


def _repeatability(
    groups: Sequence[Sequence[int]], points: Sequence[_Point], slope: float
) -> tuple[float | None, int]:
    """Pooled standard deviation of ln Nu over repeats of one speed, brought to one Re, and its degrees of
    freedom."""
    squares, dof = 0.0, 0
    for group in groups:
        level = np.array([log(points[i].nusselt) - slope * log(points[i].reynolds) for i in group])
        squares += float(np.sum((level - level.mean()) ** 2))
        dof += len(group) - 1
    return (sqrt(squares / dof), dof) if dof else (None, 0)


def _range(points: Sequence[_Point]) -> tuple[float, float]:
    speeds = [one.velocity_m_s for one in points]
    return min(*speeds, 0.5 * max(speeds)), max(speeds)


def _next_speed(
    points: Sequence[_Point], line: Line, speeds_m_s: tuple[float, float], calibration_share: float
) -> tuple[float, float]:
    """The speed on the bench at which one more run makes u(m) smallest, and that u(m)."""
    best = (speeds_m_s[0], float("inf"))
    known = [(one.body, one.budget) for one in points]
    x = [log(one.reynolds) for one in points]
    for candidate in np.geomspace(*speeds_m_s, CANDIDATES):
        near = min(points, key=lambda one: abs(log(one.velocity_m_s / candidate)))
        ratio = float(candidate) / near.velocity_m_s
        joint = joint_covariance([*known, (near.body, _at_other_speed(near.budget, ratio))], calibration_share)
        added = np.array([*x, log(near.reynolds * ratio)])
        u = sqrt(float(line_covariance(added, line.slope, joint, line.scatter)[1, 1]))
        if u < best[1]:
            best = (float(candidate), u)
    return best


def _at_other_speed(budget: Budget, ratio: float) -> Budget:
    """The budget of the same run at `ratio` times its speed, the anemometer as sure in m/s as before."""
    reynolds = _output(budget.reynolds)
    parts = tuple(
        part / ratio if one.name == "velocity" else part
        for one, part in zip(budget.inputs, reynolds.contributions, strict=True)
    )
    return replace(budget, reynolds=replace(reynolds, contributions=parts))
