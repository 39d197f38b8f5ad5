import numpy as np
import pytest

from server.watch.model.sizes import HEALED, sizes


def test_shares_are_one_step_apart_from_half_a_per_cent_to_more_than_half():
    shares = sizes().shares

    assert (shares[0], shares[-1]) == pytest.approx((0.004, 0.6))
    assert np.diff(np.log(shares)) == pytest.approx(np.log(150) / 19)


def test_nothing_is_lost_between_two_rounds():
    grid = sizes()

    assert grid.prior.sum() == pytest.approx(1)
    assert grid.growth.sum(axis=1) == pytest.approx(np.ones(20))
    assert grid.passing.sum(axis=1) == pytest.approx(np.ones(21))


def test_shorts_grow_more_often_than_they_shrink_and_few_end_unseen():
    grid = sizes()
    steps = grid.growth[10] @ (np.arange(20) - 10)

    assert steps == pytest.approx(0.05 + 2 * 0.02 - 0.03)
    assert grid.passing[1:, 0] == pytest.approx(HEALED)


def test_the_usual_short_takes_four_per_cent_of_the_current():
    grid = sizes()

    assert grid.shares[np.argmax(grid.prior)] == pytest.approx(0.04, rel=0.15)
