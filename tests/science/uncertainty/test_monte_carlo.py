"""Trials of a result: repeatable, and right where the answer is known."""

import math

import numpy as np
import pytest

from server.science.errors import OutOfRange, WrongShape
from server.science.uncertainty.monte_carlo import monte_carlo, normal, rectangular


def product(a, b):
    return a * b


def test_one_seed_gives_one_answer():
    inputs = [normal(2.0, 0.1), rectangular(1.0, 3.0)]

    first = monte_carlo(product, inputs, np.random.default_rng(seed=9), trials=5000)
    again = monte_carlo(product, inputs, np.random.default_rng(seed=9), trials=5000)

    assert first == again


def test_a_sum_of_normals_is_normal():
    result = monte_carlo(
        lambda a, b: a + b, [normal(1.0, 3.0), normal(2.0, 4.0)], np.random.default_rng(seed=1)
    )

    assert result.estimate == pytest.approx(3.0, abs=0.05)
    assert result.standard_uncertainty == pytest.approx(5.0, rel=0.01)
    assert result.high - result.low == pytest.approx(2 * 1.96 * 5.0, rel=0.02)


def test_a_rectangle_has_the_deviation_of_its_limit():
    result = monte_carlo(lambda a: a, [rectangular(-1.0, 1.0)], np.random.default_rng(seed=2))

    assert result.standard_uncertainty == pytest.approx(1 / math.sqrt(3), rel=0.01)
    assert result.high == pytest.approx(0.95, abs=0.01)


def test_the_interval_keeps_to_its_side_of_a_limit():
    result = monte_carlo(np.square, [normal(0.0, 1.0)], np.random.default_rng(seed=3))

    assert result.low > 0.0


def test_a_result_that_is_missing_shows():
    with np.errstate(invalid="ignore"):
        result = monte_carlo(np.sqrt, [normal(0.0, 1.0)], np.random.default_rng(seed=4))

    assert math.isnan(result.estimate)


@pytest.mark.parametrize(
    ("arguments", "quantity"), [({"trials": 10}, "trials"), ({"level": 1.0}, "level")]
)
def test_too_few_trials_and_impossible_levels_are_refused(arguments, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        monte_carlo(np.square, [normal(0.0, 1.0)], np.random.default_rng(seed=5), **arguments)


def test_a_model_must_give_one_result_per_trial():
    with pytest.raises(WrongShape, match="model"):
        monte_carlo(np.mean, [normal(0.0, 1.0)], np.random.default_rng(seed=6))


def test_inputs_that_cannot_be_drawn_are_refused():
    with pytest.raises(OutOfRange, match="standard_uncertainty"):
        normal(0.0, -1.0)
    with pytest.raises(OutOfRange, match="high"):
        rectangular(1.0, 0.0)
