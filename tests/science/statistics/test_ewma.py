"""EWMA: one call or many, with gaps, and limits that open with age."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from hypothesis.extra.numpy import array_shapes, arrays

from server.science.errors import OutOfRange, WrongShape
from server.science.statistics.ewma import ewma, ewma_half_width, ewma_start

SOME_MISSING = arrays(
    np.float64,
    array_shapes(min_dims=2, max_dims=2, min_side=1, max_side=12),
    elements=st.one_of(st.just(np.nan), st.floats(-50, 50)),
)


@given(SOME_MISSING, st.floats(0.01, 1.0))
def test_it_is_the_weighted_sum_of_the_readings_that_are_there(values, weight):
    found = ewma(values, weight, ewma_start(values.shape[1], 3.0))

    for cell, column in enumerate(values.T):
        there = column[~np.isnan(column)]
        ages = np.arange(len(there))[::-1]
        expected = 3.0 * (1.0 - weight) ** len(there) + there @ (weight * (1.0 - weight) ** ages)
        assert found.averages[-1, cell] == pytest.approx(expected, abs=1e-9)
        assert found.readings[-1, cell] == len(there)


@given(SOME_MISSING, st.integers(0, 12))
def test_two_calls_give_what_one_gives(values, cut):
    whole = ewma(values, 0.2)

    first = ewma(values[:cut], 0.2)
    second = ewma(values[cut:], 0.2, first.state)

    np.testing.assert_array_equal(np.vstack((first.averages, second.averages)), whole.averages)
    np.testing.assert_array_equal(second.state.readings, whole.state.readings)


@given(SOME_MISSING, st.randoms())
def test_cells_in_another_order_have_the_same_averages(values, chance):
    order = list(range(values.shape[1]))
    chance.shuffle(order)

    np.testing.assert_array_equal(
        ewma(values[:, order], 0.3).averages, ewma(values, 0.3).averages[:, order]
    )


def test_a_missing_reading_holds_the_average_and_touches_no_neighbour():
    found = ewma([[1.0, 1.0], [np.nan, 0.0]], 0.5)

    assert found.averages.tolist() == [[0.5, 0.5], [0.5, 0.25]]
    assert found.readings.tolist() == [[1, 1], [1, 2]]


def test_the_whole_weight_is_the_reading_itself():
    values = np.random.default_rng(seed=4).normal(size=(5, 2))

    np.testing.assert_allclose(ewma(values, 1.0).averages, values)


def test_the_limits_open_to_those_of_an_old_chart():
    half = ewma_half_width(2.0, 0.2, 3.0, readings=[0, 1, 2, 500])

    assert half[0] == 0.0
    assert half[1] == pytest.approx(3.0 * 2.0 * 0.2)
    # The variance of two readings is 0.2^2 (1 + 0.8^2).
    assert half[2] == pytest.approx(3.0 * 2.0 * 0.2 * (1.0 + 0.8**2) ** 0.5)
    assert half[3] == pytest.approx(ewma_half_width(2.0, 0.2, 3.0))


def test_the_limits_are_the_spread_of_simulated_charts():
    values = np.random.default_rng(seed=9).normal(size=(6, 40_000))

    spread = ewma(values, 0.3).averages.std(axis=1)

    assert spread == pytest.approx(ewma_half_width(1.0, 0.3, 1.0, np.arange(1, 7)), rel=0.02)


def test_no_cell_is_a_chart_too():
    assert ewma(np.empty((0, 2)), 0.1).state.averages.tolist() == [0.0, 0.0]


@pytest.mark.parametrize(
    ("arguments", "error", "quantity"),
    [
        ({"values": [[np.inf]]}, OutOfRange, "values"),
        ({"values": [1.0]}, WrongShape, "values"),
        ({"weight": 0.0}, OutOfRange, "weight"),
        ({"weight": 1.1}, OutOfRange, "weight"),
        ({"state": ewma_start(3)}, WrongShape, "state"),
    ],
)
def test_what_cannot_be_is_refused(arguments, error, quantity):
    with pytest.raises(error, match=quantity):
        ewma(**{"values": [[1.0]], "weight": 0.2, **arguments})


def test_starts_and_limits_that_cannot_be_are_refused():
    with pytest.raises(OutOfRange, match="cells"):
        ewma_start(-1)
    with pytest.raises(WrongShape, match="start"):
        ewma_start(2, [0.0, 0.0, 0.0])
    with pytest.raises(OutOfRange, match="sigma"):
        ewma_half_width(-1.0, 0.2, 3.0)
