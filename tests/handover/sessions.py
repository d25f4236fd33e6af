"""Sessions for the tests of the hand-over: invented runs with every kind of awkward text in them."""

from dataclasses import fields, replace

from core.bench.readings import Readings, Ruling
from core.bench.setup import Body, Flow, Recording, Setup, Surrounding, Thermometer
from core.convection.correlation import Expectation
from core.cooling.fit import CoolingFit, LeftOut
from core.handover.session import ExportRun, ExportSession
from core.judgement.answer import Answer, BudgetLine, Check

SETUP = Setup(
    Body(shape="cylinder", diameter_m=0.016, length_m=0.11, material="brass", mass_kg=0.189),
    Thermometer(resolution_K=1.0),
    Recording(mode="change"),
    Surrounding(temperature_C=23.0),
    Flow(velocity_readings_m_s=(7.9, 8.1, 8.0), row=3, rows=5),
)
READINGS = Readings((0.0, 1.9, 3.3, 5.15, 0.1 + 7.2), (90.0, 89.0, 88.0, 87.0, 86.0), 0.002)


def filled(kind, **values):
    """A value of a frozen class; numbers that the tests do not look at are 0.125."""
    return kind(**{one.name: 0.125 for one in fields(kind)} | values)


def fit_of(readings):
    """A fit with plausible, made-up numbers in every field."""
    n = len(readings)
    return filled(
        CoolingFit,
        h_W_m2K=101.3 / 3,
        h_u_W_m2K=0.1,
        h_u_fixed_air_W_m2K=0.08,
        h_total_W_m2K=103.7 / 3,
        h_radiation_W_m2K=0.31,
        h_stem_W_m2K=0.0,
        time_constant_s=60.1 / 7,
        time_constant_u_s=0.05,
        start_C=89.9,
        start_u_K=0.1,
        asymptote_C=23.02,
        asymptote_u_K=0.02,
        asymptote_shift_K=0.0,
        h_per_air_W_m2K2=1.0,
        h_per_lag_W_m2Ks=0.1,
        phase_s=None,
        covariance=((1e-4,),),
        parameters=("h",),
        model="lumped",
        biot=0.007,
        window_s=(0.0, readings.time_s[-1]),
        start_by="program",
        used=(True,) * (n - 1) + (False,),
        left_out=(LeftOut(n - 1, "late", "The tap came 2.1 s late, far beyond its jitter.", "program"),),
        residual_s=(None, *([0.01] * (n - 2)), None),
        residual_K=(0.1 / 3,) * n,
        residual_score=(None, *([0.2] * (n - 2)), None),
        curve_time_s=(0.0, 5.0),
        curve_C=(90.0, 87.0),
        iterations=5,
        profile_interval_W_m2K=None,
        body_mean_C=88.0,
    )


def answer_of(readings, setup):
    """An answer with plausible, made-up numbers in every field."""
    fit = fit_of(readings)
    return filled(
        Answer,
        time_constant_s=fit.time_constant_s,
        time_constant_u_s=0.05,
        h_W_m2K=fit.h_W_m2K,
        h_u_W_m2K=0.83,
        h_U95_W_m2K=1.66,
        h_total_W_m2K=fit.h_total_W_m2K,
        h_radiation_W_m2K=0.31,
        biot=0.007,
        nusselt=40.1,
        nusselt_u=0.4,
        reynolds=8123.0,
        reynolds_u=90.0,
        asymptote_C=23.02,
        readings=len(readings) - 1,
        readings_left_out=((len(readings), "The tap came 2.1 s late, far beyond its jitter."),),
        window_s=fit.window_s,
        expected=(Expectation("hilpert", "Hilpert 1933", 37.3, 88.0, 0.2, True),),
        budget=(
            BudgetLine("mass", 0.189, "kg", 1e-4, 500.0, 0.25),
            BudgetLine("readings", 0.0, "", 0.1, 1.0, 0.75),
        ),
        checks=(Check("span", "good", 3.3, 3.0, "", "common practice", "The span is wide enough."),),
        verdict="look",
        reason="One tap was late; look at it.",
        coverage_factor=2.0,
        degrees_of_freedom=float("inf"),
        film_temperature_C=41.0,
        prandtl=0.705,
        velocity_m_s=8.0,
        setup=setup,
        fit=fit,
    )


def run_of(run_name, **changes):
    """One run of that name."""
    run = ExportRun(
        run=run_name,
        kind="measured",
        setup=SETUP,
        readings=READINGS,
        name="brass rod, 8 m/s",
        recorded_at="2026-03-02T10:15:30+01:00",
        stamp_source="window event",
        rulings=(Ruling(1, keep=True), Ruling(4, keep=False)),
        answer=answer_of(READINGS, SETUP),
    )
    return replace(run, **changes)


def session_of(count, name="drying cabinet bench"):
    """A session of so many runs."""
    return ExportSession(name, tuple(run_of(f"run-{i + 1}") for i in range(count)))
