"""The curves behind the law pass through what each run's own answer says is expected."""

import pytest

from core.demo.cabinet_bench import demo_runs
from core.judgement.judge import judge
from core.judgement.law_bands import law_bands


@pytest.fixture(scope="module")
def answer():
    run = demo_runs()[1]
    return judge(run.readings, run.setup)


def test_at_the_runs_own_speed_each_band_is_what_the_answer_expects(answer):
    """One axis for runs and curves: at the run's Re a band's h is the answer's expected h."""
    bands = law_bands(answer, answer.reynolds, 2 * answer.reynolds)
    assert [one.correlation for one in bands] == [one.correlation for one in answer.expected]
    for band, expected in zip(bands, answer.expected, strict=True):
        h = band.nusselt[0] * answer.h_W_m2K / answer.nusselt
        assert h == pytest.approx(expected.h_W_m2K, rel=1e-3)
        assert band.in_range[0] == expected.in_range
        assert list(band.nusselt) == sorted(band.nusselt)


def test_the_range_is_covered_from_end_to_end(answer):
    """The grid begins and ends where it was asked to."""
    band = law_bands(answer, 1000.0, 9000.0)[0]
    assert band.reynolds[0] == pytest.approx(1000.0)
    assert band.reynolds[-1] == pytest.approx(9000.0)
