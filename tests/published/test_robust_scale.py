"""P. J. Rousseeuw and C. Croux, J. Am. Stat. Assoc. 88 (1993) 1273: 1.4826 for normal data.

Status: the four decimals are common practice (from memory of the article); the long figures,
1/Phi^-1(0.75) and its reciprocal, are computed, in a library of reference values made apart from
this program, as is d2 = 1.12837917 for moving ranges of two. The seven voltages are ours and worked
out by hand; a general library of statistics (statsmodels) has its say on them as well.
"""

import math

import numpy as np
import pytest
from scipy import stats
from statsmodels.robust import scale

from server.science.statistics.spread import (
    MEAN_RANGE_OF_TWO,
    NORMAL_CONSISTENCY,
    hampel_scores,
    is_outlying,
    median,
    moving_range_sd,
    robust_sd,
)


def test_the_factor_as_printed():
    assert pytest.approx(1.4826, abs=5e-5) == NORMAL_CONSISTENCY


def test_the_factor_in_full():
    assert pytest.approx(1.4826022185056, rel=1e-12) == NORMAL_CONSISTENCY
    assert pytest.approx(0.674489750196082, rel=1e-12) == 1 / NORMAL_CONSISTENCY
    assert pytest.approx(1 / stats.norm.ppf(0.75), rel=1e-12) == NORMAL_CONSISTENCY


def test_seven_cell_voltages_by_hand():
    # In order: 1.90 2.02 2.03 2.04 2.04 2.05 2.06, middle 2.04. Distances in order: 0 0 0.01 0.01
    # 0.02 0.02 0.14, middle 0.01. Score of 1.90: -0.14 / (1.4826 x 0.01) = -9.443.
    volts = [2.04, 2.06, 2.03, 2.05, 1.90, 2.02, 2.04]

    assert median(volts) == pytest.approx(2.04)
    assert robust_sd(volts) == pytest.approx(0.014826, rel=1e-4)
    assert hampel_scores(volts)[4] == pytest.approx(-0.14 / 0.014826, rel=1e-4)
    assert is_outlying(volts, limit=3.0).tolist() == [False] * 4 + [True] + [False] * 2


def test_a_general_library_has_the_same_robust_deviation():
    rng = np.random.default_rng(seed=31)
    table = rng.standard_t(3, (20, 41))

    np.testing.assert_allclose(robust_sd(table), scale.mad(table, axis=1), rtol=1e-12)


def test_ranges_of_two():
    assert pytest.approx(1.12837917, rel=1e-8) == MEAN_RANGE_OF_TWO
    assert pytest.approx(2 / math.sqrt(math.pi), rel=1e-15) == MEAN_RANGE_OF_TWO


def test_moving_ranges_of_a_process_that_drifts():
    # Montgomery's thirty values (see the control charts): the 29 distances of
    # neighbours add up to 39.25.
    values = [
        *(9.45, 7.99, 9.29, 11.66, 12.16, 10.18, 8.04, 11.46, 9.20, 10.34),
        *(9.03, 11.47, 10.51, 9.40, 10.08, 9.37, 10.62, 10.31, 8.52, 10.84),
        *(10.90, 9.33, 12.29, 11.50, 10.60, 11.08, 10.38, 11.62, 11.31, 10.52),
    ]

    assert moving_range_sd(values) == pytest.approx(39.25 / 29 / 1.12837917, rel=1e-8)
