"""Wark's rule for zinc, and what an article on optimum conditions implies for its constant.

The rule: form from memory; that an equation of Wark's is in use is looked up (J. Appl.
Electrochem., DOI 10.1007/BF01016215, list of symbols). Constant at 91 %: computed, in a library
of reference values made apart from this program; efficiency at 50 g/L: computed here. Looked up:
"Identification of optimum conditions for zinc electrowinning in high-purity synthetic
electrolytes", abstract: 98.8 % and 98.4 % at best in 0.8 M zinc sulfate with 1.07 M acid.
"""

import pytest

from server.science.losses.wark import TYPICAL_CONSTANTS, wark_constant, wark_efficiency


def test_the_constant_that_91_percent_implies():
    # 0.91 / 0.09 / (60 / 170).
    assert wark_constant(0.91, 60.0, 170.0) == pytest.approx(28.6481, abs=5e-5)
    assert wark_constant(0.91, 60.0, 170.0) == pytest.approx(0.91 / 0.09 * 170 / 60, rel=1e-12)


def test_efficiency_with_less_zinc_and_more_acid():
    # 30 x 50 / 180 = 8.33333; over 9.33333 that is 0.892857.
    assert wark_efficiency(50.0, 180.0, 30.0) == pytest.approx(8.333333 / 9.333333, rel=1e-7)
    assert wark_efficiency(50.0, 180.0, 30.0) == pytest.approx(0.892857, abs=5e-7)


@pytest.mark.parametrize("share", [0.988, 0.984])
def test_a_very_pure_bath_lies_far_above_the_constants_of_houses(share):
    # 0.8 x 65.38 = 52.304 g/L of zinc and 1.07 x 98.072 = 104.937 g/L of acid.
    found = wark_constant(share, 52.304, 104.937)

    assert found == pytest.approx(share / (1 - share) * 104.937 / 52.304, rel=1e-9)
    assert found > 3 * TYPICAL_CONSTANTS[1]
