import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.science.errors import OutOfRange
from server.science.losses.leakage import (
    leakage_a,
    leakage_from_share_a,
    string_leakage_a,
    string_volts,
)


def test_a_set_share_is_taken_of_the_current():
    assert leakage_from_share_a(30e3, [0.0, 0.01, 1.0]) == pytest.approx([0.0, 300.0, 30e3])


def test_a_path_carries_current_in_the_direction_of_its_voltage():
    assert leakage_a([100.0, -100.0], 50.0) == pytest.approx([2.0, -2.0])


def test_a_string_that_leaks_evenly_cell_by_cell():
    # Each cell's node leaks by its own voltage to the middle; summed along the string.
    cells, volts, ohm = 2000, 400.0, 5e4
    to_earth = volts * (0.5 - (np.arange(cells) + 0.5) / cells)
    missing = np.cumsum(to_earth / ohm)

    mean, greatest = string_leakage_a(volts, cells, ohm)

    assert mean == pytest.approx(missing.mean(), rel=2e-3)
    assert greatest == pytest.approx(missing.max(), rel=2e-3)


@given(st.floats(0.0, 1e3), st.floats(1.0, 1e3), st.floats(1.0, 1e6))
def test_the_mean_never_exceeds_the_greatest(volts, cells, ohm):
    mean, greatest = string_leakage_a(volts, cells, ohm)

    assert 0.0 <= mean <= greatest


def test_a_missing_number_stays_missing_and_its_neighbours_do_not():
    assert list(np.isnan(string_volts([2.0, np.nan], 100))) == [False, True]
    assert list(np.isnan(leakage_a([2.0, np.nan], 100.0))) == [False, True]
    mean, greatest = string_leakage_a([200.0, np.nan], 100, 1e4)
    assert list(np.isnan(mean)) == list(np.isnan(greatest)) == [False, True]


@pytest.mark.parametrize(
    ("call", "quantity"),
    [
        (lambda: string_volts(2.0, -1), "cells"),
        (lambda: leakage_from_share_a(30e3, 1.5), "share"),
        (lambda: leakage_from_share_a(-1.0, 0.1), "current_a"),
        (lambda: leakage_a(2.0, 0.0), "path_ohm"),
        (lambda: string_leakage_a(-1.0, 100, 1e4), "string_volts"),
    ],
)
def test_an_impossible_value_is_named(call, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        call()
