"""Durst, Simon, Hasche and Gasteiger, J. Electrochem. Soc. 162 (2015) F190: slopes at 80 degC.

Looked up in the abstract: transfer coefficients of about 0.5 lead to Tafel slopes of about 140 mV
per decade at 353 K.
"""

import pytest

from server.science.electrode.tafel import tafel_slope_v, transfer_from_slope


def test_the_slope_at_353_kelvin():
    assert tafel_slope_v(0.5, 353.0) == pytest.approx(0.140, abs=0.0005)


def test_the_coefficient_at_353_kelvin():
    assert transfer_from_slope(0.140, 353.0) == pytest.approx(0.5, abs=0.005)
