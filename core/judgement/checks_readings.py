"""Checks that need only the readings and their fit: how the record was made, and whether the curve follows it.

Each function looks at one thing; the table at the end gives its name, unit and the source of its limit."""

from __future__ import annotations

from math import hypot, log

from core.judgement.evidence import COMMON_PRACTICE, Evidence, Finding, Rule, unknown
from core.judgement.patterns import (
    beat_share,
    display_step,
    gap_growth,
    refresh_grid,
    repeated_share,
    residual_pattern,
    run_chance,
    skipping_share,
)

PATTERN_PROBABILITY = 1e-3  # a sound run shows such a pattern once in 1000; 2 % of sound runs over all checks
SKIPPING_SHARE = 0.1
SKIPPING_CORRELATION = 0.2  # of neighbours on a display that skips numbers; measured on simulated sound runs
ASYMPTOTE_SIGMAS = 3.5
REFRESH_MISMATCH = 0.15  # the likelihood hardly feels a refresh that is 15 % off
BEAT_SHARE = 0.7
GAP_GROWTH = 1.3
TELLING_READINGS = 20
DOUBTFUL_FEWEST = 2  # a careful hand is late once in a run
START_SHARE = 0.02  # two changes of a 1 K display; sound runs keep their start


def span(evidence: Evidence) -> Finding:
    """How far the body cooled: ratio of first to last excess over the air."""
    fit, limit = evidence.fit, evidence.setup.limits.span_ratio_min
    used = [c for c, keep in zip(evidence.readings.reading_C, fit.used, strict=True) if keep]
    last = max(used[-1] - fit.asymptote_C, 0.25 * evidence.setup.thermometer.resolution_K)
    ratio = (used[0] - fit.asymptote_C) / last
    if ratio >= limit:
        return Finding("good", ratio, limit, "The readings span enough of the cooling.")
    advice = f"Start hotter or record longer: the excess over the air should fall to 1/{limit:g} of its start."
    return Finding("again" if log(max(ratio, 1.0)) < 0.7 * log(limit) else "look", ratio, limit, advice)


def count(evidence: Evidence) -> Finding:
    """How many readings carry the fit."""
    number, limit = sum(evidence.fit.used), evidence.setup.limits.readings_min
    if number >= limit:
        return Finding("good", number, limit, "There are enough readings.")
    advice = "Record more readings: cool for longer, read at every change or on a shorter beat."
    return Finding("again" if 2 * number < limit else "look", number, limit, advice)


def recording_mode(evidence: Evidence) -> Finding:
    """Whether the readings look like the recording mode of the set-up."""
    times = evidence.readings.time_s
    regular, growth = beat_share(times), gap_growth(times)
    repeats = repeated_share(evidence.readings.reading_C)
    if evidence.setup.recording.mode == "change":
        if repeats == 0.0 and (regular <= 0.9 or growth >= GAP_GROWTH):
            return Finding("good", regular, None, "The readings come as the display changes.")
        advice = "The readings look like a fixed beat, not like changes of the display: set the mode to beat."
        return Finding("look", regular, 0.9, advice)
    if regular >= BEAT_SHARE and (growth <= GAP_GROWTH or repeats > 0.0 or regular >= 0.95):
        return Finding("good", regular, BEAT_SHARE, "The readings come on a fixed beat.")
    advice = "The readings look like changes of the display, not like a fixed beat: set the mode to change."
    return Finding("look", regular, BEAT_SHARE, advice)


def display(evidence: Evidence) -> Finding:
    """Whether the shown numbers are steps of the set resolution."""
    resolution = evidence.setup.thermometer.resolution_K
    step = display_step(evidence.readings.reading_C, resolution)
    coarser = round(step / resolution) > 1
    if abs(step / resolution - 1.0) < 0.005 or (coarser and not _steps_tell(evidence)):
        return Finding("good", step, resolution, "The readings fit the display's step.")
    advice = f"The readings go in steps of {step:g} K: set the resolution of the display to that."
    return Finding("look", step, resolution, advice)


def _steps_tell(evidence: Evidence) -> bool:
    """Whether a display of the set step would have shown single steps or odd ones by now: enough readings, and
    changes so slow that it no longer skips numbers between two renewals."""
    times, setup = evidence.readings.time_s, evidence.setup
    if len(times) < TELLING_READINGS or setup.recording.mode == "beat":
        return len(times) >= TELLING_READINGS
    third = len(times) // 3
    return (times[-1] - times[-1 - third]) / third > 2.0 * setup.thermometer.refresh_s


def refresh(evidence: Evidence) -> Finding:
    """Whether the taps lie on a grid of another refresh time than the set one."""
    set_s = evidence.setup.thermometer.refresh_s
    if evidence.setup.recording.mode != "change":
        return unknown("Readings on a beat do not show the display's refresh.")
    found = refresh_grid(evidence.readings.time_s)
    if found is None:
        return unknown("The taps do not show the display's refresh.", set_s)
    if abs(found - set_s) <= REFRESH_MISMATCH * found:
        return Finding("good", found, set_s, "The taps fit the display's refresh.")
    advice = f"The taps follow a display that renews every {found:.2f} s: set the refresh to that and fit again."
    return Finding("look", found, set_s, advice)


