"""How often the right check speaks on a faulty run, and how often any check speaks on a sound one.

    python -m tests.bench.verdict_table [SOUND_RUNS] [RUNS_PER_FAULT]

prints a table; 500 sound runs and 40 of each fault if left out."""

import sys
from collections import Counter

import numpy as np

from core.errors import BenchError
from core.judgement.judge import judge
from tests.judgement.faults import FAULTS, earlier, sound


def speaking(setup, readings) -> tuple[str, set[str]]:
    """The verdict, and the checks that are not good; a refusal counts as one."""
    try:
        answer = judge(readings, setup, earlier=(earlier(),))
    except BenchError as error:
        return "refused", {f"refused: {error}"}
    return answer.verdict, {one.name for one in answer.checks if one.outcome != "good"}


def main(sound_runs: int, runs_each: int) -> None:
    print(f"{'fault':36}{'caught':>8}{'verdict':>9}  checks that spoke, share of runs")
    for name, fault in FAULTS.items():
        caught, spoke, verdicts = 0, Counter(), Counter()
        for seed in range(runs_each):
            verdict, found = speaking(*fault.make(seed, np.random.default_rng((seed, 3))))
            caught += bool(fault.checks & found)
            spoke.update(found)
            verdicts[verdict] += 1
        shares = ", ".join(f"{check} {count / runs_each:.2f}" for check, count in spoke.most_common(5))
        print(f"{name:36}{caught / runs_each:8.2f}{verdicts.most_common(1)[0][0]:>9}  {shares}", flush=True)
    alarms, spoke = 0, Counter()
    for seed in range(sound_runs):
        _, found = speaking(*sound(seed))
        alarms += bool(found)
        spoke.update(found)
    print(f"sound runs with any alarm: {alarms} of {sound_runs} ({100 * alarms / sound_runs:.1f} %) {dict(spoke)}")


if __name__ == "__main__":
    arguments = [int(one) for one in sys.argv[1:]]
    main(*(arguments + [500, 40][len(arguments) :]))
