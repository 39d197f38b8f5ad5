"""Run lengths of EWMA: laws they obey, and simulated charts."""

import numpy as np
import pytest

from server.science.errors import OutOfRange
from server.science.statistics.ewma import ewma, ewma_half_width
from server.science.statistics.ewma_run_length import (
    ewma_chain,
    ewma_run_length,
    ewma_settled_run_length,
    ewma_signal_probability,
    shewhart_run_length,
)


@pytest.mark.parametrize("opening_limits", [False, True])
def test_the_chart_itself_signals_as_foretold(opening_limits):
    readings = np.random.default_rng(seed=31).normal(0.75, 1.0, (40, 20_000))
    chart = ewma(readings, 0.2)
    at = np.arange(1, 41)[:, np.newaxis] if opening_limits else None
    limits = ewma_half_width(1.0, 0.2, 2.5, at)

    signalled = np.maximum.accumulate(np.abs(chart.averages) > limits, axis=0).mean(axis=1)

    foretold = ewma_signal_probability(0.2, 2.5, 40, 0.75, opening_limits=opening_limits)
    np.testing.assert_allclose(signalled, foretold, atol=0.012)


@pytest.mark.parametrize("opening_limits", [False, True])
def test_the_average_is_the_sum_of_the_chances_to_run_on(opening_limits):
    chances = ewma_signal_probability(0.3, 2.0, 3000, opening_limits=opening_limits)

    found = ewma_run_length(0.3, 2.0, opening_limits=opening_limits)

    assert found == pytest.approx(1.0 + (1.0 - chances).sum(), rel=1e-6)


def test_opening_limits_find_a_fault_from_the_start_sooner():
    fixed = ewma_run_length(0.1, 2.814, [0.0, 1.0])
    opening = ewma_run_length(0.1, 2.814, [0.0, 1.0], opening_limits=True)

    assert opening[0] / fixed[0] > 0.9
    assert opening[1] / fixed[1] < 0.8


def test_one_side_runs_about_twice_as_long():
    one, two = ewma_run_length(0.2, 3.0, sides=1), ewma_run_length(0.2, 3.0)

    assert one == pytest.approx(2.0 * two, rel=0.01)


def test_a_two_sided_chart_does_not_care_which_is_up():
    up, down = ewma_run_length(0.2, 2.5, [0.7, -0.7])

    assert up == pytest.approx(down, rel=1e-10)


def test_a_one_sided_chart_does_not_see_a_fall():
    assert ewma_run_length(0.2, 2.5, -0.5, sides=1) > 100 * ewma_run_length(0.2, 2.5, 0.5, sides=1)


def test_a_start_towards_the_limit_shortens_the_run():
    assert ewma_run_length(0.2, 2.5, 1.0, start=0.4) < ewma_run_length(0.2, 2.5, 1.0)


def test_a_settled_chart_without_a_shift_runs_shorter():
    assert ewma_settled_run_length(0.1, 2.814, 0.0) < ewma_run_length(0.1, 2.814)
    # A chart without memory is always settled.
    assert ewma_settled_run_length(1.0, 3.0, 1.0) == pytest.approx(shewhart_run_length(3.0, 1.0))


def test_single_readings_are_judged_by_their_tails():
    assert shewhart_run_length(3.0, sides=1) == pytest.approx(2.0 * shewhart_run_length(3.0))
    assert shewhart_run_length(3.0, 3.0, sides=1) == pytest.approx(2.0)


def test_a_missing_shift_gives_no_run_length():
    for found in (ewma_run_length(0.2, 2.5, [np.nan, 1.0]), shewhart_run_length(3.0, [np.nan, 1])):
        assert np.isnan(found).tolist() == [True, False]


@pytest.mark.parametrize(
    ("arguments", "quantity"),
    [
        ({"weight": 0.0}, "weight"),
        ({"weight": 1.5}, "weight"),
        ({"width": 0.0}, "width"),
        ({"sides": 0}, "sides"),
        ({"start": 1.1}, "start"),
        ({"shift": np.inf}, "shift"),
    ],
)
def test_what_cannot_be_is_refused(arguments, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        ewma_run_length(**{"weight": 0.2, "width": 3.0, **arguments})


def test_readings_that_cannot_be_are_refused():
    with pytest.raises(OutOfRange, match="readings"):
        ewma_signal_probability(0.2, 3.0, 0)
    with pytest.raises(OutOfRange, match="limit"):
        ewma_chain(0.0001, 3.0, 0.0).average(0.0)
