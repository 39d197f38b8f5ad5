"""A chart as a linear system: its moments and its distribution hang together."""

import numpy as np
import pytest

from server.science.errors import OutOfRange
from server.science.statistics.signal_chain import SignalChain, each_shift, normal_steps


@pytest.fixture
def chain():
    """A CUSUM with k 0.5 and h 3 without a shift."""
    return SignalChain(0.0, 3.0, 1.0, normal_steps(-0.5, 1.0, 1.0), is_held=True)


def test_the_average_is_the_sum_of_the_chances_to_run_on(chain):
    silent = chain.survival(0.0, 4000)

    # The run length is longer than n with the probability silent[n], n from 0.
    assert silent.sum() == pytest.approx(chain.average(0.0), rel=1e-9)


def test_the_deviation_is_that_of_the_distribution(chain):
    silent = chain.survival(0.0, 4000)
    chances = -np.diff(silent)
    readings = np.arange(1, 4001)

    spread = np.sqrt(chances @ readings**2 - (chances @ readings) ** 2)

    assert chain.deviation(0.0) == pytest.approx(spread, rel=1e-6)


@pytest.mark.parametrize("share", [0.01, 0.5, 0.9, 0.999])
def test_a_quantile_is_the_first_reading_with_that_share(chain, share):
    silent = chain.survival(0.0, 2000)

    found = chain.quantile(0.0, share)

    assert 1.0 - silent[found] >= share
    assert 1.0 - silent[found - 1] < share


def test_a_settled_chart_signals_at_an_even_rate(chain):
    after = chain.settled @ chain.matrix

    assert chain.settled.sum() == pytest.approx(1.0)
    np.testing.assert_allclose(after / after.sum(), chain.settled, atol=1e-12)
    # Then the run length is geometric.
    assert chain.settled @ chain.averages == pytest.approx(1.0 / (1.0 - after.sum()), rel=1e-9)


def test_moves_add_up_to_what_does_not_signal(chain):
    rows = chain.moves(np.array([0.0, 2.9])).sum(axis=1)

    # From zero a signal takes a reading above 3.5, from 2.9 one above 0.6.
    assert rows == pytest.approx([0.999767371, 0.725746882], abs=1e-9)


def test_a_range_too_long_for_its_steps_is_refused():
    wide = SignalChain(0.0, 1000.0, 1.0, normal_steps(0.0, 1.0, 1.0), is_held=True)

    with pytest.raises(OutOfRange, match="limit"):
        wide.average(0.0)


def test_steps_that_cannot_be_are_refused():
    with pytest.raises(OutOfRange, match="gain"):
        normal_steps(0.0, np.nan, 1.0)


def test_a_missing_shift_has_no_run_length_and_the_others_have():
    assert each_shift(np.array([[np.nan, 2.0]]), lambda one: one + 1.0)[0, 1] == 3.0
    assert np.isnan(each_shift(np.array([[np.nan, 2.0]]), lambda one: one + 1.0)[0, 0])
