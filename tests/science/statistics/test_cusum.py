"""Tabular CUSUM: one call or many, with gaps, from a head start, and begun anew."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from hypothesis.extra.numpy import array_shapes, arrays

from server.science.errors import OutOfRange, WrongShape
from server.science.statistics.cusum import (
    NEVER,
    cusum,
    cusum_start,
    first_crossings,
    restarted,
    shift_began,
)

SOME_MISSING = arrays(
    np.float64,
    array_shapes(min_dims=2, max_dims=2, min_side=1, max_side=12),
    elements=st.one_of(st.just(np.nan), st.floats(-50, 50)),
)


def one_by_one(deviations, k, sense):
    """The chart written down as a person would keep it, cell by cell."""
    rows = []
    for column in np.transpose(deviations):
        total, sums = 0.0, []
        for deviation in column:
            if not np.isnan(deviation):
                total = max(0.0, total + (sense * deviation - k))
            sums.append(total)
        rows.append(sums)
    return np.transpose(rows)


@given(SOME_MISSING, st.sampled_from([-1, 1]))
def test_it_is_the_chart_that_a_person_would_keep(deviations, sense):
    chart = cusum(deviations, k=0.5, sense=sense)

    np.testing.assert_allclose(chart.sums, one_by_one(deviations, 0.5, sense))


@given(SOME_MISSING, st.integers(0, 12))
def test_two_calls_give_what_one_gives(deviations, cut):
    whole = cusum(deviations, k=0.5)

    first = cusum(deviations[:cut], k=0.5)
    second = cusum(deviations[cut:], k=0.5, state=first.state)

    np.testing.assert_array_equal(np.vstack((first.sums, second.sums)), whole.sums)
    np.testing.assert_array_equal(
        np.vstack((first.since_zero, second.since_zero)), whole.since_zero
    )
    np.testing.assert_array_equal(second.state.zero_at, whole.state.zero_at)
    assert second.state.rounds == whole.state.rounds == len(deviations)


@given(SOME_MISSING)
def test_a_sum_is_never_negative_and_never_missing(deviations):
    sums = cusum(deviations, k=0.25, sense=-1).sums

    assert (sums >= 0.0).all()


@given(SOME_MISSING)
def test_what_comes_later_changes_nothing_before(deviations):
    later = np.vstack((deviations, np.full((1, deviations.shape[1]), 9.0)))

    np.testing.assert_array_equal(cusum(later, k=0.5).sums[:-1], cusum(deviations, k=0.5).sums)


@given(SOME_MISSING, st.randoms())
def test_cells_in_another_order_have_the_same_sums(deviations, chance):
    order = list(range(deviations.shape[1]))
    chance.shuffle(order)

    np.testing.assert_array_equal(
        cusum(deviations[:, order], k=0.5).sums, cusum(deviations, k=0.5).sums[:, order]
    )


def test_a_missing_reading_holds_the_sum_and_its_count():
    chart = cusum([[2.0, 2.0], [np.nan, -5.0], [2.0, 2.0]], k=0.5)

    assert chart.sums.tolist() == [[1.5, 1.5], [1.5, 0.0], [3.0, 1.5]]
    assert chart.since_zero.tolist() == [[1, 1], [1, 0], [2, 1]]


def test_a_reading_missing_elsewhere_touches_no_neighbour():
    deviations = np.random.default_rng(seed=5).normal(size=(30, 4))
    holed = deviations.copy()
    holed[7:20, 2] = np.nan

    kept = [0, 1, 3]
    np.testing.assert_array_equal(
        cusum(holed, k=0.5).sums[:, kept], cusum(deviations, k=0.5).sums[:, kept]
    )


def test_each_cell_may_have_its_own_reference_value():
    chart = cusum([[1.0, 1.0]], k=[0.25, 0.75])

    assert chart.sums.tolist() == [[0.75, 0.25]]


def test_a_head_start_is_forgotten_when_nothing_is_wrong():
    ahead = cusum_start(1, h=5.0, head_start_share=0.5)

    chart = cusum([[0.0]] * 5, k=0.5, state=ahead)

    assert chart.sums[:, 0].tolist() == [2.0, 1.5, 1.0, 0.5, 0.0]
    assert ahead.zero_at.tolist() == [NEVER]
    assert shift_began(chart.state).tolist() == [5]


def test_a_head_start_finds_a_fault_sooner():
    fault = np.full((20, 1), 1.0)

    plain = cusum(fault, k=0.5)
    ahead = cusum(fault, k=0.5, state=cusum_start(1, h=5.0, head_start_share=0.5))

    assert first_crossings(plain.sums, 5.0).tolist() == [10]
    assert first_crossings(ahead.sums, 5.0).tolist() == [5]


def test_the_start_of_a_shift_is_the_round_after_the_last_zero():
    deviations = np.full((30, 1), -1.0)
    deviations[12:] = 1.5

    assert shift_began(cusum(deviations, k=0.5).state).tolist() == [12]


def test_a_sum_on_its_limit_is_no_signal():
    assert first_crossings([[5.0], [5.0]], h=5.0).tolist() == [NEVER]
    assert first_crossings(np.empty((0, 2)), h=5.0).tolist() == [NEVER, NEVER]


def test_only_the_cells_that_were_pulled_begin_anew():
    before = cusum([[3.0, 3.0], [3.0, 3.0]], k=0.5).state

    after = restarted(before, [True, False], sums=1.0)

    assert after.sums.tolist() == [1.0, 5.0]
    assert after.since_zero.tolist() == [0, 2]
    assert shift_began(after).tolist() == [2, 0]
    assert before.sums.tolist() == [5.0, 5.0]


def test_nothing_comes_of_no_rounds():
    chart = cusum(np.empty((0, 3)), k=0.5)

    assert chart.sums.shape == (0, 3)
    assert chart.state.sums.tolist() == [0.0, 0.0, 0.0]


@pytest.mark.parametrize(
    ("arguments", "error", "quantity"),
    [
        ({"deviations": [[np.inf]]}, OutOfRange, "deviations"),
        ({"deviations": [1.0]}, WrongShape, "deviations"),
        ({"k": -0.5}, OutOfRange, "k"),
        ({"k": [0.5, 0.5]}, WrongShape, "k"),
        ({"sense": 0}, OutOfRange, "sense"),
        ({"state": cusum_start(2)}, WrongShape, "state"),
    ],
)
def test_what_cannot_be_is_refused(arguments, error, quantity):
    with pytest.raises(error, match=quantity):
        cusum(**{"deviations": [[1.0]], "k": 0.5, **arguments})


@pytest.mark.parametrize(
    ("arguments", "quantity"), [({"cells": -1}, "cells"), ({"head_start_share": 1.0}, "share")]
)
def test_a_start_that_cannot_be_is_refused(arguments, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        cusum_start(**{"cells": 1, "h": 5.0, **arguments})


def test_shapes_that_do_not_fit_are_refused():
    with pytest.raises(WrongShape, match="cells"):
        restarted(cusum_start(2), [True])
    with pytest.raises(WrongShape, match="sums"):
        first_crossings([1.0], h=5.0)
