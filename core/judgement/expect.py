"""Before the run: what h, how fast, how long, which recording mode, and how sure h will be."""

from __future__ import annotations

from dataclasses import dataclass
from math import log

from core.bench.body import thermal_body
from core.bench.setup import Setup
from core.convection.correlation import Expectation
from core.convection.expected import expected_for
from core.convection.flow import velocity_at_body
from core.errors import NoAnswer
from core.judgement.budget import budget_from
from core.judgement.checks_bench import BIOT_LUMPED
from core.judgement.prediction import Planned, Promise, promise, usual_end_C
from core.judgement.published import middle
from core.judgement.relation import Anchor, film_air, mid_air_C, radiation_W_m2K

START_C = 90.0  # common practice: out of boiling water, 90 to 95 °C
WARMER_THAN_AIR_K = 40.0
TAPS_PER_S = 1.5  # common practice: a hand that only taps follows three changes in two seconds, not more


@dataclass(frozen=True, slots=True)
class Expected:
    """What to expect of a run; `h_W_m2K` is that of the correlation used, the middle one of those that hold."""

    film_temperature_C: float
    velocity_narrowest_m_s: float | None
    reynolds: float | None
    expected: tuple[Expectation, ...]
    h_W_m2K: float
    time_constant_s: float
    run_length_s: float
    changes_per_s_start: float
    mode: str
    mode_reason: str
    h_U95_rel: float
    start_C: float
    end_C: float


def expect(setup: Setup) -> Expected:
    """What published correlations and the bench promise of a run from 90 °C down.

    The run starts at 90 °C, or 40 K above warmer air, and ends when the excess over the air has fallen to 1/6.7
    (common practice: 90 to 33 °C in air of 23 °C). The recording mode is the one that tells more of h, as long as
    a hand can follow: at most three changes in two seconds at the start.

    Parameters
    ----------
    setup : the bench; its recording mode is not used [any]

    Returns
    -------
    Expected

    Raises
    ------
    NoAnswer where no correlation can be evaluated for this bench

    References
    ----------
    `core.convection` for the correlations, `core.judgement.prediction` for the promise, JCGM 100 for U95.
    """
    air_C = mid_air_C(setup)
    start_C = max(START_C, air_C + WARMER_THAN_AIR_K)
    first_K = start_C - air_C
    last_K = usual_end_C(start_C, air_C) - air_C
    body_C = air_C + (first_K - last_K) / log(first_K / last_K)
    expected = tuple(expected_for(setup, body_C))
    if not expected:
        raise NoAnswer("No published correlation covers this body and this flow, so nothing can be expected of h.")
    used = middle(expected) or expected[0]
    body, air = thermal_body(setup.body), setup.air
    walls_C = air_C if air.surroundings_C is None else air.surroundings_C
    lost = radiation_W_m2K(setup.body.emissivity, body_C, air_C, walls_C) + setup.body.stem_loss_W_K / body.area_m2
    total = used.h_W_m2K + lost
    conduction = total * body.half_thickness_m / body.conductivity_W_mK > BIOT_LUMPED
    time_constant_s = body.capacity_J_K(body_C) / (total * body.area_m2)
    planned = Planned(1.0 / time_constant_s, first_K, last_K)
    changes = first_K / time_constant_s / setup.thermometer.resolution_K
    if setup.thermometer.refresh_s > 0.0:
        changes = min(changes, 1.0 / setup.thermometer.refresh_s)
    promises = {
        mode: promise(planned, setup.thermometer, setup.recording, mode, air.temperature_u_K)
        for mode in ("change", "beat")
    }
    U95 = {
        mode: _U95_rel(setup, one, used.h_W_m2K, total, time_constant_s, body_C, conduction)
        for mode, one in promises.items()
    }
    mode, reason = _choice(changes, promises, U95)
    forced = setup.recording.kind == "forced"
    film_C = 0.5 * (body_C + air_C)
    velocity = velocity_at_body(setup) if forced else None
    viscosity = film_air(setup, film_C).kinematic_viscosity_m2_s
    return Expected(
        film_temperature_C=film_C,
        velocity_narrowest_m_s=velocity,
        reynolds=None if velocity is None else velocity * body.across_m / viscosity,
        expected=expected,
        h_W_m2K=used.h_W_m2K,
        time_constant_s=time_constant_s,
        run_length_s=planned.length_s,
        changes_per_s_start=changes,
        mode=mode,
        mode_reason=reason,
        h_U95_rel=U95[mode],
        start_C=start_C,
        end_C=air_C + last_K,
    )


def _U95_rel(
    setup: Setup,
    promised: Promise,
    h: float,
    total: float,
    time_constant_s: float,
    body_C: float,
    conduction: bool,
) -> float:
    """Relative expanded uncertainty of h that a mode promises; errors of the decay rate act on the total h."""
    anchor = Anchor(
        h_W_m2K=h,
        readings_u_W_m2K=total * promised.rate_u_rel,
        per_air_W_m2K2=total * promised.rate_per_air_rel_K,
        per_lag_W_m2Ks=0.0,
        air_u_K=setup.air.temperature_u_K,
        time_constant_s=time_constant_s,
        body_mean_C=body_C,
        body_felt_C=body_C,
        conduction=conduction,
        readings_dof=max(1.0, promised.readings - 3.0),
    )
    return budget_from(setup, anchor).h.U / h


def _choice(changes: float, promises: dict[str, Promise], U95: dict[str, float]) -> tuple[str, str]:
    """The recording mode to use, and why."""
    tap, beat = (100.0 * promises[mode].rate_u_rel for mode in ("change", "beat"))
    if changes > TAPS_PER_S:
        return "beat", (
            f"The display changes {changes:.1f} times a second at the start, faster than a hand follows; on a "
            f"beat the readings give h to ± {2 * beat:.2f} %."
        )
    better, worse = ("change", "beat") if tap <= beat else ("beat", "change")
    gain = max(tap, beat) / max(min(tap, beat), 1e-9)
    words = {"change": "a tap at each change", "beat": "readings on a beat"}
    return better, (
        f"The readings alone give h to ± {2 * min(tap, beat):.2f} % with {words[better]}, {gain:.1f} times closer "
        f"than with {words[worse]} (± {2 * max(tap, beat):.2f} %); {_whole_budget(U95[better], U95[worse])}."
    )


def _whole_budget(better: float, worse: float) -> str:
    """What the choice of the mode does to the whole U95, in words."""
    kept, other = f"{100 * better:.1f} %", f"{100 * worse:.1f} %"
    if kept == other:
        return f"with the whole budget U95 is {kept} either way"
    return f"with the whole budget U95 is {kept}, not {other}"
