"""Reconciled flows close their balances, keep what is known exactly, and say what is not known."""

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from server.science.errors import OutOfRange, WrongShape
from server.science.uncertainty.reconcile import reconciled, sidak_score, without_gross_errors

# A house: feed splits into two sections, each gives spent solution and cathodes, the spent joins.
HOUSE = np.array(
    [
        [1.0, -1.0, -1.0, 0.0, 0.0, 0.0, 0.0, 0.0],
        [0.0, 1.0, 0.0, -1.0, 0.0, -1.0, 0.0, 0.0],
        [0.0, 0.0, 1.0, 0.0, -1.0, 0.0, -1.0, 0.0],
        [0.0, 0.0, 0.0, 1.0, 1.0, 0.0, 0.0, -1.0],
    ]
)
TRUE = np.array([100.0, 60.0, 40.0, 55.0, 36.0, 5.0, 4.0, 91.0])
ERRORS = np.array([2.0, 1.0, 1.0, 1.0, 0.8, 0.1, 0.1, 2.0])


@st.composite
def measured_house(draw):
    """Readings of the house, their uncertainties, and which of them are missing."""
    scatter = draw(st.lists(st.floats(-3, 3), min_size=8, max_size=8))
    errors = draw(st.lists(st.floats(0.05, 5), min_size=8, max_size=8))
    missing = draw(st.sets(st.integers(0, 7), max_size=3))
    values = TRUE + np.array(scatter) * np.array(errors)
    values[list(missing)] = np.nan
    return values, np.array(errors)


@given(measured_house())
def test_flows_that_are_known_close_the_balances_to_rounding(house):
    values, errors = house

    result = reconciled(HOUSE, values, errors)

    left = HOUSE @ np.nan_to_num(result.values)
    closed = ((HOUSE == 0.0) | result.observable).all(axis=1)
    np.testing.assert_allclose(left[closed], 0.0, atol=1e-9)
    assert np.isnan(result.values).tolist() == (~result.observable).tolist()


@given(measured_house(), st.lists(st.floats(1e-3, 1e3), min_size=4, max_size=4))
def test_the_scale_of_a_balance_moves_nothing(house, scales):
    values, errors = house

    plain = reconciled(HOUSE, values, errors)
    scaled = reconciled(-HOUSE * np.array(scales)[:, None], values, errors)

    np.testing.assert_allclose(scaled.values, plain.values, rtol=1e-8, atol=1e-8)
    np.testing.assert_allclose(scaled.covariance, plain.covariance, rtol=1e-7, atol=1e-8)
    np.testing.assert_allclose(scaled.scores, plain.scores, rtol=1e-6, atol=1e-7)
    assert scaled.statistic == pytest.approx(plain.statistic, rel=1e-7, abs=1e-9)
    assert scaled.degrees_of_freedom == plain.degrees_of_freedom


@given(measured_house(), st.permutations(range(8)))
def test_the_order_of_the_flows_moves_nothing(house, order):
    values, errors = house
    order = list(order)

    plain = reconciled(HOUSE, values, errors)
    turned = reconciled(HOUSE[:, order], values[order], errors[order])

    np.testing.assert_allclose(turned.values, plain.values[order], rtol=1e-9, atol=1e-9)
    assert turned.redundant.tolist() == plain.redundant[order].tolist()
    assert turned.observable.tolist() == plain.observable[order].tolist()


@given(measured_house())
@settings(max_examples=50)
def test_a_balance_said_twice_moves_nothing(house):
    values, errors = house
    # All of them added up: the balance of the whole house.
    whole = np.vstack([HOUSE, HOUSE.sum(axis=0)])

    plain = reconciled(HOUSE, values, errors)
    twice = reconciled(whole, values, errors)

    np.testing.assert_allclose(twice.values, plain.values, rtol=1e-9, atol=1e-9)
    assert twice.degrees_of_freedom == plain.degrees_of_freedom
    assert twice.statistic == pytest.approx(plain.statistic, rel=1e-7, abs=1e-9)


@given(measured_house())
@settings(max_examples=50)
def test_nothing_becomes_less_certain(house):
    values, errors = house

    result = reconciled(HOUSE, values, errors)

    measured = np.isfinite(values)
    assert (result.standard_uncertainties[measured] <= errors[measured] * (1 + 1e-9)).all()


def test_flows_that_fit_already_stay_as_they_are():
    result = reconciled(HOUSE, TRUE, ERRORS)

    np.testing.assert_allclose(result.adjustments, 0.0, atol=1e-12)
    assert result.statistic == pytest.approx(0.0, abs=1e-20)
    assert result.p_value == pytest.approx(1.0)


def test_least_squares_by_another_way():
    # Free flows and the balances put in: x = N f, least squares of (y - N f) / u.
    values = TRUE + ERRORS * np.array([1.0, -0.5, 0.7, 0.2, -1.1, 0.4, -0.9, 1.3])
    basis = np.linalg.svd(HOUSE)[2][4:].T
    free = np.linalg.lstsq(basis / ERRORS[:, None], values / ERRORS, rcond=None)[0]

    result = reconciled(HOUSE, values, ERRORS)

    np.testing.assert_allclose(result.values, basis @ free, rtol=1e-10)
    weighted = basis.T @ np.diag(1 / ERRORS**2) @ basis
    np.testing.assert_allclose(
        result.covariance, basis @ np.linalg.inv(weighted) @ basis.T, rtol=1e-8, atol=1e-10
    )
    assert result.statistic == pytest.approx((((values - basis @ free) / ERRORS) ** 2).sum())


