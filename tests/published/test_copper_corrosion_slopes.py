"""Polarisation of copper in acid, Corrosion 27 (1971) 382 (year from memory).

Looked up in the abstract: the cathodic Tafel slope of hydrogen on copper in acid was about 112 mV,
the anodic slope of dissolving copper 30 mV. That two fast electrons give R T ln 10 / 2 F, 29.6 mV
at 25 degC, is theory; the abstract names no temperature.
"""

import pytest

from server.science.electrode.parameters import HYDROGEN_ON
from server.science.electrode.tafel import tafel_slope_v, transfer_from_slope


def test_hydrogen_on_copper():
    ours = HYDROGEN_ON["Cu"].cathodic_transfer

    assert tafel_slope_v(ours, 298.15) == pytest.approx(0.112, abs=0.010)
    # By hand: 0.0591593 / 0.112 = 0.5282.
    assert transfer_from_slope(0.112, 298.15) == pytest.approx(0.5282, abs=0.00005)


def test_copper_dissolving_by_two_electrons():
    assert tafel_slope_v(1.0, 298.15, electrons=2) == pytest.approx(0.030, abs=0.0005)
