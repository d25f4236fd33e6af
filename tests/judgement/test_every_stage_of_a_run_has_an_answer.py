"""While a run goes on each new reading is judged: no stage of it breaks the chain."""

from math import isfinite

import pytest

from core.bench.readings import Readings
from core.cooling.simulator import Truth, simulate
from core.errors import NoAnswer
from core.judgement.judge import judge
from tests.judgement.faults import WRITTEN, with_


@pytest.mark.parametrize(("mode", "resolution_K"), [("change", 1.0), ("change", 0.1), ("beat", 1.0), ("beat", 0.1)])
@pytest.mark.filterwarnings("error")
def test_the_first_readings_give_a_refusal_or_finite_numbers(mode, resolution_K):
    """Fewer than four readings are refused, up to seven may be; each fit is warmed by the one before."""
    setup = with_(with_(WRITTEN, "recording", mode=mode), "thermometer", resolution_K=resolution_K)
    whole = simulate(Truth(setup, 80.0), 3)
    fit, verdicts = None, []
    for n in [*range(1, 15), *range(20, len(whole), len(whole) // 5), len(whole)]:
        part = Readings(whole.time_s[:n], whole.reading_C[:n])
        if n < 4:
            with pytest.raises(NoAnswer):
                judge(part, setup)
            continue
        try:
            answer = judge(part, setup, warm=fit)
        except NoAnswer:
            assert n < 8
            continue
        fit = answer.fit
        numbers = [one.value for one in answer.checks if one.value is not None]
        numbers += [answer.h_W_m2K, answer.h_U95_W_m2K, *(one.share for one in answer.budget)]
        assert all(isfinite(one) for one in numbers)
        verdicts.append(answer.verdict)
    assert verdicts[0] == "again"
    assert verdicts[-1] == "keep"
