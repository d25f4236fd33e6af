"""Answer thousands of runs of nonsense and of odd benches: an answer, or one sentence, and nothing else.

python -m tests.trials.fuzz_fits [COUNT] [SEED]
"""

import sys
from collections import Counter
from dataclasses import replace

import numpy as np

from core.bench.readings import Readings
from core.commands.json_form import answer_form, line
from core.commands.text_form import answer_text
from core.errors import BenchError
from core.handover.recompute import answer_to
from tests.commands.simulated import setup_for


def odd_readings(rng):
    """Readings of no particular body: noise, falls, plateaus, coolings with faults."""
    count = int(rng.choice([1, 2, 3, 4, 5, 8, 12, 20, 40, 60]))
    time = np.unique(np.round(np.cumsum(rng.exponential(rng.choice([0.01, 1, 10, 1000]), count)), 4))
    time -= time[0]
    decay = np.exp(-time / max(time[-1], 1e-3) * rng.uniform(0.1, 5))
    shapes = (
        rng.uniform(-20, 120, len(time)),
        np.sort(rng.uniform(20, 100, len(time)))[::-1],
        90.0 - np.arange(len(time)),
        np.round(23 + 67 * decay, rng.integers(0, 3)),
        np.full(len(time), rng.uniform(0, 100)),
        np.round(23 + 67 * decay + rng.normal(0, 3, len(time))),
    )
    return Readings(tuple(time.tolist()), tuple(shapes[rng.integers(len(shapes))].tolist()))


def odd_setup(rng):
    """A bench at the edges of what a set-up may say."""
    setup = setup_for(float(rng.uniform(0.5, 20)), str(rng.choice(["change", "beat"])))
    thermometer = replace(
        setup.thermometer,
        resolution_K=float(rng.choice([0.01, 0.1, 1, 5])),
        refresh_s=float(rng.choice([0, 0.5, 5])),
        rounding=str(rng.choice(["nearest", "down"])),
        noise_K=float(rng.choice([0, 0.1])),
        lag_s=float(rng.choice([0, 3])),
    )
    air = replace(setup.air, temperature_C=float(rng.choice([-5, 23, 60])), temperature_end_C=None)
    air = replace(air, temperature_u_K=float(rng.choice([0, 0.02])))
    body = replace(setup.body, emissivity=float(rng.choice([0, 0.9])), stem_loss_W_K=float(rng.choice([0, 0.05])))
    if rng.random() < 0.2:
        plastic = {"density_kg_m3": 1200.0, "heat_capacity_J_kgK": 1500.0, "conductivity_W_mK": 0.2}
        body = replace(body, material=None, **plastic)
    kind = "still-air" if rng.random() < 0.15 else "forced"
    recording = replace(setup.recording, tap_jitter_s=float(rng.choice([0, 0.05])), kind=kind)
    return replace(setup, thermometer=thermometer, air=air, body=body, recording=recording)


def outcome_of(readings, setup):
    """`answer`, or the beginning of the sentence."""
    try:
        answer = answer_to(readings, setup)
    except BenchError as error:
        return "".join("#" if c.isdigit() else c for c in str(error))[:60]
    line(answer_form(answer, {}))
    answer_text(answer, "run")
    return "answer"


if __name__ == "__main__":
    count = int(sys.argv[1]) if len(sys.argv) > 1 else 2000
    rng = np.random.default_rng(int(sys.argv[2]) if len(sys.argv) > 2 else 1)
    outcomes = Counter(outcome_of(odd_readings(rng), odd_setup(rng)) for _ in range(count))
    for sentence, times in outcomes.most_common(40):
        print(f"{times:6d}  {sentence}")
