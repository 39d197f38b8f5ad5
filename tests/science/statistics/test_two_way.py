"""A table taken apart: the same for any order, blind to wild values, silent where nothing is."""

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from hypothesis.extra.numpy import array_shapes, arrays

from server.science.errors import OutOfRange, WrongShape
from server.science.statistics.two_way import median_polish, robust_two_way

TABLES = arrays(
    np.float64,
    array_shapes(min_dims=2, max_dims=2, min_side=2, max_side=7),
    elements=st.one_of(st.integers(-40, 40).map(lambda tenths: tenths / 10), st.just(math.nan)),
)
FITS = [
    median_polish,
    lambda table: robust_two_way(table, floor=0.001, most_sweeps=50),
    lambda table: robust_two_way(table, drop_lows=True, floor=0.001, most_sweeps=50),
]


def house(seed, cells=40, rounds=30):
    """Voltages of a house: the effects of its cells and rounds, and what was read."""
    rng = np.random.default_rng(seed)
    by_cell = rng.normal(0.0, 0.02, cells)
    by_round = rng.normal(0.0, 0.05, rounds)
    by_cell, by_round = by_cell - np.median(by_cell), by_round - np.median(by_round)
    volts = 2.0 + by_cell[:, None] + by_round + rng.normal(0.0, 0.005, (cells, rounds))
    return by_cell, by_round, volts, rng


@pytest.mark.parametrize("fit", FITS)
@given(table=TABLES, data=st.data())
@settings(max_examples=40)
def test_relabelling_cells_and_rounds_moves_nothing(fit, table, data):
    cells = data.draw(st.permutations(range(table.shape[0])))
    rounds = data.draw(st.permutations(range(table.shape[1])))

    plain, turned = fit(table), fit(table[np.ix_(cells, rounds)])

    np.testing.assert_allclose(turned.cells, plain.cells[list(cells)], rtol=0, atol=1e-6)
    np.testing.assert_allclose(turned.rounds, plain.rounds[list(rounds)], rtol=0, atol=1e-6)
    np.testing.assert_allclose(
        turned.residuals, plain.residuals[np.ix_(cells, rounds)], rtol=0, atol=1e-6
    )


@pytest.mark.parametrize("fit", FITS)
@given(table=TABLES)
@settings(max_examples=40)
def test_the_parts_add_up_to_the_table(fit, table):
    result = fit(table)

    there = np.isfinite(table)
    np.testing.assert_allclose(
        (result.fitted + result.residuals)[there], table[there], rtol=0, atol=1e-9
    )
    assert np.isnan(result.residuals).tolist() == (~there).tolist()
    assert np.isnan(result.cells).tolist() == (~there.any(axis=1)).tolist()
    assert np.isnan(result.rounds).tolist() == (~there.any(axis=0)).tolist()
    if there.any():
        assert np.nanmedian(result.cells) == pytest.approx(0.0, abs=1e-9)
        assert np.nanmedian(result.rounds) == pytest.approx(0.0, abs=1e-9)


@pytest.mark.parametrize("fit", FITS)
@given(table=TABLES, shift=st.integers(-100, 100))
@settings(max_examples=30)
def test_a_shift_of_all_is_a_shift_of_the_overall(fit, table, shift):
    plain, moved = fit(table), fit(table + shift)

    np.testing.assert_allclose(moved.overall, plain.overall + shift, rtol=0, atol=1e-6)
    np.testing.assert_allclose(moved.cells, plain.cells, rtol=0, atol=1e-6)


@pytest.mark.parametrize("fit", FITS)
def test_an_additive_table_leaves_nothing(fit):
    by_cell, by_round = np.array([0.0, 0.3, -0.2, 0.1, -0.1]), np.array([-0.5, 0.0, 0.7])

    result = fit(2.0 + by_cell[:, None] + by_round)

    assert result.overall == pytest.approx(2.0)
    assert result.cells == pytest.approx(by_cell, abs=1e-12)
    assert result.rounds == pytest.approx(by_round, abs=1e-12)
    assert result.residuals == pytest.approx(np.zeros((5, 3)), abs=1e-12)
    assert result.converged
    assert result.connected


@pytest.mark.parametrize("fit", FITS)
def test_wild_and_missing_values_do_not_spoil_a_house(fit):
    by_cell, by_round, volts, rng = house(seed=1)
    volts[rng.random(volts.shape) < 0.1] -= 0.3
    volts[rng.random(volts.shape) < 0.02] += 5.0
    volts[rng.random(volts.shape) < 0.2] = np.nan

    result = fit(volts)

    # Three times the deviation of a mean of the twenty or so readings that are left, 0.0011; for
    # medians five times; and the middle of the effects moves as well.
    allowed = 0.006 if fit is FITS[2] else 0.010
    assert np.abs(result.cells - by_cell).max() < allowed
    assert np.abs(result.rounds - by_round).max() < allowed


