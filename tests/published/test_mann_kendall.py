"""H. B. Mann, Econometrica 13 (1945) 245, as R. O. Gilbert (1987) works it; P. K. Sen (1968).

Looked up: eleven values with ties from EPA QA/G-9S (2006), page 109, in the help pages of a program
that checks itself by them: S = 22, variance 155.33, Z = 1.685; the seven points of Sen's article,
J. Am. Stat. Assoc. 63 (1968) 1379, in a public test suite of R: slope 4, intercept 6, 93 % from
26/7 to 35/8 (the article itself errs in one slope, the suite says). The thirty values of Montgomery
and the twenty each of the NIST handbook's EWMA and CUSUM examples are looked up, too; their tests
and slopes are computed, in a library of reference values made apart from this program, equal to
pymannkendall 1.4.3 and SciPy. What is worked out by hand says so.
"""

import math

import numpy as np
import pytest
from scipy import stats

from server.science.statistics.trends import mann_kendall, theil_sen, theil_sen_slopes

MONTGOMERY = [
    *(9.45, 7.99, 9.29, 11.66, 12.16, 10.18, 8.04, 11.46, 9.20, 10.34),
    *(9.03, 11.47, 10.51, 9.40, 10.08, 9.37, 10.62, 10.31, 8.52, 10.84),
    *(10.90, 9.33, 12.29, 11.50, 10.60, 11.08, 10.38, 11.62, 11.31, 10.52),
]
NIST_EWMA = [
    *(52.0, 47.0, 53.0, 49.3, 50.1, 47.0, 51.0, 50.1, 51.2, 50.5),
    *(49.6, 47.6, 49.9, 51.3, 47.8, 51.2, 52.6, 52.4, 53.6, 52.1),
]
NIST_CUSUM = [
    *(324.925, 324.675, 324.725, 324.350, 325.350, 325.225, 324.125, 324.525, 325.225, 324.600),
    *(324.625, 325.150, 328.325, 327.250, 327.825, 328.500, 326.675, 327.775, 326.875, 328.350),
]


def test_eleven_values_with_ties():
    test = mann_kendall([10, 10, 10, 5, 10, 20, 18, 17, 15, 24, 15])

    # By hand: (11 x 10 x 27 - 4 x 3 x 13 - 2 x 1 x 9) / 18 = 2796 / 18.
    assert test.s == 22
    assert test.variance == pytest.approx(155.33, abs=0.005)
    assert test.variance == pytest.approx(2796 / 18, rel=1e-12)
    assert test.z == pytest.approx(1.685, abs=0.0005)


def test_the_points_of_sens_article():
    at, values = [1, 2, 3, 4, 10, 12, 18], [9, 15, 19, 20, 45, 55, 78]

    line = theil_sen(at, values, level=0.93)

    assert line.slope == pytest.approx(4.0, rel=1e-12)
    assert line.intercept == pytest.approx(6.0, rel=1e-12)
    assert (line.low, line.high) == pytest.approx((26 / 7, 35 / 8), rel=1e-12)
    assert theil_sen_slopes(at, values) == pytest.approx(4.0, rel=1e-12)
    # All 21 pairs rise: without ties the variance is 7 x 6 x 19 / 18.
    test = mann_kendall(values)
    assert (test.s, test.variance) == pytest.approx((21, 798 / 18))


def test_thirty_values_of_montgomery():
    test = mann_kendall(MONTGOMERY)
    line = theil_sen(np.arange(30), MONTGOMERY)

    assert test.s == 111
    assert test.variance == pytest.approx(3141.667, abs=5e-4)
    assert test.z == pytest.approx(1.96251, abs=1e-4)
    assert test.p_value == pytest.approx(0.0497027, rel=1e-3)
    assert line.slope == pytest.approx(0.05, abs=1e-6)
    assert (line.low, line.high) == pytest.approx((0.00058824, 0.0932), abs=1e-4)


def test_twenty_values_of_the_handbook_for_ewma():
    test = mann_kendall(NIST_EWMA)
    line = theil_sen(np.arange(20), NIST_EWMA)

    assert test.s == 55
    assert test.variance == pytest.approx(947, rel=1e-12)
    assert test.z == pytest.approx(1.75476, abs=1e-4)
    assert test.p_value == pytest.approx(0.0792996, rel=1e-3)
    assert line.slope == pytest.approx(0.1354167, abs=1e-6)
    assert (line.low, line.high) == pytest.approx((-0.028571, 0.28667), abs=1e-4)


def test_twenty_values_of_the_handbook_for_cusum():
    # Counted pair by pair; one tie of two, 325.225: (20 x 19 x 45 - 2 x 1 x 9) / 18 = 949.
    pairs = [(a, b) for i, a in enumerate(NIST_CUSUM) for b in NIST_CUSUM[i + 1 :]]
    s = sum(b > a for a, b in pairs) - sum(b < a for a, b in pairs)

    test = mann_kendall(NIST_CUSUM)

    assert test.s == s
    assert test.variance == pytest.approx(949.0, rel=1e-12)
    z = (s - 1) / math.sqrt(949.0)
    assert test.z == pytest.approx(z, rel=1e-12)
    assert test.p_value == pytest.approx(2 * stats.norm.sf(z), rel=1e-9)
    slopes = [
        (NIST_CUSUM[j] - NIST_CUSUM[i]) / (j - i) for i in range(20) for j in range(i + 1, 20)
    ]
    assert theil_sen(np.arange(20), NIST_CUSUM).slope == pytest.approx(np.median(slopes), rel=1e-12)


def test_ten_harvests_with_ties():
    # Current efficiency of ten harvests, per cent; ours. By hand, each against those before it:
    # 93.0 +1, 92.8 0, 92.5 -2, 93.0 +3, 93.4 +5, 92.1 -6, 93.6 +7, 93.0 +2, 93.3 +5: 15. Ties of
    # two (92.5) and three (93.0): (10 x 9 x 25 - 2 x 1 x 9 - 3 x 2 x 11) / 18 = 2166 / 18.
    harvests = [92.5, 93.0, 92.8, 92.5, 93.0, 93.4, 92.1, 93.6, 93.0, 93.3]

    test = mann_kendall(harvests)

    assert test.s == 1 + 0 - 2 + 3 + 5 - 6 + 7 + 2 + 5
    assert test.variance == pytest.approx(2166 / 18, rel=1e-12)
    assert test.z == pytest.approx(14 / math.sqrt(2166 / 18), rel=1e-12)


@pytest.mark.parametrize("series", [MONTGOMERY, NIST_EWMA, NIST_CUSUM])
def test_kendalls_tau_of_a_general_library_counts_the_same_pairs(series):
    # tau-b = S / sqrt(pairs (pairs - ties)): the moments have no ties.
    pairs = len(series) * (len(series) - 1) / 2
    ties = sum(t * (t - 1) / 2 for t in np.unique(series, return_counts=True)[1])

    tau = stats.kendalltau(np.arange(len(series)), series).statistic

    assert mann_kendall(series).s == pytest.approx(tau * math.sqrt(pairs * (pairs - ties)))
