"""The worked examples H.1 and H.2 of JCGM 100:2008 (GUM), number for number."""

from math import inf

import numpy as np
import pytest

from core.judgement.montecarlo import simulate
from core.judgement.propagation import Input, coverage_factor, propagate


def end_gauge(x):
    """H.1.2, equation H.3: l = l_s + d − l_s (δα·θ + α_s·δθ), lengths in nm."""
    standard, difference, alpha, theta, alpha_difference, theta_difference = x
    return np.array(
        [standard + difference - standard * (alpha_difference * theta + alpha * theta_difference)]
    )


END_GAUGE = [
    Input("length of the standard", 50_000_623.0, 25.0, "nm", 18),
    Input("measured difference", 215.0, 9.7, "nm", 25.6),
    Input("expansion of the standard", 11.5e-6, 1.2e-6, "1/K"),
    Input("temperature of the gauge", -0.1, 0.41, "K"),
    Input("difference of expansion", 0.0, 0.58e-6, "1/K", 50),
    Input("difference of temperature", 0.0, 0.029, "K", 2),
]


def test_the_end_gauge_of_annex_h1_comes_out_as_printed():
    """l = 50 000 838 nm, u_c = 32 nm, ν_eff = 16, k = 2.92, U99 = 93 nm (H.1.7 and table H.1)."""
    (length,), _ = propagate(end_gauge, END_GAUGE, coverage=0.99)
    assert length.value == pytest.approx(50_000_838, abs=0.5)
    assert round(length.u) == 32
    assert int(length.dof) == 16
    assert round(length.coverage_factor, 2) == 2.92
    assert pytest.approx(93, abs=0.75) == length.U
    printed = {
        "length of the standard": 25,
        "measured difference": 9.7,
        "difference of expansion": 2.9,
        "difference of temperature": 16.6,
    }
    for one, contribution in zip(END_GAUGE, length.contributions, strict=True):
        assert abs(contribution) == pytest.approx(printed.get(one.name, 0.0), abs=0.11)


def test_the_end_gauge_by_monte_carlo_shows_the_second_order_terms_of_h17():
    """H.1.7: the second-order terms add 11.7 nm in quadrature and bring u_c from 32 to 34 nm."""
    (normal,) = simulate(
        end_gauge, [Input(i.name, i.value, i.u, i.unit) for i in END_GAUGE], seed=1, draws=60_000
    )
    assert normal.u == pytest.approx(34, abs=0.5)


VOLTS = np.array([5.007, 4.994, 5.005, 4.990, 4.999])
MILLIAMPERES = np.array([19.663, 19.639, 19.640, 19.685, 19.678])
RADIANS = np.array([1.0456, 1.0438, 1.0468, 1.0428, 1.0433])


def impedance(x):
    """H.2.2, equation H.7: R, X, Z from V, I, φ."""
    volts, amperes, phase = x
    z = volts / amperes
    return np.array([z * np.cos(phase), z * np.sin(phase), z])


def test_the_impedance_of_annex_h2_comes_out_as_printed():
    """Table H.2 to H.4: inputs' correlations from the five sets, then R, X, Z with u and r."""
    sets = np.stack([VOLTS, MILLIAMPERES * 1e-3, RADIANS])
    u = np.std(sets, axis=1, ddof=1) / np.sqrt(5)
    assert u == pytest.approx([0.0032, 0.0095e-3, 0.00075], rel=0.02)
    r = np.corrcoef(sets)
    names = ("V", "I", "φ")
    correlations = {(names[i], names[j]): r[i, j] for i in range(3) for j in range(i)}
    assert [round(float(r[0, 1]), 2), round(float(r[0, 2]), 2), round(float(r[1, 2]), 2)] == [
        -0.36,
        0.86,
        -0.65,
    ]
    inputs = [Input(n, float(m), float(s)) for n, m, s in zip(names, sets.mean(axis=1), u, strict=True)]
    outputs, joint = propagate(impedance, inputs, correlations)
    assert [o.value for o in outputs] == pytest.approx([127.732, 219.847, 254.260], abs=5.1e-4)
    assert [o.u for o in outputs] == pytest.approx([0.071, 0.295, 0.236], abs=0.001)  # unrounded: 0.2956 for X
    each = np.array([impedance(one) for one in sets.T]).std(axis=0, ddof=1) / np.sqrt(5)  # second way, H.2.4
    assert [round(float(one), 3) for one in each] == [0.071, 0.295, 0.236]
    assert [o.u for o in outputs] == pytest.approx(each, rel=5e-3)
    scale = np.sqrt(np.diag(joint))
    r_out = joint / np.outer(scale, scale)
    assert [round(float(r_out[0, 1]), 3), round(float(r_out[0, 2]), 3), round(float(r_out[1, 2]), 3)] == [
        -0.588,
        -0.485,
        0.993,
    ]


# JCGM 100:2008, table G.2, columns p = 95 % and 99 %
TABLE_G2 = {
    1: (12.71, 63.66),
    2: (4.30, 9.92),
    5: (2.57, 4.03),
    10: (2.23, 3.17),
    18: (2.10, 2.88),
    50: (2.01, 2.68),
    inf: (1.960, 2.576),
}


@pytest.mark.parametrize("dof", TABLE_G2)
def test_coverage_factors_are_those_of_table_g2(dof):
    p95, p99 = TABLE_G2[dof]
    assert coverage_factor(dof, 0.95) == pytest.approx(p95, abs=0.005)
    assert coverage_factor(dof, 0.99) == pytest.approx(p99, abs=0.005)
