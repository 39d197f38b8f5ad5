"""Trials stop when the wanted digits stand, and say so; the law of propagation is held to them."""

import math

import numpy as np
import pytest

from server.science.errors import OutOfRange
from server.science.uncertainty.adaptive import (
    adaptive_monte_carlo,
    numerical_tolerance,
    validated,
)
from server.science.uncertainty.monte_carlo import (
    MonteCarlo,
    coverage_interval,
    monte_carlo,
    normal,
    rectangular,
)


@pytest.mark.parametrize(
    ("uncertainty", "digits", "tolerance"),
    [
        # By hand: half of one in the place of the last digit.
        (0.0754, 2, 0.0005),
        (0.0754, 1, 0.005),
        (32.0, 2, 0.5),
        (2.0, 2, 0.05),
        (0.996, 2, 0.05),
        (0.994, 2, 0.005),
        (0.0, 2, 0.0),
    ],
)
def test_the_tolerance_is_half_of_the_last_digit(uncertainty, digits, tolerance):
    assert numerical_tolerance(uncertainty, digits) == pytest.approx(tolerance, rel=1e-12)


def test_an_unknown_uncertainty_has_an_unknown_tolerance():
    assert math.isnan(numerical_tolerance(math.nan))


def test_more_digits_ask_for_more_trials():
    inputs = [normal(0.0, 1.0)]

    rough = adaptive_monte_carlo(np.array, inputs, np.random.default_rng(seed=1), digits=1)
    fine = adaptive_monte_carlo(np.array, inputs, np.random.default_rng(seed=1), digits=2)

    assert rough.settled
    assert fine.settled
    assert rough.trials < fine.trials
    assert fine.standard_uncertainty == pytest.approx(1.0, abs=2 * fine.tolerance)
    assert fine.high == pytest.approx(1.96, abs=2 * fine.tolerance)


def test_trials_in_batches_come_to_what_they_come_to_at_once():
    inputs = [normal(2.0, 0.3), rectangular(1.0, 2.0)]

    adaptive = adaptive_monte_carlo(np.multiply, inputs, np.random.default_rng(seed=2), digits=1)
    whole = monte_carlo(np.multiply, inputs, np.random.default_rng(seed=3), adaptive.trials)

    assert adaptive.trials >= 20_000
    assert adaptive.estimate == pytest.approx(whole.estimate, abs=0.02)
    assert adaptive.standard_uncertainty == pytest.approx(whole.standard_uncertainty, rel=0.02)


def test_the_spread_over_batches_is_the_spread_over_all():
    seen = []

    def kept(values):
        seen.append(values)
        return values

    result = adaptive_monte_carlo(kept, [normal(5.0, 2.0)], np.random.default_rng(seed=4), digits=1)

    assert result.standard_uncertainty == pytest.approx(np.concatenate(seen).std(ddof=1), rel=1e-12)
    assert result.estimate == pytest.approx(np.concatenate(seen).mean(), rel=1e-12)


def test_trials_that_end_too_early_are_not_called_settled():
    result = adaptive_monte_carlo(
        np.array, [normal(0.0, 1.0)], np.random.default_rng(seed=5), digits=4, most_trials=50_000
    )

    assert not result.settled
    assert result.trials == 50_000


def test_a_result_that_is_missing_ends_the_trials():
    with np.errstate(invalid="ignore"):
        result = adaptive_monte_carlo(np.sqrt, [normal(0.0, 1.0)], np.random.default_rng(seed=6))

    assert math.isnan(result.estimate)
    assert math.isnan(result.low)
    assert not result.settled


def test_a_result_without_doubt_settles_at_once():
    result = adaptive_monte_carlo(np.array, [normal(3.0, 0.0)], np.random.default_rng(seed=7))

    assert (result.estimate, result.low, result.high) == (3.0, 3.0, 3.0)
    assert result.settled


def test_the_shortest_interval_of_a_lopsided_result_begins_at_its_limit():
    inputs = [normal(0.0, 1.0)]

    even = adaptive_monte_carlo(np.square, inputs, np.random.default_rng(seed=8))
    short = adaptive_monte_carlo(np.square, inputs, np.random.default_rng(seed=8), shortest=True)

    # Chi squared with one degree of freedom: 0.00098 to 5.02 evenly, 0 to 3.84 shortest.
    assert even.low == pytest.approx(0.00098, abs=0.0005)
    assert even.high == pytest.approx(5.02, abs=0.1)
    assert short.low == pytest.approx(0.0, abs=1e-4)
    assert short.high == pytest.approx(3.84, abs=0.1)


def test_the_shortest_interval_is_nowhere_longer():
    values = np.random.default_rng(seed=9).gamma(2.0, 1.0, 10_000)

    low, high = coverage_interval(values, 0.9, shortest=True)
    even_low, even_high = coverage_interval(values, 0.9)

    assert high - low < even_high - even_low
    assert ((values >= low) & (values <= high)).sum() == 9000


def test_no_values_have_no_interval():
    assert all(math.isnan(end) for end in coverage_interval([]))


def test_the_law_holds_for_a_straight_sum_and_not_for_a_square():
    line = adaptive_monte_carlo(
        np.add,
        [normal(0.0, 0.3), normal(0.0, 0.4)],
        np.random.default_rng(seed=10),
        digits=1,
        tolerance_share=0.2,
    )
    bend = adaptive_monte_carlo(
        np.square, [normal(0.0, 1.0)], np.random.default_rng(seed=11), digits=1, tolerance_share=0.2
    )

    assert validated(0.0, 1.96 * 0.5, line, digits=1).holds
    assert not validated(0.0, 0.0, bend, digits=1).holds


def test_distances_are_those_of_the_ends():
    trials = MonteCarlo(1.0, 0.5, low=0.1, high=2.2, level=0.95, trials=1000)

    verdict = validated(1.0, 1.0, trials, digits=1)

    assert verdict.d_low == pytest.approx(0.1)
    assert verdict.d_high == pytest.approx(0.2)
    assert verdict.tolerance == pytest.approx(0.05)
    assert not verdict.holds


def test_what_is_missing_is_not_validated():
    trials = MonteCarlo(math.nan, math.nan, math.nan, math.nan, level=0.95, trials=1000)

    assert not validated(1.0, 1.0, trials).holds


@pytest.mark.parametrize(
    ("arguments", "quantity"),
    [({"level": 1.0}, "level"), ({"digits": 0}, "digits"), ({"tolerance_share": 0.0}, "share")],
)
def test_impossible_demands_are_refused(arguments, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        adaptive_monte_carlo(np.array, [normal(0, 1)], np.random.default_rng(1), **arguments)


def test_a_negative_uncertainty_has_no_tolerance():
    with pytest.raises(OutOfRange, match="standard_uncertainty"):
        numerical_tolerance(-0.1)