def test_many_lows_in_a_round_draw_the_centre_down_unless_they_are_dropped():
    _, by_round, volts, _ = house(seed=2, cells=100)
    volts[:45, 7] -= 0.1

    two_sided = robust_two_way(volts).rounds[7] - by_round[7]
    one_sided = robust_two_way(volts, drop_lows=True).rounds[7] - by_round[7]

    assert two_sided < -0.005
    assert abs(one_sided) < 0.003


def test_lows_do_not_widen_the_scale_when_they_are_dropped():
    _, _, volts, rng = house(seed=3, cells=100)
    volts[rng.random(volts.shape) < 0.3] -= 0.1

    assert robust_two_way(volts, drop_lows=True).scale == pytest.approx(0.005, rel=0.1)
    assert robust_two_way(volts).scale > 0.0065


def test_highs_are_bounded_on_either_side_of_the_option():
    by_cell, _, volts, _ = house(seed=4)
    volts[5, :10] += 1.0

    for drop_lows in (False, True):
        result = robust_two_way(volts, drop_lows=drop_lows)
        assert result.cells[5] == pytest.approx(by_cell[5], abs=0.01)


def test_the_weighted_scores_of_every_cell_and_round_add_up_to_nothing():
    # What defines the estimate: the bounded residuals, not their squares, are in balance.
    _, _, volts, _ = house(seed=5)

    result = robust_two_way(volts)

    bounded = np.clip(result.residuals / result.scale, -1.345, 1.345)
    np.testing.assert_allclose(bounded.sum(axis=0), 0.0, atol=1e-4)
    np.testing.assert_allclose(bounded.sum(axis=1), 0.0, atol=1e-4)


def test_readings_without_weight_are_as_missing_but_have_a_residual():
    _, _, volts, rng = house(seed=6)
    weights = (rng.random(volts.shape) > 0.3).astype(float)

    weighed = robust_two_way(volts, weights)
    missing = robust_two_way(np.where(weights > 0.0, volts, np.nan))

    np.testing.assert_allclose(weighed.cells, missing.cells, rtol=0, atol=1e-9)
    assert np.isfinite(weighed.residuals).all()


def test_a_heavier_reading_counts_more():
    table = np.array([[0.0, 0.0, 0.0], [0.0, 0.0, 0.3], [0.0, 0.0, 0.0]])

    light = robust_two_way(table, floor=1.0)
    heavy = robust_two_way(table, np.where(table > 0.0, 9.0, 1.0), floor=1.0)

    assert heavy.residuals[1, 2] < light.residuals[1, 2]


def test_cells_that_were_never_read_together_are_not_compared():
    table = np.full((4, 4), np.nan)
    table[:2, :2], table[2:, 2:] = 1.0, 2.0

    assert not median_polish(table).connected
    assert not robust_two_way(table).connected
    table[0, 3] = 1.5
    assert median_polish(table).connected


@pytest.mark.parametrize("fit", FITS)
def test_an_empty_table_gives_nothing(fit):
    result = fit(np.full((3, 2), np.nan))

    assert math.isnan(result.overall)
    assert np.isnan(result.cells).all()
    assert np.isnan(result.residuals).all()


def test_too_few_sweeps_are_said():
    _, _, volts, rng = house(seed=7)
    volts[rng.random(volts.shape) < 0.3] = np.nan

    assert not robust_two_way(volts, most_sweeps=1).converged
    assert robust_two_way(volts).converged


@pytest.mark.parametrize(
    ("call", "error", "quantity"),
    [
        (lambda: median_polish([1.0, 2.0]), WrongShape, "values"),
        (lambda: median_polish([[1.0, np.inf]]), OutOfRange, "values"),
        (lambda: median_polish([[1.0]], most_sweeps=0), OutOfRange, "most_sweeps"),
        (lambda: robust_two_way([[1.0]], weights=[[-1.0]]), OutOfRange, "weights"),
        (lambda: robust_two_way([[1.0, 2.0]], weights=np.ones((2, 3))), WrongShape, "weights"),
        (lambda: robust_two_way([[1.0]], floor=-1.0), OutOfRange, "floor"),
        (lambda: robust_two_way([[1.0]], most_sweeps=0), OutOfRange, "most_sweeps"),
    ],
)
def test_what_cannot_be_is_refused(call, error, quantity):
    with pytest.raises(error, match=quantity):
        call()
