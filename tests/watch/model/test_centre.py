import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from hypothesis.extra.numpy import arrays

from server.watch.model.centre import broken, centre, held, middle

CELLS = 60
NOISE_V = np.full(CELLS, 0.006)
TRUSTED = np.ones(CELLS)

few = arrays(float, st.integers(1, 50), elements=st.floats(-10, 10))


@given(few)
def test_the_middle_is_the_median(values):
    assert middle(values) == np.median(values)


@given(few, st.floats(0, 5))
def test_what_is_held_is_no_further_from_zero_than_the_limit(values, limit):
    assert (held(values, limit) == np.clip(values, -limit, limit)).all()


@pytest.fixture
def rest_v():
    return 0.02 + np.random.default_rng(3).normal(0, 0.006, CELLS)


@pytest.mark.parametrize("noises", [5, 15, 50])
def test_every_fourth_cell_shorted_does_not_move_the_centre(rest_v, noises):
    before, _ = centre(rest_v, NOISE_V, TRUSTED)
    rest_v[::4] -= noises * 0.006

    after, _ = centre(rest_v, NOISE_V, TRUSTED)

    # The fourth part of the cells is gone: the centre may move by some of its own uncertainty.
    assert after == pytest.approx(before, abs=0.0016)


def test_three_wild_highs_do_not_move_the_centre(rest_v):
    before, _ = centre(rest_v, NOISE_V, TRUSTED)
    rest_v[[5, 20, 40]] += 1.0

    after, _ = centre(rest_v, NOISE_V, TRUSTED)

    assert after == pytest.approx(before, abs=0.0008)


def test_a_cell_that_is_likely_shorted_has_no_say(rest_v):
    trust = TRUSTED.copy()
    trust[:20] = 0.4
    moved = rest_v.copy()
    moved[:20] -= 0.01

    assert centre(moved, NOISE_V, trust) == centre(rest_v, NOISE_V, trust)


def test_the_variance_is_that_of_a_weighted_mean(rest_v):
    noise_v = np.where(np.arange(CELLS) < 30, 0.004, 0.012)
    made = np.random.default_rng(4).normal(0, noise_v, (2_000, CELLS))

    found = [centre(row, noise_v, TRUSTED) for row in made]

    assert np.std([value for value, _ in found]) == pytest.approx(
        np.sqrt(np.mean([var for _, var in found])), rel=0.15
    )
    # Lower readings lose weight sooner, which lifts the centre by little of its uncertainty.
    assert abs(np.mean([value for value, _ in found])) < 0.5 * np.std([v for v, _ in found])


@pytest.mark.parametrize("place", [5, 17, 30, 54])
@pytest.mark.parametrize("step_v", [0.036, -0.036])
def test_a_current_that_jumps_in_mid_walk_breaks_the_round_there(rest_v, place, step_v):
    rest_v[place:] += step_v

    assert abs(broken(rest_v, NOISE_V) - place) <= 1


def test_honest_noise_breaks_no_round():
    made = np.random.default_rng(5).normal(0, 0.006, (2_000, CELLS))

    assert sum(broken(row, NOISE_V) > 0 for row in made) < 2


def test_neighbouring_shorts_break_no_round(rest_v):
    for start in range(CELLS - 2):
        shorted = rest_v.copy()
        shorted[start : start + 3] -= 0.09

        assert broken(shorted, NOISE_V) == 0


def test_a_short_walk_is_never_broken():
    assert broken(np.array([0.0] * 4 + [1.0] * 5), np.full(9, 0.006)) == 0
