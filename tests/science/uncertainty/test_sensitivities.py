"""The budget of a result: right where the derivatives are known, and honest at the edges."""

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.science.arrays import not_negative
from server.science.errors import OutOfRange, UnknownName, WrongShape
from server.science.uncertainty.sensitivities import propagated, propagated_together


def test_a_straight_line_has_its_slopes():
    result = propagated(lambda a, b: 3.0 * a - 2.0 * b, [1.0, 5.0], [0.4, 0.3])

    assert result.value == pytest.approx(-7.0)
    assert result.sensitivities == pytest.approx({"x1": 3.0, "x2": -2.0})
    assert result.standard_uncertainty == pytest.approx(math.hypot(1.2, 0.6))
    assert result.contributions == pytest.approx({"x1": 0.8, "x2": 0.2})
    assert result.bends == pytest.approx({"x1": 0.0, "x2": 0.0}, abs=1e-12)


def test_a_named_input_may_have_no_uncertainty_and_is_not_tried():
    tried = []

    def model(level, charge):
        tried.append(level)
        return level * charge

    result = propagated(model, {"level": 2.0, "charge": 5.0}, {"charge": 0.1})

    assert set(tried) == {2.0}
    assert math.isnan(result.sensitivities["level"])
    assert result.contributions == pytest.approx({"level": 0.0, "charge": 1.0})
    assert result.standard_uncertainty == pytest.approx(0.2)


def test_correlated_errors_cancel_in_a_difference():
    together = propagated(
        lambda a, b: a - b, {"a": 7.0, "b": 4.0}, {"a": 0.5, "b": 0.5}, {("a", "b"): 1.0}
    )

    assert together.standard_uncertainty == pytest.approx(0.0, abs=1e-12)


def test_shares_of_correlated_inputs_add_up_too():
    matrix = [[1.0, 0.5], [0.5, 1.0]]

    result = propagated(lambda a, b: a - 4.0 * b, [1.0, 1.0], [1.0, 0.5], matrix)

    # By hand: parts 1 and -2; variance 1 + 4 - 2 = 3; shares (1 - 1) / 3 and (4 - 1) / 3.
    assert result.standard_uncertainty == pytest.approx(math.sqrt(3.0))
    assert result.contributions == pytest.approx({"x1": 0.0, "x2": 1.0}, abs=1e-12)


def test_a_bend_shows_where_the_first_order_is_blind():
    result = propagated(lambda a: a**2, [0.0], [0.3])

    assert result.standard_uncertainty == 0.0
    assert result.bends == pytest.approx({"x1": 0.09})
    assert math.isnan(result.contributions["x1"])


def test_a_small_step_comes_to_the_derivative():
    narrow = propagated(lambda a: math.log(a), [0.6], [0.3], step=1e-3)
    wide = propagated(lambda a: math.log(a), [0.6], [0.3])

    assert narrow.sensitivities["x1"] == pytest.approx(1 / 0.6, rel=1e-6)
    assert narrow.bends["x1"] == pytest.approx(-0.5 * (0.3 / 0.6) ** 2, rel=1e-4)
    # By hand: (ln 0.9 - ln 0.3) / 2 = ln 3 / 2.
    assert wide.standard_uncertainty == pytest.approx(math.log(3.0) / 2)


def test_an_input_at_its_limit_is_tried_on_the_side_that_is_allowed():
    result = propagated(
        lambda ferric_g_l: 2.0 * not_negative("ferric_g_l", ferric_g_l),
        {"ferric_g_l": 0.1},
        {"ferric_g_l": 0.3},
    )

    assert result.standard_uncertainty == pytest.approx(0.6)
    assert math.isnan(result.bends["ferric_g_l"])


def test_a_model_without_a_number_on_one_side_is_tried_on_the_other():
    result = propagated(lambda a: math.nan if a > 1.0 else 5.0 * a, [1.0], [0.1])

    assert result.standard_uncertainty == pytest.approx(0.5)


def test_what_the_model_refuses_at_the_estimates_is_passed_on():
    with pytest.raises(OutOfRange, match="area"):
        propagated(lambda area: not_negative("area", area), [-1.0], [0.1])


