"""D. A. G. Bruggeman, Ann. Phys. 416 (1935) 636: an electrolyte with bubbles in it.

Status: the formula, kappa (1 - gas)^1.5, is from memory; the drop of 0.2 V without gas was computed
in a library of reference values made apart from this program, all else here by hand.
"""

import pytest

from server.science.electrolyte.gas import bruggeman_s_m

# 300 A/m2 over 40 mm.
VOLTS_TIMES_S_M = 300.0 * 0.040


def test_the_drop_without_gas():
    assert VOLTS_TIMES_S_M / bruggeman_s_m(60.0, 0.0) == pytest.approx(0.2, rel=1e-9)


def test_the_drop_with_five_per_cent_of_gas():
    # By hand: 0.95 x sqrt 0.95 = 0.95 x 0.974679 = 0.925945; 0.2 / 0.925945 = 0.215996.
    volts = VOLTS_TIMES_S_M / bruggeman_s_m(60.0, 0.05)

    assert volts == pytest.approx(0.215996, abs=1e-6)


@pytest.mark.parametrize(
    ("gas_share", "left"),
    # By hand: 0.9 sqrt 0.9, 0.75 sqrt 0.75, 0.64 x 0.8 and half of sqrt 0.5.
    [(0.10, 0.853815), (0.25, 0.649519), (0.36, 0.512), (0.50, 0.353553)],
)
def test_what_is_left_of_the_conductivity(gas_share, left):
    assert bruggeman_s_m(1.0, gas_share) == pytest.approx(left, abs=1e-6)
