"""Tafel's law and Butler-Volmer at given currents of copper and zinc cells.

Status of the figures: computed, in a library of reference values made apart from this program, from
the formulas; those marked "by hand" are computed here, the arithmetic written out. The kinetics
are examples, not measurements.
"""

import math

import pytest

from server.science.electrode.rates import butler_volmer_a_m2, butler_volmer_overpotential_v
from server.science.electrode.tafel import tafel_current_a_m2, tafel_overpotential_v

# R T / F at 45 degC, V: 8.314462618 x 318.15 / 96485.33212.
THERMAL_V = 8.314462618 * 318.15 / 96485.33212


def test_overpotential_of_three_hundred_amperes():
    assert tafel_overpotential_v(300.0, 1.0, 0.118) == pytest.approx(0.2923, rel=1e-4)


def test_and_back():
    assert tafel_current_a_m2(0.2923, 1.0, 0.118) == pytest.approx(300.0, rel=1e-3)


def test_the_anode_of_a_copper_cell():
    # Of a cell sum of 1.90271 V the other terms are 0.935 + 0.060 + 300 x 0.040 / 60 + 0.060.
    anode_v = 1.90271 - 0.935 - 0.060 - 0.200 - 0.060

    assert tafel_overpotential_v(300.0, 1e-4, 0.100) == pytest.approx(anode_v, abs=1e-5)


def test_a_lead_silver_anode_from_250_to_400_by_hand():
    # log10(1.6) = 0.204120 decades of 0.140 V are 28.577 mV.
    before, after = tafel_overpotential_v([250.0, 400.0], 1e-4, 0.140)

    assert after - before == pytest.approx(0.028577, rel=1e-4)


def test_a_copper_cathode_by_hand():
    # With u = exp(-0.5 F eta / R T), -300 = 50 (u^-3 - u), or u^4 - 6 u^3 - 1 = 0. From 6, where
    # the left side is -1 and its slope 4 x 216 - 18 x 36 = 216, Newton's steps are 6.004630 and
    # 6.004619.
    root = 6.004619
    assert root**4 - 6 * root**3 - 1 == pytest.approx(0.0, abs=2e-4)
    volts = -2 * math.log(root) * THERMAL_V

    assert volts == pytest.approx(-0.09829, abs=5e-6)
    assert butler_volmer_overpotential_v(-300.0, 50.0, 1.5, 0.5, 318.15) == pytest.approx(
        volts, abs=1e-7
    )
    assert butler_volmer_a_m2(volts, 50.0, 1.5, 0.5, 318.15) == pytest.approx(-300.0, rel=1e-6)


def test_a_copper_anode_by_hand():
    # With w = exp(0.5 F eta / R T), 300 = 50 (w^3 - 1/w), or w^4 - 6 w - 1 = 0. From 1.87, where
    # the left side is 0.00830 and its slope 4 x 6.5392 - 6 = 20.157, Newton's step is 1.869588.
    root = 1.869588
    assert root**4 - 6 * root - 1 == pytest.approx(0.0, abs=2e-5)

    volts = butler_volmer_overpotential_v(300.0, 50.0, 1.5, 0.5, 318.15)

    assert volts == pytest.approx(2 * math.log(root) * THERMAL_V, abs=1e-7)


def test_equal_coefficients_by_hand():
    # asinh(3) = ln(3 + sqrt 10) = 1.818446, over 0.5.
    volts = butler_volmer_overpotential_v(300.0, 50.0, 0.5, 0.5, 318.15)

    assert volts == pytest.approx(2 * 1.818446 * THERMAL_V, rel=1e-6)
