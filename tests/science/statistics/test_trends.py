"""Trends of many series at once: as of each alone, and blind to a few wild readings."""

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from hypothesis.extra import numpy as arrays

from server.science.errors import OutOfRange, WrongShape
from server.science.statistics import trends
from server.science.statistics.trends import (
    mann_kendall,
    theil_sen,
    theil_sen_slopes,
    time_to_limit,
)

READINGS = arrays.arrays(
    np.float64,
    (4, 9),
    elements=st.one_of(st.integers(-20, 20).map(float), st.just(math.nan)),
)


@given(READINGS)
def test_many_slopes_at_once_are_those_of_each_alone(values):
    at = np.array([0.0, 1.0, 2.0, 4.0, 5.0, 7.0, 7.5, 9.0, 12.0])

    together = theil_sen_slopes(at, values)

    np.testing.assert_allclose(together, theil_sen(at, values).slope, rtol=1e-12, atol=1e-12)


def test_many_series_are_worked_out_in_parts(monkeypatch):
    values = np.random.default_rng(seed=1).normal(size=(50, 12))
    whole = theil_sen_slopes(np.arange(12), values)

    monkeypatch.setattr(trends, "PAIRS_AT_ONCE", 100)

    assert theil_sen_slopes(np.arange(12), values).tolist() == whole.tolist()


def test_a_line_with_blunders_keeps_its_slope():
    at = np.arange(20.0)
    values = 2.0 + 0.002 * at
    values[[3, 8, 15, 16]] += [1.0, -2.0, 0.7, 5.0]

    line = theil_sen(at, values)

    assert line.slope == pytest.approx(0.002, rel=1e-9)
    assert line.intercept == pytest.approx(2.0, rel=1e-9)
    assert line.low <= 0.002 <= line.high


@given(READINGS)
def test_a_missing_reading_leaves_the_neighbours_untouched(values):
    alone = mann_kendall(values[1])
    values[0] = np.nan

    test = mann_kendall(values)

    assert np.isnan(test.s[0])
    np.testing.assert_array_equal(test.s[1], alone.s)
    np.testing.assert_array_equal(test.p_value[1], alone.p_value)


@given(READINGS)
def test_turning_the_time_around_turns_the_trend_around(values):
    forward, backward = mann_kendall(values), mann_kendall(values[:, ::-1])

    np.testing.assert_array_equal(forward.s, -backward.s)
    np.testing.assert_array_equal(forward.variance, backward.variance)
    np.testing.assert_array_equal(forward.p_value, backward.p_value)


@given(READINGS, st.floats(0.5, 3.0), st.floats(-50.0, 50.0))
def test_the_unit_of_the_readings_is_all_the_same(values, scale, shift):
    plain = theil_sen_slopes(np.arange(9), values)
    other = theil_sen_slopes(np.arange(9), shift + scale * values)

    np.testing.assert_allclose(other, scale * plain, rtol=1e-9, atol=1e-9)


def test_the_shape_of_the_series_is_kept():
    values = np.random.default_rng(seed=2).normal(size=(2, 3, 8))

    assert theil_sen(np.arange(8), values).slope.shape == (2, 3)
    assert theil_sen_slopes(np.arange(8), values).shape == (2, 3)
    assert mann_kendall(values, remembering=True).z.shape == (2, 3)


def test_too_few_readings_have_no_trend():
    for values in ([1.0, np.nan, np.nan], [np.nan] * 3):
        assert np.isnan(theil_sen([0, 1, 2], values).slope)
        assert np.isnan(theil_sen_slopes([0, 1, 2], values))
        assert np.isnan(mann_kendall(values).s)
        assert np.isnan(mann_kendall(values).p_value)


def test_readings_of_one_moment_have_no_slope():
    assert np.isnan(theil_sen([3, 3], [1.0, 2.0]).slope)
    assert np.isnan(theil_sen_slopes([3, 3], [1.0, 2.0]))


def test_equal_readings_have_no_trend_for_certain():
    test = mann_kendall([2.0] * 12, remembering=True)

    assert (test.s, test.variance, test.z, test.p_value) == (0.0, 0.0, 0.0, 1.0)


def test_a_straight_line_remembers_nothing():
    line = 2.0 + 0.1 * np.arange(30.0)

    assert mann_kendall(line, remembering=True).variance == mann_kendall(line).variance


def test_readings_that_remember_are_no_longer_called_a_trend():
    rng = np.random.default_rng(seed=3)
    false_alarms = {False: 0, True: 0}
    for _ in range(60):
        wave = np.zeros(80)
        for place in range(1, 80):
            wave[place] = 0.7 * wave[place - 1] + rng.normal()
        for remembering in false_alarms:
            test = mann_kendall(wave, remembering=remembering, lags=10)
            false_alarms[remembering] += int(test.p_value < 0.05)

    assert false_alarms[False] > 15
    assert false_alarms[True] < false_alarms[False] / 2


def test_a_few_readings_are_not_asked_what_they_remember():
    plain, corrected = mann_kendall([1.0, 3.0, 2.0]), mann_kendall([1.0, 3.0, 2.0], True)

    assert corrected.variance == plain.variance


def test_a_correction_over_no_lags_changes_nothing():
    values = np.random.default_rng(seed=4).normal(size=30)

    assert mann_kendall(values, True, lags=0).p_value == mann_kendall(values).p_value


def test_time_to_a_limit_by_hand():
    reach = time_to_limit(
        [2.05, 2.05, 2.05, 2.20, 2.25], 2.20, [0.01, -0.01, 0.0, 0.01, -0.01],
        [0.005, -0.02, -0.01, 0.0, -0.02], [0.015, 0.01, 0.02, 0.02, -0.005],
    )  # fmt: skip

    assert reach.expected == pytest.approx([15, math.inf, math.inf, 0, 5])
    assert reach.earliest == pytest.approx([10, 15, 7.5, 0, 2.5])
    assert reach.latest == pytest.approx([30, math.inf, math.inf, 0, 10])


def test_what_is_missing_has_no_time():
    reach = time_to_limit([np.nan, 2.0], 2.2, [0.01, 0.01], [0.0, np.nan], 0.02)

    assert np.isnan(reach.expected).tolist() == [True, False]
    assert np.isnan(reach.latest).tolist() == [True, True]


@pytest.mark.parametrize(
    ("call", "error", "quantity"),
    [
        (lambda: theil_sen([0, 1], [1.0, 2.0], level=1.0), OutOfRange, "level"),
        (lambda: theil_sen([0, 1, 2], [1.0, 2.0]), WrongShape, "values"),
        (lambda: theil_sen([0, np.nan], [1.0, 2.0]), WrongShape, "at"),
        (lambda: theil_sen_slopes([[0, 1]], [1.0, 2.0]), WrongShape, "at"),
        (lambda: theil_sen_slopes([0, 1], [1.0, np.inf]), OutOfRange, "values"),
        (lambda: mann_kendall(1.0), WrongShape, "values"),
        (lambda: mann_kendall([1.0, 2.0], lags=-1), OutOfRange, "lags"),
        (lambda: mann_kendall([1.0, 2.0], level=0.0), OutOfRange, "level"),
        (lambda: time_to_limit(1.0, 2.0, 0.1, 0.2, 0.1), OutOfRange, "low"),
    ],
)
def test_what_cannot_be_is_refused(call, error, quantity):
    with pytest.raises(error, match=quantity):
        call()