def doubt(evidence: Evidence) -> Finding:
    """How many readings were left out as late, doubled, missed or mistyped."""
    fit, limit = evidence.fit, evidence.setup.limits.doubtful_share
    rows = [one.row + 1 for one in fit.left_out if one.cause != "start"]
    share = len(rows) / max(1, len(rows) + sum(fit.used))
    if len(rows) < DOUBTFUL_FEWEST:
        advice = "Hardly a reading is in doubt." if rows else "No reading is in doubt."
        return Finding("good", share, limit, advice)
    listed = ", ".join(str(row) for row in rows[:6]) + (" …" if len(rows) > 6 else "")
    advice = f"Readings {listed} do not follow the rest: look at each, keep it or drop it."
    return Finding("again" if share > limit else "look", share, limit, advice)


def start(evidence: Evidence) -> Finding:
    """How much of the record was left out at the start, together with first rows that the fit holds for late."""
    fit, times, limit = evidence.fit, evidence.readings.time_s, evidence.setup.limits.trimmed_share
    out = {one.row for one in fit.left_out}
    first = next((row for row in range(1, len(times)) if row not in out), len(times) - 1)
    settled_s = (times[first] if first > 1 else fit.window_s[0]) - times[0]
    share = settled_s / (times[-1] - times[0])
    if fit.start_by == "person":
        return Finding("good", share, limit, f"You set the start at {fit.window_s[0]:.1f} s.")
    if share <= START_SHARE:
        return Finding("good", share, START_SHARE, "The record follows the curve from its start.")
    advice = (
        f"The first {settled_s:.0f} s do not follow the curve and were left out: have the fan at speed before the "
        "first reading, and check the sensor's lag."
    )
    return Finding("again", share, limit, advice) if share > limit else Finding("look", share, START_SHARE, advice)


def pattern(evidence: Evidence) -> Finding:
    """Whether the residuals still hold a pattern, or the readings in doubt come in a row.

    In still air a pattern within what is known of natural convection says nothing."""
    fit, setup = evidence.fit, evidence.setup
    skips = setup.recording.mode == "change" and skipping_share(
        evidence.readings.reading_C, setup.thermometer.resolution_K
    ) > SKIPPING_SHARE
    scores = [one for one in fit.residual_score if one is not None]
    found = residual_pattern(scores, SKIPPING_CORRELATION if skips else 0.0)
    if found is None:
        return unknown("Too few readings to tell.", PATTERN_PROBABILITY)
    doubted = [one.row for one in fit.left_out if one.cause not in {"start", "dropped"}]
    chance = min(found.probability, run_chance(doubted, len(evidence.readings)))
    small = not doubted and sum(one**2 for one in scores) < 1.5 * len(scores)
    within_law = small and setup.recording.kind == "still-air"
    if chance > PATTERN_PROBABILITY or within_law:
        return Finding("good", chance, PATTERN_PROBABILITY, "The residuals scatter as they should.")
    advice = (
        "The curve does not follow the readings, so something changed during the run: look at airspeed, inlet, "
        "air temperature and the display's settings, then repeat."
    )
    return Finding("again" if chance < PATTERN_PROBABILITY**3 else "look", chance, PATTERN_PROBABILITY, advice)


def asymptote(evidence: Evidence) -> Finding:
    """The temperature that the readings alone head for, against the measured air.

    It says that something is off, and not what, so it asks for the run again only where h moves by more than the
    wanted uncertainty between the two temperatures."""
    if evidence.free_air_K is None:
        return unknown("The readings say nothing of the air temperature.")
    free, u = evidence.free_air_K
    limit = ASYMPTOTE_SIGMAS * hypot(u, evidence.setup.air.temperature_u_K)
    if abs(free) <= limit:
        return Finding("good", free, limit, "The readings head for the measured air temperature.")
    side = "above" if free > 0.0 else "below"
    advice = (
        f"The readings head for {abs(free):.2f} K {side} the measured air: check the air temperature, the "
        "display's rounding, the emissivity of the surface, and whether the airspeed held."
    )
    at_stake = abs(free * evidence.fit.h_per_air_W_m2K2 / evidence.fit.h_W_m2K)
    return Finding("again" if at_stake > evidence.setup.limits.target_U95_rel else "look", free, limit, advice)


MODE = Rule(
    "recording mode",
    "",
    "a beat keeps its intervals and repeats numbers; changes of a cooling display slow down and never repeat",
    recording_mode,
)
DISPLAY = Rule("display step", "K", "every shown number is a multiple of the display's step", display)
SPAN = Rule(
    "temperature span",
    "",
    f"{COMMON_PRACTICE}: 90 to 33 °C in air of 23 °C is a ratio of 6.7; below 3 the air temperature rules h",
    span,
)
COUNT = Rule("number of readings", "", f"{COMMON_PRACTICE}: four readings for each of three unknowns", count)
DOUBT = Rule("readings in doubt", "", f"{COMMON_PRACTICE}: at most one reading in ten", doubt)
REFRESH = Rule(
    "display refresh",
    "s",
    "taps can only follow the display's renewals: Rayleigh test of their grid (Mardia and Jupp 2000), chance 1e-5",
    refresh,
)
START = Rule("start", "", f"{COMMON_PRACTICE}: with the fan at speed no start needs leaving out", start)
PATTERN = Rule(
    "residual pattern",
    "",
    "smooth test (Neyman 1937), lag-one autocorrelation (Box and Jenkins) and run of doubts, chance 1 in 1000",
    pattern,
)
ASYMPTOTE = Rule(
    "asymptote",
    "K",
    f"{ASYMPTOTE_SIGMAS:g} standard deviations of the difference (JCGM 100:2008, 5.1)",
    asymptote,
)
