"""The law of propagation: independent, correlated, expanded."""

import math

import numpy as np
import pytest

from server.science.constants import COPPER
from server.science.errors import OutOfRange, WrongShape
from server.science.faraday import current_efficiency
from server.science.uncertainty.monte_carlo import monte_carlo, normal
from server.science.uncertainty.propagation import (
    combined,
    coverage_factor,
    effective_degrees_of_freedom,
    expanded,
    relative_product,
    standard_from_limit,
)


def test_independent_errors_average_out_and_shared_ones_do_not():
    lots = 16
    shares, errors = np.full(lots, 1 / lots), np.full(lots, 10.0)

    assert combined(shares, errors) == pytest.approx(10.0 / 4)
    assert combined(shares, errors, np.ones((lots, lots))) == pytest.approx(10.0)


def test_errors_that_oppose_each_other_cancel():
    assert combined([1.0, -1.0], [3.0, 3.0], np.ones((2, 2))) == pytest.approx(0.0, abs=1e-12)


def test_partly_correlated_inputs_lie_between():
    variance = 3.0**2 + 4.0**2 + 2 * 0.5 * 3.0 * 4.0

    found = combined([1.0, 1.0], [3.0, 4.0], [[1.0, 0.5], [0.5, 1.0]])

    assert found == pytest.approx(math.sqrt(variance))


def test_many_results_are_worked_out_at_once():
    slopes = np.random.default_rng(seed=1).normal(size=(3, 5))
    errors = np.array([[1.0], [2.0], [3.0]])
    matrix = [[1.0, 0.3, 0.0], [0.3, 1.0, 0.1], [0.0, 0.1, 1.0]]

    together = combined(slopes, errors, matrix)

    apart = [combined(slopes[:, i], errors[:, 0], matrix) for i in range(5)]
    np.testing.assert_allclose(together, apart)


def test_a_missing_input_gives_no_uncertainty():
    found = combined([[1.0, 1.0], [1.0, 1.0]], [[3.0, np.nan], [4.0, 4.0]])

    np.testing.assert_allclose(found, [5.0, np.nan])


@pytest.mark.parametrize(
    "matrix",
    [
        [[2.0, 0.0], [0.0, 1.0]],
        [[1.0, 0.5], [0.4, 1.0]],
        [[1.0, 1.2], [1.2, 1.0]],
    ],
)
def test_what_is_no_correlation_matrix_is_refused(matrix):
    with pytest.raises(OutOfRange, match="correlation"):
        combined([1.0, 1.0], [3.0, 4.0], matrix)


@pytest.mark.parametrize(
    ("slopes", "errors", "matrix", "quantity"),
    [
        ([1.0, 1.0, 1.0], [3.0, 4.0], None, "standard_uncertainties"),
        (1.0, 3.0, None, "sensitivities"),
        ([1.0, 1.0], [3.0, 4.0], np.eye(3), "correlation"),
    ],
)
def test_inputs_that_do_not_belong_together_are_refused(slopes, errors, matrix, quantity):
    with pytest.raises(WrongShape, match=quantity):
        combined(slopes, errors, matrix)


def test_a_negative_uncertainty_is_refused():
    with pytest.raises(OutOfRange, match="standard_uncertainties"):
        combined([1.0], [-3.0])


def test_the_efficiency_of_a_crop_agrees_with_trials():
    stripped_kg, amps, hours = 4850.0, 30_000.0, 144.0
    relative = relative_product(5.0 / stripped_kg, 150.0 / amps, 0.25 / hours)
    efficiency = float(current_efficiency(stripped_kg, amps * hours * 3600, COPPER))

    trials = monte_carlo(
        lambda kg, a, h: current_efficiency(kg, a * h * 3600, COPPER),
        [normal(stripped_kg, 5.0), normal(amps, 150.0), normal(hours, 0.25)],
        np.random.default_rng(seed=17),
    )

    assert trials.estimate == pytest.approx(efficiency, rel=1e-4)
    assert trials.standard_uncertainty == pytest.approx(efficiency * relative, rel=0.01)


def test_a_product_of_one_factor_has_its_uncertainty():
    assert relative_product(0.02) == pytest.approx(0.02)
    assert relative_product() == 0.0
    assert relative_product([0.03, 0.0], 0.04).tolist() == pytest.approx([0.05, 0.04])


def test_data_sheets_leave_infinite_degrees_of_freedom():
    assert effective_degrees_of_freedom([1.0, 2.0], [math.inf, math.inf]) == math.inf
    assert effective_degrees_of_freedom([2.0], [7]) == pytest.approx(7)


def test_the_coverage_factor_narrows_to_the_normal_one():
    assert coverage_factor(0.95, 3) > coverage_factor(0.95, 30) > coverage_factor(0.95)
    assert coverage_factor(0.95, 1e9) == pytest.approx(coverage_factor(0.95), rel=1e-6)


@pytest.mark.parametrize(
    ("function", "arguments", "quantity"),
    [
        (standard_from_limit, (-1.0,), "limit"),
        (relative_product, (0.1, -0.1), "relative_uncertainties"),
        (expanded, (-1.0,), "standard_uncertainty"),
        (expanded, (1.0, 0.0), "coverage_factor"),
        (coverage_factor, (0.0,), "level"),
        (coverage_factor, (1.0,), "level"),
        (coverage_factor, (0.95, 0.0), "degrees_of_freedom"),
        (effective_degrees_of_freedom, ([1.0], [0.0]), "degrees_of_freedom"),
    ],
)
def test_what_cannot_be_is_refused(function, arguments, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        function(*arguments)


def test_degrees_of_freedom_belong_to_their_inputs():
    with pytest.raises(WrongShape, match="degrees_of_freedom"):
        effective_degrees_of_freedom([1.0, 2.0], [5.0])
