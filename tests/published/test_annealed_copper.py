"""The International Annealed Copper Standard: what a bar of copper resists.

Looked up in a table of the Industrial Power Engineering and Applications Handbook, p. 970: copper
58 m/(ohm mm2) and 3.93e-3 per degC at 20 degC, aluminium 34.80 m/(ohm mm2), 60 to 61 % of copper.
Looked up on a public page on the conductivity of copper: 1.7241 in microohm cm. From memory:
makers of motors multiply the resistance of copper by (234.5 + T2) / (234.5 + T1), T in degC.
"""

import pytest

from server.science.voltage.drops import (
    ANNEALED_COPPER_OHM_M,
    ANNEALED_COPPER_PER_K,
    bar_drop_v,
)

ONE_MM2 = 1e-6


def test_fifty_eight_metres_to_the_ohm():
    assert bar_drop_v(1.0, 58.0, ONE_MM2) == pytest.approx(1.0)


def test_the_resistivity_as_printed():
    assert ANNEALED_COPPER_OHM_M * 1e8 == pytest.approx(1.7241, abs=0.00005)


def test_the_coefficient_as_printed():
    assert ANNEALED_COPPER_PER_K == pytest.approx(3.93e-3)


def test_aluminium_as_a_share_of_copper():
    volts = bar_drop_v(1.0, 34.80, ONE_MM2, share_of_annealed=34.80 / 58.0)

    assert volts == pytest.approx(1.0)
    assert 0.595 < 34.80 / 58.0 < 0.615


@pytest.mark.parametrize("degc", [40.0, 75.0, 90.0])
def test_a_warm_bar_by_the_rule_of_motors(degc):
    ratio = bar_drop_v(1.0, 1.0, ONE_MM2, degc + 273.15) / bar_drop_v(1.0, 1.0, ONE_MM2)

    assert ratio == pytest.approx((234.5 + degc) / (234.5 + 20.0), abs=2e-4)
