"""Limits for wanted run lengths: the inverse of the run lengths."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from server.science.errors import OutOfRange
from server.science.statistics.chart_design import (
    cusum_for_run_lengths,
    cusum_for_shift,
    cusum_limit,
    ewma_width,
    false_flags_per_thousand,
    reference_for,
    run_length_for,
)
from server.science.statistics.cusum import cusum
from server.science.statistics.ewma_run_length import ewma_run_length
from server.science.statistics.run_length import cusum_run_length


@settings(max_examples=15, deadline=None)
@given(
    st.floats(50.0, 1e5), st.floats(0.25, 1.0), st.sampled_from([1, 2]), st.sampled_from([0.0, 0.5])
)
def test_the_limit_gives_the_wanted_run_length(run_length, k, sides, share):
    h = cusum_limit(run_length, k, sides, share)

    found = cusum_run_length(k, h, 0.0, share * h, sides)

    assert found == pytest.approx(run_length, rel=1e-6)


@pytest.mark.parametrize("opening_limits", [False, True])
@pytest.mark.parametrize("sides", [1, 2])
def test_the_width_gives_the_wanted_run_length(sides, opening_limits):
    width = ewma_width(500.0, 0.2, sides, opening_limits)

    found = ewma_run_length(0.2, width, sides=sides, opening_limits=opening_limits)

    assert found == pytest.approx(500.0, rel=1e-6)


def test_two_false_flags_in_a_thousand_are_one_in_five_hundred():
    assert run_length_for(2.0) == 500.0
    assert false_flags_per_thousand([500.0, np.nan])[0] == 2.0
    assert np.isnan(false_flags_per_thousand([500.0, np.nan])[1])


def test_charts_begun_anew_after_each_flag_flag_as_often_as_promised():
    h = cusum_limit(float(run_length_for(20.0)), k=0.5)
    readings = np.random.default_rng(seed=61).normal(size=(400, 2000))
    sums, flags = np.zeros(2000), 0
    for row in readings:
        sums = np.maximum(0.0, sums + row - 0.5)
        flags += int((sums > h).sum())
        sums[sums > h] = 0.0

    # The first fifty readings from zero have fewer, which is worth some per cent.
    assert 1000.0 * flags / readings.size == pytest.approx(20.0, rel=0.05)


def test_half_of_the_shift_is_the_quickest_reference_value():
    quickest = cusum_for_shift(500.0, shift=1.0)

    for k in (0.4, 0.6):
        other = cusum_run_length(k, cusum_limit(500.0, k), 1.0)
        assert other > quickest.out_of_control
    assert reference_for([1.0, np.nan])[0] == quickest.k == 0.5


def test_a_chart_for_two_run_lengths_has_both():
    found = cusum_for_run_lengths(400.0, 6.0, sides=2)

    assert found.in_control == pytest.approx(400.0, rel=1e-6)
    assert cusum_run_length(found.k, found.h, 2.0 * found.k, sides=2) == pytest.approx(6.0)


def test_a_limit_of_readings_works_in_any_unit():
    # With a standard deviation of 4 mV everything is four times as large, and the sums too.
    h = cusum_limit(500.0, 0.5)
    deviations = np.random.default_rng(seed=67).normal(size=(50, 3))

    plain = cusum(deviations, k=0.5).sums > h
    scaled = cusum(4.0 * deviations, k=4.0 * 0.5).sums > 4.0 * h

    np.testing.assert_array_equal(plain, scaled)


@pytest.mark.parametrize(
    ("call", "quantity"),
    [
        (lambda: cusum_limit(500.0, -0.1), "k"),
        (lambda: cusum_limit(500.0, 0.5, head_start_share=0.6), "head_start_share"),
        (lambda: cusum_limit(3.0, 0.5), "run_length"),
        (lambda: cusum_limit(1e9, 0.5), "run_length"),
        (lambda: ewma_width(1.0, 0.2), "run_length"),
        (lambda: reference_for(0.0), "shift"),
        (lambda: run_length_for(0.0), "false_per_thousand"),
        (lambda: false_flags_per_thousand(-1.0), "run_length"),
        (lambda: cusum_for_run_lengths(500.0, 400.0), "out_of_control"),
    ],
)
def test_what_cannot_be_is_refused(call, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        call()
