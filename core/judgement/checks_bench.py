"""Checks of the bench: air, airspeed, losses, model, body, and agreement with what is known of h.

Each function looks at one thing; the table at the end gives its name, unit and the source of its limit."""

from __future__ import annotations

from math import sqrt

from core.convection.flow import drift_rel
from core.judgement.evidence import COMMON_PRACTICE, Evidence, Finding, Rule, beyond, unknown
from core.judgement.published import middle

BIOT_LUMPED = 0.1
REPEAT_REL = 0.02
REPEAT_SIGMAS = 2.6  # 1 in 100 of sound runs
MASS_REL = 0.02
MASS_SIGMAS = 3.0


def air_drift(evidence: Evidence) -> Finding:
    """Change of the air temperature from before to after the run."""
    air, limit = evidence.setup.air, evidence.setup.limits.air_drift_K
    if air.temperature_end_C is None:
        return unknown("Measure the air after the run too: its drift is not known.", limit)
    drift = air.temperature_end_C - air.temperature_C
    outcome = beyond(abs(drift), limit, 3.0)
    if outcome == "good":
        return Finding("good", drift, limit, "The air held its temperature.")
    return Finding(outcome, drift, limit, f"The air changed by {drift:+.1f} K: let the room settle, then repeat.")


def airspeed_drift(evidence: Evidence) -> Finding:
    """Change of the airspeed from before to after the run, relative: a creeping damper."""
    before, after = evidence.velocity_before_m_s, evidence.setup.flow.velocity_end_m_s
    limit = evidence.setup.limits.velocity_drift_rel
    if after is None or not before:
        return unknown("Measure the airspeed after the run too: its drift is not known.", limit)
    drift = drift_rel(before, after)
    outcome = beyond(abs(drift), limit, 3.0)
    if outcome == "good":
        return Finding("good", drift, limit, "The airspeed held.")
    advice = f"The airspeed changed by {100 * drift:+.1f} %: lock the damper, free inlet and outlet, then repeat."
    return Finding(outcome, drift, limit, advice)


def radiation(evidence: Evidence) -> Finding:
    """Share of radiation in the heat flow."""
    share, limit = evidence.radiation_share, evidence.setup.limits.radiation_share
    if evidence.setup.recording.kind != "forced":
        return unknown("In still air radiation is a large part by nature.", limit)
    outcome = beyond(share, limit, 4.0)
    if outcome == "good":
        return Finding("good", share, limit, "Radiation is a small part of the heat flow.")
    advice = "Radiation carries much of the heat: polish the body, or measure its emissivity well."
    return Finding(outcome, share, limit, advice)


def stem(evidence: Evidence) -> Finding:
    """Share of the heat that leaves through holder and sensor stem."""
    share, limit = evidence.stem_share, evidence.setup.limits.stem_share
    if evidence.setup.recording.kind != "forced":
        return unknown("This run measures the stem loss itself.", limit)
    outcome = beyond(share, limit, 4.0)
    if outcome == "good":
        return Finding("good", share, limit, "Holder and stem carry a small part of the heat flow.")
    advice = "Holder and stem carry much of the heat: insulate them, or make them thinner."
    return Finding(outcome, share, limit, advice)


def mixed_convection(evidence: Evidence) -> Finding:
    """Whether buoyancy has a say beside the forced flow."""
    value, limit = evidence.richardson, evidence.setup.limits.richardson
    if value is None:
        return unknown("There is no forced flow in this run.", limit)
    outcome = beyond(value, limit, 10.0)
    if outcome == "good":
        return Finding("good", value, limit, "Buoyancy has no say at this airspeed.")
    advice = "At this airspeed buoyancy adds to the flow: raise the speed, or start less hot."
    return Finding(outcome, value, limit, advice)


def model(evidence: Evidence) -> Finding:
    """Biot number, and whether the model fits it."""
    fit = evidence.fit
    if fit.model != "lumped":
        return Finding("good", fit.biot, BIOT_LUMPED, f"Conduction inside the body is in the model ({fit.model}).")
    if fit.biot <= BIOT_LUMPED:
        return Finding("good", fit.biot, BIOT_LUMPED, "The body may be taken as one temperature.")
    advice = "The body is not at one temperature: give its conductivity, so that the model has conduction inside."
    return Finding("look", fit.biot, BIOT_LUMPED, advice)


