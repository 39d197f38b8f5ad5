"""University of Cambridge, DoITPoMS, "Tafel curve of copper electrode".

Looked up: exchange current density 1 A/m2; Tafel slopes of 0.059 V per decade, from 300 K,
a coefficient of 0.5 and two electrons. The slope's further digits, 0.0595264, are computed in a
library of reference values made apart from this program; the page cut them off.
"""

import pytest

from server.science.electrode.parameters import COPPER_FOR_TEACHING
from server.science.electrode.tafel import tafel_overpotential_v, tafel_slope_v


def test_the_slope_printed():
    assert tafel_slope_v(0.5, 300.0, electrons=2) == pytest.approx(0.059, abs=0.001)


def test_the_slope_with_all_its_digits():
    assert tafel_slope_v(0.5, 300.0, electrons=2) == pytest.approx(0.0595264, abs=5e-8)


def test_our_copy_of_its_parameters():
    slope_v = tafel_slope_v(COPPER_FOR_TEACHING.anodic_transfer, 300.0)

    assert COPPER_FOR_TEACHING.exchange_a_m2 == 1.0
    assert slope_v == pytest.approx(0.059, abs=0.001)
    # Two decades above the exchange current, two slopes.
    assert tafel_overpotential_v(100.0, 1.0, slope_v) == pytest.approx(0.118, abs=0.002)
