"""Student's t and chi-square without SciPy give SciPy's numbers."""

from math import inf

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy import stats

from core.judgement.student import chi_square_tail, t_quantile, t_tail


@settings(max_examples=150, deadline=None)
@given(st.floats(0.01, 0.9999), st.floats(0.7, 5e4))
def test_t_quantile_is_scipys(coverage, dof):
    assert t_quantile(coverage, dof) == pytest.approx(float(stats.t.ppf(0.5 + coverage / 2, dof)), rel=1e-8)


@settings(max_examples=150, deadline=None)
@given(st.floats(0.0, 60.0), st.floats(0.7, 5e4))
def test_t_tail_is_scipys(t, dof):
    assert t_tail(t, dof) == pytest.approx(2 * float(stats.t.sf(t, dof)), rel=1e-8, abs=1e-14)


@settings(max_examples=150, deadline=None)
@given(st.floats(0.0, 80.0), st.integers(1, 40))
def test_chi_square_tail_is_scipys(x, dof):
    assert chi_square_tail(x, dof) == pytest.approx(float(stats.chi2.sf(x, dof)), rel=1e-9, abs=1e-14)


def test_infinite_degrees_of_freedom_are_the_normal_distribution():
    assert t_quantile(0.95, inf) == pytest.approx(1.959963984540054, rel=1e-10)


def test_a_coverage_of_one_is_refused():
    with pytest.raises(ValueError, match="in 0 to 1"):
        t_quantile(1.0, 5)