def material(evidence: Evidence) -> Finding:
    """Weighed mass against density times volume."""
    if evidence.mass_ratio is None:
        return unknown("Weigh the body: that shows a wrong material at once.")
    off, limit = evidence.mass_ratio - 1.0, max(MASS_REL, MASS_SIGMAS * evidence.mass_ratio_u)
    if abs(off) <= limit:
        return Finding("good", off, limit, "The mass fits the sizes and the material.")
    advice = f"The body weighs {100 * off:+.0f} % against its sizes and material: check material, sizes and mass."
    return Finding("look", off, limit, advice)


def expected_band(evidence: Evidence) -> Finding:
    """h against the middle one of the published correlations that hold here."""
    used = middle(evidence.expected)
    if used is None:
        return unknown("No published correlation holds for this bench.")
    off, limit = evidence.fit.h_W_m2K / used.h_W_m2K - 1.0, sqrt(used.band_rel**2 + evidence.h_U95_rel**2)
    outcome = beyond(abs(off), limit, 2.5)
    if outcome == "good":
        return Finding("good", off, limit, "h lies within the published band.", used.source)
    advice = f"h is {100 * off:+.0f} % off the published value: check material, sizes, exposed faces, airspeed."
    return Finding(outcome, off, limit, advice, used.source)


def earlier_runs(evidence: Evidence) -> Finding:
    """h against earlier runs of the same body at the same speed."""
    if not evidence.earlier:
        return unknown("There is no earlier run at this speed to compare with.")
    mean = sum(one.h_W_m2K for one in evidence.earlier) / len(evidence.earlier)
    spread = max(one.difference_u_W_m2K for one in evidence.earlier) / mean
    off, limit = evidence.fit.h_W_m2K / mean - 1.0, max(REPEAT_REL, REPEAT_SIGMAS * spread)
    outcome = beyond(abs(off), limit, 3.0)
    if outcome == "good":
        return Finding("good", off, limit, "h agrees with the earlier runs at this speed.")
    advice = (
        f"h is {100 * off:+.1f} % off the earlier runs at this speed: look for what changed, such as the faces "
        "that are exposed, the surface, the airspeed."
    )
    return Finding(outcome, off, limit, advice)


def target(evidence: Evidence) -> Finding:
    """Expanded uncertainty of h against the wanted one."""
    value, limit = evidence.h_U95_rel, evidence.setup.limits.target_U95_rel
    if evidence.setup.recording.kind != "forced":
        return unknown("The target is one for runs in forced flow.", limit)
    if value <= limit:
        return Finding("good", value, limit, "h is as sure as you want it.")
    advice = f"h is sure to ± {100 * value:.1f} % only: see in the budget what to improve next."
    return Finding("look", value, limit, advice)


AIR_DRIFT = Rule(
    "air drift",
    "K",
    f"{COMMON_PRACTICE}: the fit lets the air drift in a straight line, which holds for small changes",
    air_drift,
)
AIRSPEED_DRIFT = Rule(
    "airspeed drift",
    "",
    f"{COMMON_PRACTICE}: 3 % in speed is 2 % in h, by h ~ v^0.6 (Zukauskas 1972)",
    airspeed_drift,
)
RADIATION = Rule(
    "radiation share",
    "",
    f"{COMMON_PRACTICE}: at a tenth, an emissivity known to a fifth adds 2 % to h",
    radiation,
)
STEM = Rule("stem share", "", f"{COMMON_PRACTICE}: at a tenth, a stem loss known to a fifth adds 2 % to h", stem)
MIXED = Rule(
    "mixed convection",
    "",
    "Gr/Re² far below 1 for forced flow (Incropera et al., Fundamentals of Heat and Mass Transfer, 9.9)",
    mixed_convection,
)
MODEL = Rule("Biot number", "", "Bi < 0.1 for one temperature in the whole body (Incropera et al., 5.2)", model)
MATERIAL = Rule(
    "material",
    "",
    f"{MASS_SIGMAS:g} standard uncertainties of the ratio (JCGM 100:2008, 5.1), at least 2 %",
    material,
)
EXPECTED = Rule("expected h", "", "the correlation's stated accuracy", expected_band)
EARLIER = Rule(
    "earlier runs",
    "",
    f"{REPEAT_SIGMAS:g} standard uncertainties of the difference (JCGM 100:2008, 5.1), at least 2 % "
    f"({COMMON_PRACTICE})",
    earlier_runs,
)
TARGET = Rule("target uncertainty", "", "the bench's own target, in the limits of the set-up", target)