def test_correlated_measurements_by_the_formula():
    values = np.array([100.0, 61.0, 42.0])
    errors = np.array([2.0, 1.0, 1.0])
    related = np.array([[1.0, 0.0, 0.0], [0.0, 1.0, 0.8], [0.0, 0.8, 1.0]])
    balance = np.array([[1.0, -1.0, -1.0]])

    result = reconciled(balance, values, errors, related)

    # By hand: the miss is -3; variance 4 + 1 + 1 + 1.6 = 7.6; pulls V a = 4, -1.8, -1.8.
    assert result.adjustments == pytest.approx([12 / 7.6, -5.4 / 7.6, -5.4 / 7.6])
    assert result.statistic == pytest.approx(9 / 7.6)


def test_a_flow_known_exactly_does_not_move():
    result = reconciled([[1, -1, -1]], [100, 60, 42], [0, 1, 1])

    assert result.values == pytest.approx([100, 59, 41])
    assert result.standard_uncertainties == pytest.approx([0, math.sqrt(0.5), math.sqrt(0.5)])
    assert result.redundant.all()


def test_a_change_of_stock_is_part_of_a_balance():
    result = reconciled([[1, -1]], [100, 90], [1, 1], totals=[6])

    assert result.values == pytest.approx([98, 92])


def test_a_flow_without_a_meter_is_worked_out():
    result = reconciled([[1, -1, -1]], [100, 60, np.nan], [3, 4, np.nan])

    assert result.values.tolist() == [100, 60, 40]
    assert result.standard_uncertainties == pytest.approx([3, 4, 5])
    assert result.observable.all()
    assert not result.redundant.any()
    assert result.degrees_of_freedom == 0
    assert math.isnan(result.p_value)
    assert np.isnan(result.scores).all()


def test_flows_that_only_add_up_are_not_known():
    # Two pipes side by side without meters.
    result = reconciled([[1, -1, -1, 0], [0, 1, 1, -1]], [100, np.nan, np.nan, 98], [1, 1, 1, 1])

    assert result.values == pytest.approx([99, np.nan, np.nan, 99], nan_ok=True)
    assert np.isnan(result.covariance[1]).all()
    assert result.observable.tolist() == [True, False, False, True]
    assert result.redundant.tolist() == [True, False, False, True]


def test_a_measurement_of_unknown_weight_counts_as_not_measured():
    without = reconciled(HOUSE, np.where(np.arange(8) == 3, np.nan, TRUE), ERRORS)
    weightless = reconciled(HOUSE, TRUE, np.where(np.arange(8) == 3, np.nan, ERRORS))

    assert weightless.values == pytest.approx(without.values)
    assert math.isnan(weightless.adjustments[3])


def test_nothing_measured_is_nothing_known():
    result = reconciled([[1, -1]], [np.nan, np.nan], [1, 1])

    assert np.isnan(result.values).all()
    assert result.degrees_of_freedom == 0


def test_a_wrong_meter_is_found_and_taken_out():
    wrong = TRUE + ERRORS * np.array([0.3, -0.4, 0.2, 0.5, -0.2, 0.1, -0.3, 0.2])
    wrong[3] += 15.0

    found = without_gross_errors(HOUSE, wrong, ERRORS)

    assert found.removed == (3,)
    assert len(found.steps) == 2
    assert found.steps[1].values[3] == pytest.approx(55.0, abs=2.0)
    assert found.steps[1].p_value > 0.05


def test_meters_that_no_balance_tells_apart_are_all_suspected_and_none_is_taken_out():
    found = without_gross_errors([[1, -1]], [100, 90], [1, 1])

    assert found.removed == ()
    assert found.steps[0].suspects == (0, 1)


def test_good_meters_stay():
    assert without_gross_errors(HOUSE, TRUE, ERRORS).removed == ()


def test_a_score_is_how_far_the_statistic_falls_without_the_measurement():
    values = TRUE + ERRORS * np.array([1.0, -0.5, 0.7, 2.2, -1.1, 0.4, -0.9, 1.3])
    whole = reconciled(HOUSE, values, ERRORS)

    for place in range(8):
        without = reconciled(HOUSE, np.where(np.arange(8) == place, np.nan, values), ERRORS)
        assert whole.statistic - without.statistic == pytest.approx(whole.scores[place] ** 2)


@pytest.mark.parametrize(
    ("arguments", "error", "quantity"),
    [
        (([1, -1], [1, 1], [1, 1]), WrongShape, "balances"),
        (([[1, np.nan]], [1, 1], [1, 1]), WrongShape, "balances"),
        (([[1, -1]], [1], [1]), WrongShape, "values"),
        (([[1, -1]], [1, 1], [1]), WrongShape, "standard_uncertainties"),
        (([[1, -1]], [1, 1], [1, -1]), OutOfRange, "standard_uncertainties"),
        (([[1, -1]], [1, np.inf], [1, 1]), OutOfRange, "values"),
        (([[1, -1]], [1, 1], [1, 1], np.eye(3)), WrongShape, "correlation"),
        (([[1, -1]], [1, 1], [1, 1], None, [0, 0]), WrongShape, "totals"),
        (([[1, -1]], [1, 1], [1, 1], None, None, 1.0), OutOfRange, "level"),
        (([[1, -1]], [100, 90], [0, 0]), OutOfRange, "balances"),
        (([[1, -1], [1, -1]], [5, 5], [1, 1], None, [0, 1]), OutOfRange, "balances"),
    ],
)
def test_what_does_not_belong_together_is_refused(arguments, error, quantity):
    with pytest.raises(error, match=quantity):
        reconciled(*arguments)


def test_no_tests_have_no_critical_score():
    with pytest.raises(OutOfRange, match="tests"):
        sidak_score(0)
