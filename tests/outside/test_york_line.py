"""The straight line with errors in both variables against published numbers and SciPy's ODR."""

import warnings

import numpy as np
import pytest

from core.judgement.power_law import fit_line

# Pearson's data with York's weights: York et al., Am. J. Phys. 72 (2004) 367, table II
X = np.array([0.0, 0.9, 1.8, 2.6, 3.3, 4.4, 5.2, 6.1, 6.5, 7.4])
WEIGHT_X = np.array([1000.0, 1000.0, 500.0, 800.0, 200.0, 80.0, 60.0, 20.0, 1.8, 1.0])
Y = np.array([5.9, 5.4, 4.4, 4.6, 3.5, 3.7, 2.8, 2.8, 2.4, 1.5])
WEIGHT_Y = np.array([1.0, 1.8, 4.0, 8.0, 20.0, 20.0, 70.0, 70.0, 100.0, 500.0])


def test_pearsons_data_with_yorks_weights_give_the_published_line():
    """Intercept 5.47991, slope −0.480533, errors 0.294971 and 0.0579850 (maximum likelihood: 0.2919, 0.0576)."""
    line = fit_line(X, Y, np.diag(np.concatenate([1 / WEIGHT_X, 1 / WEIGHT_Y])))
    assert line.intercept == pytest.approx(5.47991022, abs=2e-6)
    assert line.slope == pytest.approx(-0.480533407, abs=2e-7)
    assert np.sqrt(np.diag(line.covariance)) == pytest.approx([0.294971, 0.0579850], rel=1e-3)
    assert line.chi_square == pytest.approx(11.8663532, abs=1e-5)


def test_independent_errors_give_scipys_orthogonal_distance_regression():
    generator = np.random.default_rng(5)
    u_x, u_y = generator.uniform(0.01, 0.05, 7), generator.uniform(0.01, 0.05, 7)
    x = np.linspace(8.0, 9.5, 7)
    y = -1.6 + 0.6 * x + generator.normal(0, u_y)
    x = x + generator.normal(0, u_x)
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", DeprecationWarning)
        from scipy import odr

        reference = odr.ODR(odr.RealData(x, y, u_x, u_y), odr.unilinear).run()
    line = fit_line(x, y, np.diag(np.concatenate([u_x, u_y]) ** 2))
    assert [line.slope, line.intercept] == pytest.approx(reference.beta, rel=2e-5)
