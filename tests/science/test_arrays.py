"""Inputs are made into numbers once, and refused by name."""

import numpy as np
import pytest

from server.science.arrays import above_zero, finite, not_negative
from server.science.errors import OutOfRange


@pytest.mark.parametrize("check", [finite, not_negative, above_zero])
def test_a_missing_number_stays_missing(check):
    assert np.isnan(check("mass_kg", [1.0, np.nan])).tolist() == [False, True]


@pytest.mark.parametrize("check", [finite, not_negative, above_zero])
@pytest.mark.parametrize("infinity", [np.inf, -np.inf])
def test_an_infinite_number_is_refused(check, infinity):
    with pytest.raises(OutOfRange, match="mass_kg"):
        check("mass_kg", [1.0, infinity])


@pytest.mark.parametrize(("check", "worst"), [(not_negative, -3.0), (above_zero, -3.0)])
def test_the_worst_value_is_the_one_that_is_named(check, worst):
    with pytest.raises(OutOfRange) as refusal:
        check("mass_kg", [np.nan, -1.0, -3.0, 2.0])

    assert refusal.value.found == worst


def test_zero_is_a_mass_but_not_an_area():
    assert not_negative("mass_kg", 0.0) == 0.0
    with pytest.raises(OutOfRange, match="above zero"):
        above_zero("area_m2", 0.0)


def test_the_shape_is_kept():
    assert finite("volts", [[1, 2, 3], [4, 5, 6]]).shape == (2, 3)
    assert finite("volts", []).shape == (0,)