def test_a_missing_estimate_leaves_nothing_known():
    result = propagated(lambda a, b: a + b, [math.nan, 1.0], [0.1, 0.1])

    assert math.isnan(result.value)
    assert math.isnan(result.standard_uncertainty)
    assert all(math.isnan(share) for share in result.contributions.values())


def test_a_missing_uncertainty_leaves_the_value():
    result = propagated(lambda a, b: a + 2.0 * b, [1.0, 1.0], [math.nan, 0.1])

    assert result.value == pytest.approx(3.0)
    assert math.isnan(result.standard_uncertainty)
    assert math.isnan(result.degrees_of_freedom)
    assert result.sensitivities["x2"] == pytest.approx(2.0)


def test_degrees_of_freedom_by_hand():
    # Parts 3 and 4: 5^4 / (3^4 / 10) = 625 / 8.1.
    result = propagated(lambda a, b: a + b, {"a": 0.0, "b": 0.0}, {"a": 3, "b": 4}, None, {"a": 10})

    assert result.degrees_of_freedom == pytest.approx(625 / 8.1)
    assert propagated(lambda a: a, [1.0], [0.1]).degrees_of_freedom == math.inf


def test_correlated_inputs_have_no_effective_degrees_of_freedom():
    result = propagated(lambda a, b: a + b, [0, 0], [3, 4], [[1, 0.5], [0.5, 1]], [10, 10])

    assert math.isnan(result.degrees_of_freedom)


@pytest.mark.parametrize(
    ("arguments", "error", "says"),
    [
        (({"a": 1.0}, {"b": 0.1}), UnknownName, "input"),
        (({"a": 1.0}, {"a": -0.1}), OutOfRange, "standard_uncertainties"),
        (({"a": 1.0}, {"a": 0.1}, {("a", "c"): 0.5}), UnknownName, "input"),
        (({"a": 1.0}, {"a": 0.1}, None, {"a": 0}), OutOfRange, "degrees_of_freedom"),
        (({"a": math.inf}, {"a": 0.1}), OutOfRange, "estimates"),
        (([1.0], [0.1, 0.2]), WrongShape, "estimates"),
        (([[1.0]], [0.1]), WrongShape, "estimates"),
        (([1.0], [0.1], None, None, 0.0), OutOfRange, "step"),
    ],
)
def test_what_does_not_belong_together_is_named(arguments, error, says):
    with pytest.raises(error, match=says):
        propagated(lambda a: a, *arguments)


def test_a_model_must_give_one_number_or_a_row_of_them():
    with pytest.raises(WrongShape, match="single number"):
        propagated(lambda a: [a, a], [1.0], [0.1])
    with pytest.raises(WrongShape, match="row of numbers"):
        propagated_together(lambda a: a, [1.0], [0.1])


def test_results_that_share_an_input_are_correlated():
    both = propagated_together(
        lambda kg, amps: [kg / amps, amps], {"kg": 10.0, "amps": 100.0}, {"amps": 1.0}
    )

    np.testing.assert_allclose(both.correlation, [[1.0, -1.0], [-1.0, 1.0]])
    assert both.standard_uncertainties == pytest.approx([0.001, 1.0], rel=1e-3)


def test_a_result_without_uncertainty_has_no_correlation():
    both = propagated_together(lambda a, b: [a, b], [1.0, 2.0], [0.1, 0.0])

    assert np.isnan(both.correlation).tolist() == [[False, True], [True, True]]


def test_a_missing_estimate_leaves_no_joint_result():
    both = propagated_together(lambda a, b: [a, a + b], [1.0, math.nan], [0.1, 0.1])

    assert np.isnan(both.values).all()
    assert np.isnan(both.standard_uncertainties).all()


@given(
    st.lists(st.floats(-50, 50), min_size=3, max_size=3),
    st.lists(st.floats(0.01, 10), min_size=3, max_size=3),
)
def test_shares_of_independent_inputs_add_up_to_one(slopes, errors):
    slopes[0] += math.copysign(1.0, slopes[0])

    result = propagated(lambda *inputs: np.dot(slopes, inputs), [1.0, 2.0, 3.0], errors)

    assert sum(result.contributions.values()) == pytest.approx(1.0, rel=1e-9)
    assert min(result.contributions.values()) >= 0.0
    assert result.standard_uncertainty == pytest.approx(
        np.hypot.reduce(np.multiply(slopes, errors))
    )
