"""S. Narasimhan and C. Jordache, Data Reconciliation and Gross Error Detection, Gulf, 2000.

Looked up: the six flows around a heat exchanger with a bypass, their unit variances and the four
balances, in a public collection of benchmark problems that quotes the book. Reconciled flows and
the global statistic, 6.4075, are computed in a library of reference values made apart from this
program, equal to the book's figures as recalled (from memory). The case with a gross error and the
house of copper are worked out by hand below. The critical score for six tests and the quantiles of
chi squared are computed from their distributions.
"""

import math

import numpy as np
import pytest
from scipy import stats

from server.science.uncertainty.reconcile import reconciled, sidak_score, without_gross_errors

MEASURED = np.array([101.91, 64.45, 34.65, 64.20, 36.44, 98.88])
BALANCES = np.array(
    [[1, -1, -1, 0, 0, 0], [0, 1, 0, -1, 0, 0], [0, 0, 1, 0, -1, 0], [0, 0, 0, 1, 1, -1]]
)


def test_the_reconciled_flows():
    result = reconciled(BALANCES, MEASURED, np.ones(6))

    assert result.values == pytest.approx([100.22, 64.50, 35.72, 64.50, 35.72, 100.22], abs=0.005)
    # By hand: three pairs, of means a, b, c, with a = b + c. The three means miss by 100.395 -
    # 64.325 - 35.545 = 0.525, a third of which goes to each.
    by_hand = [100.395 - 0.175, 64.325 + 0.175, 35.545 + 0.175]
    assert result.values[:3] == pytest.approx(by_hand, rel=1e-12)


def test_the_global_test():
    result = reconciled(BALANCES, MEASURED, np.ones(6))

    # By hand: half of the squares of the differences in the pairs, 3.03, 0.25 and 1.79, and
    # 0.525^2 / (3 / 2).
    by_hand = (3.03**2 + 0.25**2 + 1.79**2) / 2 + 0.525**2 / 1.5
    assert result.statistic == pytest.approx(6.4075, abs=5e-4)
    assert result.statistic == pytest.approx(by_hand, rel=1e-12)
    assert result.degrees_of_freedom == 4
    assert result.statistic < stats.chi2.ppf(0.95, 4)
    assert result.p_value == pytest.approx(stats.chi2.sf(by_hand, 4), rel=1e-9)
    assert result.suspects == ()


def test_a_gross_error_on_the_second_flow():
    wrong = MEASURED + np.array([0, 4.0, 0, 0, 0, 0])

    result = reconciled(BALANCES, wrong, np.ones(6))

    # By hand: the second pair now differs by 4.25, its mean is 66.325, the three miss by -1.475.
    by_hand = (3.03**2 + 4.25**2 + 1.79**2) / 2 + 1.475**2 / 1.5
    assert result.statistic == pytest.approx(by_hand, rel=1e-12)
    assert result.p_value < 0.05
    # The second moves by -2.125 - 1.475 / 3; its variance is 1/2 + 1/6.
    score = (-2.125 - 1.475 / 3) / math.sqrt(2 / 3)
    assert result.scores[1] == pytest.approx(score, rel=1e-12)
    assert np.nanargmax(np.abs(result.scores)) == 1
    assert abs(score) > sidak_score(6)
    assert result.suspects == (1,)


def test_serial_elimination_takes_out_that_flow_and_no_other():
    wrong = MEASURED + np.array([0, 4.0, 0, 0, 0, 0])

    found = without_gross_errors(BALANCES, wrong, np.ones(6))

    assert found.removed == (1,)
    # Without the second flow the error is gone: the fourth alone says what flows there.
    clean = reconciled(BALANCES, np.where(np.arange(6) == 1, np.nan, MEASURED), np.ones(6))
    assert found.steps[-1].values == pytest.approx(clean.values, rel=1e-12)
    assert found.steps[-1].statistic == pytest.approx(
        found.steps[0].statistic - found.steps[0].scores[1] ** 2, rel=1e-9
    )


def test_the_critical_score_for_six_measurements():
    assert sidak_score(6) == pytest.approx(2.631, abs=0.001)
    by_hand = stats.norm.ppf(1 - (1 - 0.95 ** (1 / 6)) / 2)
    assert sidak_score(6) == pytest.approx(by_hand, rel=1e-9)


@pytest.mark.parametrize(
    ("degrees", "quantile"),
    [(1, 3.84146), (2, 5.99146), (3, 7.81473), (4, 9.48773), (5, 11.0705), (6, 12.5916)],
)
def test_the_chance_at_the_quantiles_of_chi_squared(degrees, quantile):
    # As many meters on one pipe and one more: the differences of each from the first.
    balances = np.hstack([np.ones((degrees, 1)), -np.eye(degrees)])
    readings = np.zeros(degrees + 1)
    # One reading off by d gives a statistic of d^2 n / (n + 1) for n + 1 meters.
    readings[0] = math.sqrt(quantile * (degrees + 1) / degrees)

    result = reconciled(balances, readings, np.ones(degrees + 1))

    assert result.statistic == pytest.approx(quantile, rel=1e-9)
    assert result.p_value == pytest.approx(0.05, abs=1e-4)


def test_the_copper_of_a_house():
    # In advance 1000 (10), out in spent 905 (9), on cathodes 102 (2), kg/h. By hand: -7 missing,
    # variance 100 + 81 + 4 = 185, shares 100/185, 81/185 and 4/185 of it.
    result = reconciled([[1, -1, -1]], [1000, 905, 102], [10, 9, 2])

    assert result.values == pytest.approx(
        [1000 + 700 / 185, 905 - 567 / 185, 102 - 28 / 185], abs=0.01
    )
    assert result.statistic == pytest.approx(49 / 185, rel=1e-12)
    assert result.degrees_of_freedom == 1
    # With one balance all three have the same score, and none is told from the others.
    assert np.abs(result.scores) == pytest.approx([7 / math.sqrt(185)] * 3)
