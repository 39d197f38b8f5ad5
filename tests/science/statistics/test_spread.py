"""Robust centre and scale, with values missing and values wrong."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from hypothesis.extra.numpy import array_shapes, arrays

from server.science.errors import OutOfRange
from server.science.statistics.spread import (
    hampel_scores,
    is_outlying,
    median,
    median_absolute_deviation,
    moving_range_sd,
    robust_sd,
)

SOME_MISSING = arrays(
    np.float64,
    array_shapes(min_dims=2, max_dims=2, min_side=1, max_side=9),
    elements=st.one_of(st.just(np.nan), st.floats(-1e6, 1e6)),
)


@given(SOME_MISSING)
def test_the_median_is_numpys_where_anything_is_there(values):
    rows = values[np.isfinite(values).any(axis=1)]

    expected = np.nanmedian(rows, axis=1) if len(rows) else np.empty(0)

    np.testing.assert_allclose(median(rows), expected, rtol=1e-12, atol=1e-9)


@pytest.mark.parametrize("axis", [0, 1, 2, -2])
def test_any_axis_can_be_worked_along(axis):
    values = np.random.default_rng(seed=11).normal(size=(4, 5, 6))
    values[1, 2, 3] = np.nan

    np.testing.assert_allclose(median(values, axis=axis), np.nanmedian(values, axis=axis))


def test_nothing_but_missing_values_gives_no_answer():
    assert np.isnan(median([np.nan, np.nan]))
    assert np.isnan(median([]))
    assert np.isnan(robust_sd([np.nan]))


def test_the_input_is_left_as_it_was():
    values = np.array([3.0, 1.0, np.nan, 2.0])

    hampel_scores(values)

    np.testing.assert_array_equal(values, [3.0, 1.0, np.nan, 2.0])


def test_normal_data_give_their_standard_deviation():
    values = np.random.default_rng(seed=3).normal(2.0, 0.010, 100_000)

    assert robust_sd(values) == pytest.approx(0.010, rel=0.02)


def test_four_wild_readings_in_ten_do_not_move_it():
    values = np.array([2.00, 2.01, 1.99, 2.00, 2.01, 1.99, 50.0, 60.0, 70.0, 80.0])

    assert median(values) == pytest.approx(2.01)
    assert robust_sd(values) < 0.04


def test_a_floor_keeps_a_coarse_meter_from_looking_perfect():
    assert robust_sd([2.0, 2.0, 2.0, 2.1], floor=0.002) == 0.002
    assert robust_sd([2.0, 2.0, 2.0, 2.1]) == 0.0


def test_equal_values_score_zero_and_any_other_is_infinitely_far():
    assert hampel_scores([2.0, 2.0, 2.0, 1.9]).tolist() == [0.0, 0.0, 0.0, -np.inf]


def test_a_missing_value_has_no_score_and_is_not_marked():
    values = [2.03, 2.05, np.nan, 2.04, 2.02, 1.62]

    assert np.isnan(hampel_scores(values)).tolist() == [False, False, True, False, False, False]
    assert is_outlying(values).tolist() == [False, False, False, False, False, True]


def test_scores_of_rows_are_those_of_each_row():
    values = np.random.default_rng(seed=2).normal(size=(3, 7))

    rows = np.array([hampel_scores(row) for row in values])

    np.testing.assert_allclose(hampel_scores(values, axis=1), rows)


def test_a_spread_grows_with_its_values():
    values = np.random.default_rng(seed=4).normal(size=50)

    doubled = median_absolute_deviation(2.0 * values + 7.0)

    assert doubled == pytest.approx(2.0 * median_absolute_deviation(values))


def test_a_step_of_the_level_hardly_moves_the_deviation_of_neighbours():
    values = np.random.default_rng(seed=5).normal(size=400)
    stepped = values + np.where(np.arange(400) < 200, 0.0, 10.0)

    assert moving_range_sd(values) == pytest.approx(1.0, rel=0.1)
    assert moving_range_sd(stepped) == pytest.approx(moving_range_sd(values), rel=0.03)


def test_neighbours_of_a_missing_reading_are_no_pair():
    # By hand: distances 1 and 3 over d2, the mean 2.
    assert moving_range_sd([1.0, 2.0, np.nan, 9.0, 6.0]) == pytest.approx(2 / 1.12837917)


def test_single_readings_have_no_deviation_of_neighbours():
    rows = moving_range_sd([[1.0, np.nan, 2.0], [np.nan] * 3, [1.0, 1.0, np.nan]])

    assert np.isnan(rows).tolist() == [True, True, False]
    assert np.isnan(moving_range_sd([1.0]))
    assert moving_range_sd([[1.0, 5.0], [2.0, 5.0]], axis=0).shape == (2,)


@pytest.mark.parametrize(
    ("arguments", "quantity"),
    [({"limit": 0.0}, "limit"), ({"floor": -1.0}, "floor"), ({"values": [np.inf]}, "values")],
)
def test_what_cannot_be_is_refused(arguments, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        is_outlying(**{"values": [1.0, 2.0], **arguments})
