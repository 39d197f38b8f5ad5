"""Small copper problems of open teaching pages: a tutoring page and an electrolysis module.

Looked up: the questions (38.8 g in 5.44 h at 6.74 A; 0.650 A for 30.0 min and 0.385 g; 1.52 g in
2.00 h). The answers are computed, in a library of reference values made apart from this program,
and for the second question by hand here.
"""

import pytest

from server.science.constants import COPPER
from server.science.faraday import charge_for_c, current_efficiency


def test_efficiency_of_the_tutoring_page():
    share = current_efficiency(38.8e-3, 6.74 * 5.44 * 3600, COPPER)

    assert share * 100 == pytest.approx(89.263, abs=0.0005)


def test_efficiency_of_the_modules_first_problem():
    # By hand: 0.650 A x 0.5 h = 0.325 Ah; x 63.546 / (2 x 26.8014811454) = 0.385286 g; 0.385 of it.
    share = current_efficiency(0.385e-3, 0.650 * 1800, COPPER)

    assert share == pytest.approx(0.385 / (0.325 * 63.546 / (2 * 26.8014811454)), rel=1e-9)
    assert share == pytest.approx(0.999259, abs=1e-6)


def test_current_of_the_modules_third_problem():
    charge_c = charge_for_c(1.52e-3, COPPER)

    assert charge_c == pytest.approx(4615.797, abs=0.05)
    assert charge_c / 7200 == pytest.approx(0.641083, abs=1e-5)
