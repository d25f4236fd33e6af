"""The result of fitting one cooling curve, before any judgement."""

from __future__ import annotations

from dataclasses import dataclass, field


@dataclass(frozen=True, slots=True)
class LeftOut:
    """One reading outside the fit: `row` counts from 0; `cause` is a short word (start, late, doubled, missed,
    slip, dropped), `reason` the sentence for the person, `by` who decided (program or person)."""

    row: int
    cause: str
    reason: str
    by: str = "program"


@dataclass(frozen=True, slots=True)
class CoolingFit:
    """What the readings alone say, with everything that judgement and a plot need.

    Per-reading tuples have the length of the readings. `residual_s` (change mode) or `residual_K` (both modes) is
    None where a reading carries none (row 0 in change mode, rows left out). `curve_*` are the fitted display-side
    temperatures on a grid over the record."""

    h_W_m2K: float
    h_u_W_m2K: float  # standard uncertainty from readings, their fit and the air-temperature prior
    h_u_fixed_air_W_m2K: float  # the part that stays if the asymptote were known
    h_total_W_m2K: float
    h_radiation_W_m2K: float
    h_stem_W_m2K: float
    time_constant_s: float
    time_constant_u_s: float
    start_C: float
    start_u_K: float
    asymptote_C: float
    asymptote_u_K: float
    asymptote_shift_K: float  # fitted minus measured, at mid-run
    h_per_air_W_m2K2: float  # change of h for 1 K in the asymptote
    h_per_measured_air_W_m2K2: float  # change of h for 1 K in the measured air, which the readings may overrule
    h_per_lag_W_m2Ks: float  # change of h for 1 s in the mean tap delay
    phase_s: float | None  # of the display's renewals, where the taps keep its clock
    covariance: tuple[tuple[float, ...], ...]
    parameters: tuple[str, ...]
    model: str  # lumped | cylinder | short-cylinder | wall | block | sphere
    biot: float
    window_s: tuple[float, float]
    start_by: str  # program | person
    used: tuple[bool, ...]
    left_out: tuple[LeftOut, ...]
    residual_s: tuple[float | None, ...]
    residual_K: tuple[float | None, ...]
    residual_score: tuple[float | None, ...]  # standardised: ~ N(0, 1) for a sound reading
    curve_time_s: tuple[float, ...]
    curve_C: tuple[float, ...]
    iterations: int
    profile_interval_W_m2K: tuple[float, float] | None  # 95 %, where it was computed
    body_mean_C: float  # mean surface temperature over the window
    stem_loss_W_K: float | None = None  # fitted, in a still-air run
    stem_loss_u_W_K: float | None = None
    refresh_found_s: float | None = None  # of the display, where the taps keep its clock
    trail: object | None = field(default=None, compare=False, repr=False)  # what the fit after the next tap needs
