"""Run lengths of CUSUM: laws they obey, and simulated charts."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from server.science.errors import OutOfRange
from server.science.statistics.cusum import cusum, first_crossings
from server.science.statistics.run_length import (
    cusum_chain,
    cusum_run_length,
    cusum_run_length_deviation,
    cusum_run_length_quantile,
    cusum_settled_run_length,
    cusum_signal_probability,
    siegmund_run_length,
)


def simulated(k, h, shift, sides, rounds=400, charts=20_000, start=0.0):
    """Run lengths of charts on random readings; those still running are cut off."""
    readings = np.random.default_rng(seed=17).normal(shift, 1.0, (rounds, charts))
    up = down = np.full(charts, start)
    first = np.full(charts, rounds)
    for number, row in enumerate(readings, start=1):
        up = np.maximum(0.0, up + row - k)
        down = np.maximum(0.0, down - row - k)
        signals = (up > h) | ((down > h) & (sides == 2))
        first = np.where(signals & (first == rounds), number, first)
    return first


@pytest.mark.parametrize(("sides", "start"), [(1, 0.0), (2, 0.0), (1, 2.0), (2, 2.0)])
def test_simulated_charts_run_as_long(sides, start):
    first = simulated(0.5, 4.0, 1.0, sides, rounds=200, start=start)

    found = cusum_run_length(0.5, 4.0, 1.0, head_start=start, sides=sides)

    assert found == pytest.approx(first.mean(), abs=4.0 * first.std() / len(first) ** 0.5)


def test_the_chart_itself_signals_as_foretold():
    readings = np.random.default_rng(seed=23).normal(0.0, 1.0, (60, 40_000))

    crossed = first_crossings(cusum(readings, k=0.5).sums, h=3.0) >= 0

    foretold = float(cusum_signal_probability(0.5, 3.0, 60))
    assert crossed.mean() == pytest.approx(foretold, abs=0.01)


@settings(max_examples=25, deadline=None)
@given(st.floats(0.0, 1.5), st.floats(0.5, 6.0), st.floats(-1.0, 2.0))
def test_it_grows_with_the_limit_and_falls_with_the_shift(k, h, shift):
    base = cusum_run_length(k, h, shift)

    assert cusum_run_length(k, h + 0.25, shift) > base
    assert cusum_run_length(k, h, shift + 0.25) < base
    assert cusum_run_length(k + 0.1, h, shift) > base


@settings(max_examples=25, deadline=None)
@given(st.floats(0.0, 1.5), st.floats(0.5, 6.0), st.floats(-2.0, 2.0))
def test_two_sides_do_not_care_which_is_up(k, h, shift):
    up, down = cusum_run_length(k, h, [shift, -shift], sides=2)

    assert up == pytest.approx(down, rel=1e-9)
    assert 1.0 / up == pytest.approx(
        (1.0 / cusum_run_length(k, h, [shift, -shift])).sum(), rel=1e-9
    )


def test_a_head_start_shortens_every_run_most_where_there_is_a_fault():
    plain = cusum_run_length(0.5, 5.0, [0.0, 1.0])
    ahead = cusum_run_length(0.5, 5.0, [0.0, 1.0], head_start=2.5)

    shares = ahead / plain
    assert shares[0] > 0.9
    assert shares[1] < 0.65


def test_a_settled_chart_is_quicker_than_a_fresh_one():
    assert (
        cusum_settled_run_length(0.5, 5.0, [0.0, 1.0]) < cusum_run_length(0.5, 5.0, [0.0, 1.0])
    ).all()


def test_the_median_is_shorter_than_the_average():
    median = cusum_run_length_quantile(0.5, 5.0)

    assert median / cusum_run_length(0.5, 5.0) == pytest.approx(np.log(2.0), abs=0.02)
    assert cusum_signal_probability(0.5, 5.0, [median - 1, median]).tolist() == pytest.approx(
        [0.5, 0.5], abs=1e-3
    )


def test_a_long_quantile_needs_no_long_wait():
    average = float(cusum_run_length(0.5, 10.0))

    assert cusum_run_length_quantile(0.5, 10.0) == pytest.approx(average * np.log(2.0), rel=1e-3)


def test_the_deviation_is_nearly_the_average_without_a_fault():
    found = cusum_run_length_deviation(0.5, 5.0)

    assert found == pytest.approx(cusum_run_length(0.5, 5.0), rel=0.02)
    assert cusum_run_length_deviation(0.5, 5.0, 2.0) < 1.5


def test_a_run_from_any_sum_is_that_with_a_head_start():
    assert cusum_chain(0.5, 4.0, 0.3).average(1.7) == pytest.approx(
        float(cusum_run_length(0.5, 4.0, 0.3, head_start=1.7))
    )


def test_siegmund_is_smooth_where_his_formula_is_nothing_over_nothing():
    near = siegmund_run_length(0.5, 5.0, [0.5 - 1e-4, 0.5, 0.5 + 1e-4])

    assert near[1] == pytest.approx((near[0] + near[2]) / 2.0, rel=1e-6)


def test_a_missing_shift_gives_no_run_length():
    found = cusum_run_length(0.5, 4.0, [np.nan, 0.0])

    assert np.isnan(found).tolist() == [True, False]


@pytest.mark.parametrize(
    ("arguments", "quantity"),
    [
        ({"h": 0.0}, "h"),
        ({"k": np.inf}, "k"),
        ({"sides": 3}, "sides"),
        ({"k": -0.1, "sides": 2}, "k"),
        ({"head_start": 5.1}, "head_start"),
        ({"head_start": -0.1}, "head_start"),
        # Beyond h/2 + k both sides could be on their way at once, and the rule does not hold.
        ({"head_start": 3.1, "sides": 2}, "head_start"),
        ({"shift": np.inf}, "shift"),
    ],
)
def test_what_cannot_be_is_refused(arguments, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        cusum_run_length(**{"k": 0.5, "h": 5.0, **arguments})


def test_shares_and_readings_that_cannot_be_are_refused():
    with pytest.raises(OutOfRange, match="share"):
        cusum_run_length_quantile(0.5, 5.0, share=1.0)
    with pytest.raises(OutOfRange, match="readings"):
        cusum_signal_probability(0.5, 5.0, [1.5])
