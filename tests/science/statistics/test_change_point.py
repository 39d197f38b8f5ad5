"""Likelihood ratios for a change: batches, gaps, and what they say of made-up shifts."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from hypothesis.extra.numpy import array_shapes, arrays

from server.science.errors import OutOfRange, WrongShape
from server.science.statistics.change_point import (
    glr,
    glr_run_length,
    shiryaev_posterior,
    shiryaev_roberts,
)

SOME_MISSING = arrays(
    np.float64,
    array_shapes(min_dims=2, max_dims=2, min_side=1, max_side=9),
    elements=st.one_of(st.just(np.nan), st.floats(-5, 5)),
)


@given(SOME_MISSING, st.integers(1, 6), st.sampled_from([-1, 1]))
def test_the_evidence_is_that_of_the_best_start(deviations, window, sense):
    found = glr(deviations, window, sense)

    for cell, column in enumerate(deviations.T):
        there = column[~np.isnan(column)][::-1][:window]
        best = max(
            [max(0.0, sense * there[:n].sum()) ** 2 / (2 * n) for n in range(1, len(there) + 1)],
            default=0.0,
        )
        assert found.evidence[-1, cell] == pytest.approx(best, abs=1e-12)


@given(SOME_MISSING, st.integers(0, 9))
def test_two_calls_of_the_glr_give_what_one_gives(deviations, cut):
    whole = glr(deviations, window=4)

    first = glr(deviations[:cut], window=4)
    second = glr(deviations[cut:], window=4, state=first.state)

    for name in ("evidence", "shift", "readings"):
        both = np.vstack((getattr(first, name), getattr(second, name)))
        np.testing.assert_array_equal(both, getattr(whole, name))


def test_the_glr_finds_the_size_and_the_start_of_a_short():
    deviations = np.random.default_rng(seed=71).normal(size=(60, 1))
    deviations[40:] -= 3.0

    found = glr(deviations, window=100)

    assert found.readings[-1, 0] == 20
    assert found.shift[-1, 0] == pytest.approx(-3.0, abs=0.6)
    assert found.evidence[-1, 0] > 60.0


def test_a_short_never_raises_a_voltage():
    found = glr([[4.0], [5.0]], window=10)

    assert found.evidence.tolist() == [[0.0], [0.0]]
    assert found.readings.tolist() == [[0], [0]]
    assert found.shift.tolist() == [[0.0], [0.0]]


def test_a_missing_reading_changes_no_evidence():
    deviations = [[-2.0, -2.0], [np.nan, -2.0]]

    evidence = glr(deviations, window=10).evidence
    roberts = shiryaev_roberts(deviations, shift=1.0)

    assert evidence[1].tolist() == [2.0, 4.0]
    assert roberts[1, 0] == roberts[0, 0]
    assert roberts[1, 1] > roberts[0, 1]


@pytest.mark.parametrize("evidence", [3.0, 4.0])
def test_the_glr_signals_by_chance_as_seldom_as_foretold(evidence):
    charts, window = 1500, 50
    readings = np.random.default_rng(seed=73).normal(size=(150, charts))

    crossed = (glr(readings, window).evidence >= evidence).any(axis=0).mean()

    # Nearly geometric, so that the share that has not signalled is exp(-n / average).
    average = -150.0 / np.log(1.0 - crossed)
    assert glr_run_length(evidence, window) == pytest.approx(average, rel=0.25)


def test_roberts_is_the_sum_over_all_starts():
    deviations = np.random.default_rng(seed=79).normal(size=(8, 3))
    ratios = np.exp(-0.7 * deviations - 0.7**2 / 2.0)

    expected = sum(np.prod(ratios[start:], axis=0) for start in range(8))

    np.testing.assert_allclose(np.exp(shiryaev_roberts(deviations, 0.7)[-1]), expected)


@given(SOME_MISSING, st.integers(0, 8))
def test_two_calls_of_roberts_give_what_one_gives(deviations, cut):
    whole = shiryaev_roberts(deviations, 1.0)
    first = shiryaev_roberts(deviations[:cut], 1.0)
    start = np.exp(first[-1]) if len(first) else 0.0

    second = shiryaev_roberts(deviations[cut:], 1.0, start=start)

    np.testing.assert_allclose(np.vstack((first, second)), whole, rtol=1e-9, atol=1e-9)


def test_a_long_fault_does_not_overflow():
    found = shiryaev_roberts(np.full((400, 1), -30.0), shift=5.0)

    assert np.isfinite(found[-1]).all()
    assert shiryaev_posterior(np.full((400, 1), -30.0), 5.0, 0.01)[-1, 0] == 1.0


def test_the_posterior_is_bayes_over_all_starts():
    deviations, hazard, shift = np.array([[0.3], [-1.2], [-2.0]]), 0.05, 1.5
    ratios = np.exp(-shift * deviations[:, 0] - shift**2 / 2.0)
    # The shift may have come before round 1, 2 or 3, or not yet.
    priors = [hazard * (1.0 - hazard) ** n for n in range(3)]
    shifted = sum(prior * np.prod(ratios[n:]) for n, prior in enumerate(priors))

    expected = shifted / (shifted + (1.0 - hazard) ** 3)

    assert shiryaev_posterior(deviations, shift, hazard)[-1, 0] == pytest.approx(expected)


def test_a_round_without_a_reading_leaves_the_prior_to_grow():
    found = shiryaev_posterior([[np.nan], [np.nan]], 1.0, hazard=0.1)

    assert found[:, 0] == pytest.approx([0.1, 0.19])


def test_the_posterior_is_as_often_right_as_it_says():
    rng = np.random.default_rng(seed=83)
    cells, hazard, shift = 20_000, 0.02, 1.5
    came = rng.geometric(hazard, cells) - 1
    rounds = np.arange(30)[:, np.newaxis]
    deviations = rng.normal(size=(30, cells)) - shift * (rounds >= came)

    found = shiryaev_posterior(deviations, shift, hazard)[-1]

    for low, high in ((0.2, 0.4), (0.6, 0.8)):
        said = (found > low) & (found < high)
        assert (came[said] < 30).mean() == pytest.approx(found[said].mean(), abs=0.05)


def test_the_posterior_goes_on_from_where_it_was():
    deviations = np.random.default_rng(seed=89).normal(size=(9, 4))
    whole = shiryaev_posterior(deviations, 1.0, 0.05)

    first = shiryaev_posterior(deviations[:5], 1.0, 0.05)
    second = shiryaev_posterior(deviations[5:], 1.0, 0.05, start=first[-1])

    np.testing.assert_allclose(np.vstack((first, second)), whole)


@pytest.mark.parametrize(
    ("call", "error", "quantity"),
    [
        (lambda: glr([[1.0]], window=0), OutOfRange, "window"),
        (lambda: glr([[1.0]], 5, sense=2), OutOfRange, "sense"),
        (lambda: glr([1.0], 5), WrongShape, "deviations"),
        (lambda: glr([[1.0]], 5, state=glr([[1.0]], 4).state), WrongShape, "state"),
        (lambda: glr_run_length(0.0, 50), OutOfRange, "evidence"),
        (lambda: glr_run_length(4.0, 1), OutOfRange, "window"),
        (lambda: shiryaev_roberts([[np.inf]], 1.0), OutOfRange, "deviations"),
        (lambda: shiryaev_roberts([[1.0]], 0.0), OutOfRange, "shift"),
        (lambda: shiryaev_roberts([[1.0]], 1.0, start=-1.0), OutOfRange, "start"),
        (lambda: shiryaev_roberts([[1.0]], 1.0, start=[1.0, 1.0]), WrongShape, "start"),
        (lambda: shiryaev_posterior([[1.0]], 1.0, 0.0), OutOfRange, "hazard"),
        (lambda: shiryaev_posterior([[1.0]], 1.0, 0.1, start=1.5), OutOfRange, "start"),
    ],
)
def test_what_cannot_be_is_refused(call, error, quantity):
    with pytest.raises(error, match=quantity):
        call()
