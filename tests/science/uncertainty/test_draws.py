"""Draws have the mean and the spread that their distribution has, and keep to its limits."""

import math

import numpy as np
import pytest
from scipy import stats

from server.science.errors import OutOfRange, WrongShape
from server.science.uncertainty.draws import (
    arc_sine,
    correlated_normal,
    counted,
    exponential,
    rectangular_in_doubt,
    student,
    trapezoidal,
    triangular,
    truncated_normal,
)
from server.science.uncertainty.monte_carlo import monte_carlo

TRIALS = 400_000


@pytest.mark.parametrize(
    ("draw", "mean", "deviation"),
    [
        # Half-widths a, standard deviations of JCGM 101: a sqrt((1 + b^2) / 6), a / sqrt 6,
        # sqrt(a^2 / 3 + d^2 / 9), a / sqrt 2, u sqrt(n / (n - 2)), the mean, sqrt(q + 1).
        (trapezoidal(1.0, 3.0, 0.5), 2.0, math.sqrt(1.25 / 6)),
        (triangular(-2.0, 4.0), 1.0, 3 / math.sqrt(6)),
        (rectangular_in_doubt(-1.0, 1.0, 0.5), 0.0, math.sqrt(1 / 3 + 0.25 / 9)),
        (arc_sine(59.0, 61.0), 60.0, 1 / math.sqrt(2)),
        (student(5.0, 0.2, 10), 5.0, 0.2 * math.sqrt(10 / 8)),
        (exponential(0.3), 0.3, 0.3),
        (counted(8), 9.0, 3.0),
    ],
)
def test_mean_and_deviation_are_those_of_the_distribution(draw, mean, deviation):
    values = draw(np.random.default_rng(seed=64), TRIALS)

    assert values.shape == (TRIALS,)
    assert values.mean() == pytest.approx(mean, abs=5 * deviation / math.sqrt(TRIALS))
    assert values.std() == pytest.approx(deviation, rel=0.01)


@pytest.mark.parametrize(
    ("draw", "low", "high"),
    [
        (trapezoidal(1.0, 3.0, 0.5), 1.0, 3.0),
        (triangular(1.0, 3.0), 1.0, 3.0),
        (rectangular_in_doubt(1.0, 3.0, 0.1), 0.9, 3.1),
        (arc_sine(1.0, 3.0), 1.0, 3.0),
        (truncated_normal(2.9, 0.5, 1.0, 3.0), 1.0, 3.0),
    ],
)
def test_no_value_passes_a_limit(draw, low, high):
    values = draw(np.random.default_rng(seed=65), TRIALS)

    assert low <= values.min() < low + 0.05 * (high - low)
    assert high - 0.05 * (high - low) < values.max() <= high


def test_a_cut_normal_keeps_its_shape_within_the_limits():
    values = truncated_normal(0.98, 0.02, 0.0, 1.0)(np.random.default_rng(seed=66), TRIALS)

    # Half-way up to the limit: (P(Z < 0.5) - P(Z < -49)) / (P(Z < 1) - P(Z < -49)).
    share = stats.norm.cdf(0.5) / stats.norm.cdf(1.0)
    assert (values < 0.99).mean() == pytest.approx(share, abs=0.003)


def test_inputs_drawn_together_have_their_correlation():
    matrix = np.array([[1.0, 0.6, 0.0], [0.6, 1.0, -0.5], [0.0, -0.5, 1.0]])

    rows = correlated_normal([1.0, 2.0, 3.0], [0.1, 0.2, 0.3], matrix)(
        np.random.default_rng(seed=67), TRIALS
    )

    assert rows.mean(axis=1) == pytest.approx([1.0, 2.0, 3.0], abs=0.003)
    assert rows.std(axis=1) == pytest.approx([0.1, 0.2, 0.3], rel=0.01)
    np.testing.assert_allclose(np.corrcoef(rows), matrix, atol=0.01)


def test_inputs_drawn_together_stand_for_as_many_inputs_of_the_model():
    tied = correlated_normal([7.0, 4.0], [0.5, 0.5], [[1.0, 1.0], [1.0, 1.0]])

    result = monte_carlo(
        lambda a, b, c: a - b + c, [tied, triangular(0, 0)], np.random.default_rng(8)
    )

    assert result.estimate == pytest.approx(3.0)
    assert result.standard_uncertainty == pytest.approx(0.0, abs=1e-9)


def test_a_missing_uncertainty_stays_with_its_own_input():
    rows = correlated_normal([1.0, 2.0], [np.nan, 0.1], [[1.0, 0.5], [0.5, 1.0]])(
        np.random.default_rng(seed=68), 10
    )

    assert np.isnan(rows[0]).all()
    assert np.isfinite(rows[1]).all()


@pytest.mark.parametrize(
    ("make", "quantity"),
    [
        (lambda: trapezoidal(1.0, 0.0, 0.5), "high"),
        (lambda: trapezoidal(0.0, 1.0, 1.5), "top_share"),
        (lambda: rectangular_in_doubt(0.0, 1.0, 0.6), "doubt"),
        (lambda: arc_sine(1.0, 0.0), "high"),
        (lambda: student(0.0, -1.0, 3), "standard_uncertainty"),
        (lambda: student(0.0, 1.0, 0), "degrees_of_freedom"),
        (lambda: exponential(0.0), "mean"),
        (lambda: counted(-1), "count"),
        (lambda: truncated_normal(0.0, 1.0, 2.0, 2.0), "high"),
        (lambda: truncated_normal(0.0, 0.0, 0.0, 2.0), "standard_uncertainty"),
        (lambda: correlated_normal([0, 0], [1, 1], [[1, 2], [2, 1]]), "correlation"),
    ],
)
def test_what_is_no_distribution_is_refused(make, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        make()


def test_inputs_drawn_together_must_belong_together():
    with pytest.raises(WrongShape, match="standard_uncertainties"):
        correlated_normal([0.0, 1.0], [1.0], np.eye(2))
