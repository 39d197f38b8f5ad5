"""Time-weighted means: what a record says of an interval, and how much of it it has seen."""

import numpy as np
import pytest

from server.science.errors import OutOfRange, WrongShape
from server.science.statistics.averages import hold_means, linear_means

HOUR = 3_600_000
DAY = 24 * HOUR
# A Tuesday in March 2024: moments are large numbers, and must not lose their milliseconds.
START = 1_709_596_800_000


@pytest.fixture
def uneven_record():
    """A day of current read 500 times at uneven moments, with one trip to zero."""
    rng = np.random.default_rng(seed=20240305)
    at_ms = START + np.sort(rng.choice(np.arange(1, DAY), 499, replace=False))
    amps = rng.normal(20_000, 150, 500)
    amps[200:240] = 0.0
    return np.concatenate(([START], at_ms)), amps


def test_a_reading_holds_until_the_next():
    means = hold_means([0, HOUR], [10.0, 30.0], [0, 2 * HOUR, 4 * HOUR], max_hold_ms=2 * HOUR)

    assert means.mean.tolist() == [20.0, 30.0]
    assert means.coverage.tolist() == [1.0, 0.5]
    assert means.covered_ms.tolist() == [2 * HOUR, HOUR]


def test_a_reading_is_not_believed_for_ever():
    means = hold_means([0, 4 * HOUR], [10.0, 30.0], [0, 4 * HOUR], max_hold_ms=HOUR)

    assert means.mean.tolist() == [10.0]
    assert means.coverage.tolist() == [0.25]


def test_a_missing_reading_ends_the_hold_before_it():
    means = hold_means([0, HOUR], [10.0, np.nan], [0, HOUR, 2 * HOUR], max_hold_ms=DAY)

    assert means.coverage.tolist() == [1.0, 0.0]
    assert np.isnan(means.mean).tolist() == [False, True]


def test_a_line_runs_between_two_readings_and_no_further():
    edges = [-HOUR, 0, HOUR, 2 * HOUR, 3 * HOUR]

    means = linear_means([0, 2 * HOUR], [60.0, 64.0], edges, max_gap_ms=2 * HOUR)

    np.testing.assert_allclose(means.mean, [np.nan, 61.0, 63.0, np.nan])
    assert means.coverage.tolist() == [0.0, 1.0, 1.0, 0.0]


def test_a_line_bridges_no_long_gap_and_no_missing_reading():
    at_ms = [0, HOUR, 4 * HOUR, 5 * HOUR, 6 * HOUR]
    values = [1.0, 1.0, 1.0, np.nan, 1.0]

    means = linear_means(at_ms, values, np.arange(7) * HOUR, max_gap_ms=HOUR)

    assert means.coverage.tolist() == [1.0, 0.0, 0.0, 0.0, 0.0, 0.0]


@pytest.mark.parametrize("cut_ms", [1, HOUR, 51_234_567, DAY - 1])
@pytest.mark.parametrize(
    ("average", "limit"), [(hold_means, "max_hold_ms"), (linear_means, "max_gap_ms")]
)
def test_the_parts_of_a_day_weigh_up_to_the_day(uneven_record, average, limit, cut_ms):
    at_ms, amps = uneven_record

    whole = average(at_ms, amps, [START, START + DAY], **{limit: 10 * 60_000})
    parts = average(at_ms, amps, [START, START + cut_ms, START + DAY], **{limit: 10 * 60_000})

    assert parts.covered_ms.sum() == whole.covered_ms[0]
    seen = parts.covered_ms > 0
    weighed = (parts.mean[seen] * parts.covered_ms[seen]).sum() / parts.covered_ms.sum()
    assert weighed == pytest.approx(whole.mean[0], rel=1e-12)


def test_a_hold_mean_agrees_with_counting_every_second():
    rng = np.random.default_rng(seed=8)
    at_s = np.sort(rng.choice(7200, 40, replace=False))
    values = rng.normal(100.0, 10.0, 40)

    means = hold_means(at_s * 1000, values, [0, HOUR, 2 * HOUR], max_hold_ms=90_000)

    seconds = np.full(7200, np.nan)
    for start, stop, value in zip(at_s, np.append(at_s[1:], 7200), values, strict=True):
        seconds[start : min(stop, start + 90)] = value
    hours = seconds.reshape(2, 3600)
    np.testing.assert_allclose(means.mean, np.nanmean(hours, axis=1), rtol=1e-12)
    np.testing.assert_allclose(means.coverage, np.isfinite(hours).mean(axis=1), rtol=1e-12)


def test_a_straight_line_has_the_mean_of_its_middle():
    at_ms = START + np.array([0, 7, 1000, 86_399_000, DAY])
    values = 3.0 + 2.0 * (at_ms - START) / DAY

    means = linear_means(at_ms, values, START + np.arange(25) * HOUR, max_gap_ms=DAY)

    np.testing.assert_allclose(means.mean, 3.0 + 2.0 * (np.arange(24) + 0.5) / 24, rtol=1e-12)


@pytest.mark.parametrize(
    ("average", "limit"), [(hold_means, "max_hold_ms"), (linear_means, "max_gap_ms")]
)
def test_no_readings_cover_nothing(average, limit):
    means = average([], [], [0, HOUR], **{limit: HOUR})

    assert np.isnan(means.mean).all()
    assert means.coverage.tolist() == [0.0]
    assert means.covered_ms.tolist() == [0]


@pytest.mark.parametrize(
    ("average", "limit"), [(hold_means, "max_hold_ms"), (linear_means, "max_gap_ms")]
)
@pytest.mark.parametrize(
    ("at_ms", "values", "edges_ms", "allowed_ms", "error", "quantity"),
    [
        ([0, 0], [1.0, 2.0], [0, 1], 1, OutOfRange, "at_ms"),
        ([1, 0], [1.0, 2.0], [0, 1], 1, OutOfRange, "at_ms"),
        ([0, 1], [1.0, np.inf], [0, 1], 1, OutOfRange, "values"),
        ([0, 1], [1.0, 2.0], [1, 0], 1, OutOfRange, "edges_ms"),
        ([0, 1], [1.0, 2.0], [0, 1], 0, OutOfRange, "max_"),
        ([0, 1], [1.0], [0, 1], 1, WrongShape, "values"),
        ([[0, 1]], [[1.0, 2.0]], [0, 1], 1, WrongShape, "at_ms"),
        ([0, 1], [1.0, 2.0], [0], 1, WrongShape, "edges_ms"),
    ],
)
def test_a_record_that_cannot_be_is_refused(
    average, limit, at_ms, values, edges_ms, allowed_ms, error, quantity
):
    with pytest.raises(error, match=quantity):
        average(at_ms, values, edges_ms, **{limit: allowed_ms})
