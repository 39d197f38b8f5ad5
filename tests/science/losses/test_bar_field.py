import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.science.errors import OutOfRange, WrongShape
from server.science.losses.bar_field import (
    FIELD_LIMITS,
    distance_for_field_m,
    flux_density_of_bars_t,
    flux_density_t,
    limits_exceeded,
)

AMPS = st.floats(1.0, 500e3)
METRES = st.floats(0.01, 100.0)


@given(AMPS, METRES)
def test_the_distance_comes_back_from_the_field(amps, metres):
    field = flux_density_t(amps, metres)

    assert distance_for_field_m(amps, field) == pytest.approx(metres, rel=1e-12)


@given(AMPS, st.floats(-10.0, 10.0), st.floats(0.1, 10.0))
def test_one_bar_among_none_is_that_bar(amps, across, up):
    found = flux_density_of_bars_t([amps], [across], [up])

    assert found == pytest.approx(flux_density_t(amps, math.hypot(across, up)), rel=1e-12)


def test_the_direction_of_one_current_does_not_matter():
    assert flux_density_t(-600.0, 0.05) == flux_density_t(600.0, 0.05)


def test_a_bar_there_and_a_bar_back_fade_faster_than_one():
    # Far off, a pair falls with the square of the distance: 2 x spacing / distance of one bar.
    alone = flux_density_t(30e3, 20.0)
    pair = flux_density_of_bars_t([30e3, -30e3], [19.9, 20.1], [0.0, 0.0])

    assert pair == pytest.approx(alone * 0.2 / 20.0, rel=1e-3)


def test_many_places_at_once():
    found = flux_density_of_bars_t([600.0, 600.0], [[0.1, 0.2], [0.1, np.nan]], 0.1)

    assert found.shape == (2,)
    assert list(np.isnan(found)) == [False, True]


@pytest.mark.parametrize(
    ("tesla", "count"), [(0.4e-3, 0), (0.5e-3, 0), (0.6e-3, 2), (5e-3, 3), (3.0, 5), (9.0, 6)]
)
def test_limits_are_counted_from_the_weakest(tesla, count):
    assert limits_exceeded(tesla) == FIELD_LIMITS[:count]


def test_limits_stand_from_the_weakest_to_the_strongest():
    fields = [limit.flux_density_t for limit in FIELD_LIMITS]

    assert fields == sorted(fields)


def test_a_missing_field_exceeds_nothing():
    assert limits_exceeded(math.nan) == ()


@pytest.mark.parametrize(
    ("call", "quantity"),
    [
        (lambda: flux_density_t(1.0, 0.0), "distance_m"),
        (lambda: distance_for_field_m(1.0, 0.0), "flux_density_t"),
        (lambda: flux_density_of_bars_t([1.0], [0.0], [0.0]), "distance_m"),
        (lambda: limits_exceeded(-1.0), "flux_density_t"),
    ],
)
def test_an_impossible_value_is_named(call, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        call()


def test_bars_must_come_in_a_sequence():
    with pytest.raises(WrongShape, match="currents_a"):
        flux_density_of_bars_t(1.0, 1.0, 1.0)
