"""Purdue University, MA 366, lesson 7 (autumn 2025): salt water through a well-stirred tank.

Looked up: the lesson's page: a tank of 600 L takes 2 kg of salt a minute and gives up Q / 150 kg a
minute; Q(t) = 300 - 260 exp(-t / 150) kg, and in the long run 1/2 kg in each litre. A refinery's
electrolyte with its bleed is the same tank.
"""

import math

import pytest

from server.science.refining.bleed import concentration_after_g_l, steady_g_l, time_to_limit_s

# 600 L with a hundred-and-fiftieth given up in a minute: 4 L in a minute.
IN_KG_S, OUT_M3_S, VOLUME_M3 = 2.0 / 60, 0.004 / 60, 0.6


@pytest.mark.parametrize("minutes", [0.0, 10.0, 150.0, 1000.0])
def test_salt_in_the_tank(minutes):
    g_l = concentration_after_g_l(40.0 / 0.6, IN_KG_S, OUT_M3_S, VOLUME_M3, minutes * 60)

    assert g_l * VOLUME_M3 == pytest.approx(300 - 260 * math.exp(-minutes / 150), rel=1e-12)


def test_the_long_run():
    assert steady_g_l(IN_KG_S, OUT_M3_S) == pytest.approx(500.0, rel=1e-12)


def test_the_time_to_two_hundred_kilograms():
    # By hand: 260 exp(-t / 150) = 100, so t = 150 ln 2.6.
    found = time_to_limit_s(40 / 0.6, 200 / 0.6, IN_KG_S, OUT_M3_S, VOLUME_M3)

    assert found / 60 == pytest.approx(150 * math.log(2.6), rel=1e-12)
