"""P. J. Rousseeuw and C. Croux, J. Am. Stat. Assoc. 88 (1993) 1273: 1.4826 for normal data.

Status: the four decimals are common practice (from memory of the article); the long figures,
1/Phi^-1(0.75) and its reciprocal, are computed, in a library of reference values made apart from
this program. The seven voltages are ours and worked out by hand.
"""

import pytest
from scipy import stats

from server.science.statistics.spread import NORMAL_CONSISTENCY, hampel_scores, median, robust_sd


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
