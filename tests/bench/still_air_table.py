"""Stem losses measured in still air: how often the truth lies within the stated uncertainty.

    python -m tests.bench.still_air_table [RUNS]

prints a table; 200 runs a row if left out. Natural convection goes by θ^(1/4) or by the published law of the shape
with air properties at film temperature, its level drawn; emissivity, heat capacity and air temperature are off by
what their uncertainties allow."""

import sys
from collections.abc import Callable
from dataclasses import dataclass, replace
from functools import cache

import numpy as np

from core.bench.setup import Body, Flow, Recording, Setup, Surrounding, Thermometer
from core.convection.natural import still_air
from core.cooling.estimator import fit_cooling
from core.cooling.simulator import Truth, simulate
from core.judgement.stem import stem_loss

ROD = Body("cylinder", diameter_m=0.016, length_m=0.11, material="brass", mass_kg=0.1874, emissivity=0.06)
THICK = Body("cylinder", diameter_m=0.03, length_m=0.15, material="aluminium", mass_kg=0.286, emissivity=0.08)
BALL = Body("sphere", diameter_m=0.03, material="brass", mass_kg=0.1195, emissivity=0.06, exposed="all")
BAR = Body("block", side_a_m=0.02, side_b_m=0.02, side_c_m=0.12, material="brass", mass_kg=0.405, emissivity=0.06)
LEVEL_SCATTER = 0.15


def bench(body: Body = ROD, stem_W_K: float = 0.015, resolution_K: float = 1.0, mode: str = "change") -> Setup:
    """A bench for a run in still air."""
    return Setup(
        replace(body, stem_loss_W_K=stem_W_K),
        Thermometer(resolution_K, refresh_s=0.7),
        Recording(mode, kind="still-air", beat_s=10.0),
        Surrounding(23.0, temperature_end_C=23.3),
        Flow(),
    )


@dataclass(frozen=True)
class Row:
    """One kind of run."""

    name: str
    setup: Setup
    law: str


def truth(row: Row, seed: int) -> Truth:
    """The bench as it is, of which the set-up says what its uncertainties allow."""
    rng = np.random.default_rng((seed, 5))
    body = row.setup.body
    level = np.exp(LEVEL_SCATTER * rng.normal())
    real = replace(
        body,
        emissivity=max(body.emissivity + body.emissivity_u * rng.normal(), 0.0),
        mass_kg=body.mass_kg * (1.0 + 0.01 * rng.normal()),
    )
    across = body.diameter_m or body.side_a_m
    law = _published(body.shape, across, body.side_b_m or across) if row.law == "published" else _quarter
    off = row.setup.air.temperature_u_K * rng.normal()
    return Truth(replace(row.setup, body=real), 8.0, start_C=rng.uniform(86.0, 93.0), end_C=34.0,
                 natural_W_m2K=lambda body_C, air_C: level * law(body_C - air_C), thermometer_offset_K=off)  # fmt: skip


def _quarter(excess_K: float) -> float:
    return 8.0 * (max(excess_K, 0.0) / 67.0) ** 0.25


@cache
def _published(shape: str, across_m: float, along_m: float) -> Callable[[float], float]:
    """The published law in air of about 23 °C, tabulated."""
    excess = np.linspace(1.0, 75.0, 150)
    h = [still_air(shape, across_m, along_m, 23.1 + one, 23.1, 101325.0, 0.4).h_W_m2K for one in excess]
    return lambda excess_K: float(np.interp(excess_K, excess, h))


ROWS = tuple(
    Row(f"{name}, {law}", setup, law)
    for name, setup in {
        "rod 16 mm, 1 °C": bench(),
        "rod 16 mm, no stem": bench(stem_W_K=0.0),
        "rod 16 mm, beat 0.1 °C": bench(resolution_K=0.1, mode="beat"),
        "rod 30 mm aluminium": bench(THICK, 0.03),
        "ball 30 mm": bench(BALL, 0.01),
        "bar 20 mm": bench(BAR, 0.02),
    }.items()
    for law in ("quarter", "published")
)


def measure(row: Row, seeds: range) -> tuple[np.ndarray, np.ndarray]:
    """Error [W/K] of the stem loss and its stated standard uncertainty, one row a run."""
    found = []
    for seed in seeds:
        written = replace(row.setup, body=replace(row.setup.body, heat_capacity_u_rel=0.01))
        one = stem_loss(fit_cooling(simulate(truth(row, seed), seed), written), written)
        found.append((one.loss_W_K - row.setup.body.stem_loss_W_K, one.u_W_K))
    return tuple(np.array(found).T)


def main(runs: int) -> None:
    print(f"{'still air: body, law':38}{'stem W/K':>9}{'bias':>9}{'scatter':>9}{'stated u':>9}{'in U95':>8}")
    for row in ROWS:
        error, u = measure(row, range(runs))
        inside = np.mean(np.abs(error) <= 2.0 * u)
        numbers = f"{np.mean(error):9.4f}{np.std(error):9.4f}{np.mean(u):9.4f}{100 * inside:7.1f}%"
        print(f"{row.name:38}{row.setup.body.stem_loss_W_K:9.4f}{numbers}", flush=True)


if __name__ == "__main__":
    main(int(sys.argv[1]) if len(sys.argv) > 1 else 200)
