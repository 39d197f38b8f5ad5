"""The Nernst film and the rotating disc: limits, thicknesses, shares."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.science.electrode.film import (
    SMOOTH_DEPOSIT_HIGH_SHARE,
    SMOOTH_DEPOSIT_LOW_SHARE,
    film_limiting_a_m2,
    film_thickness_m,
    levich_film_m,
    levich_limiting_a_m2,
    share_of_limit,
)
from server.science.errors import OutOfRange


@given(st.floats(1e-10, 1e-8), st.floats(1.0, 3000.0), st.floats(1e-6, 1e-2))
def test_the_film_of_a_limit_is_the_one_it_came_from(diffusivity, mol_m3, film_m):
    limit = film_limiting_a_m2(2, diffusivity, mol_m3, film_m)

    assert film_thickness_m(2, diffusivity, mol_m3, limit) == pytest.approx(film_m)


def test_an_empty_solution_carries_nothing():
    assert film_limiting_a_m2(2, 7e-10, 0.0, 2e-4) == 0.0


def test_the_rule_of_the_trade_is_thirty_to_forty_per_cent():
    share = share_of_limit([240.0, 320.0], 800.0)

    assert share == pytest.approx([SMOOTH_DEPOSIT_LOW_SHARE, SMOOTH_DEPOSIT_HIGH_SHARE])


def test_a_share_above_one_is_shown_not_clipped():
    assert share_of_limit(1000.0, 800.0) == pytest.approx(1.25)


def test_four_times_the_speed_doubles_the_current():
    slow, fast = levich_limiting_a_m2(2, 7e-10, 1e-6, 100.0, [25.0, 100.0])

    assert fast == pytest.approx(2 * slow)


def test_the_disc_is_a_film_of_its_own_thickness():
    film_m = levich_film_m(7e-10, 1e-6, 100.0)

    disc = levich_limiting_a_m2(2, 7e-10, 1e-6, 100.0, 100.0)

    assert disc == pytest.approx(film_limiting_a_m2(2, 7e-10, 100.0, film_m))


def test_a_missing_value_leaves_its_neighbours_alone():
    limits = film_limiting_a_m2(2, 7e-10, [700.0, np.nan, 600.0], 2e-4)

    assert np.isnan(limits).tolist() == [False, True, False]
    assert limits[2] == film_limiting_a_m2(2, 7e-10, 600.0, 2e-4)


@pytest.mark.parametrize(
    ("place", "value", "quantity"),
    [
        (0, 0, "electrons"),
        (1, -7e-10, "diffusivity_m2_s"),
        (2, -1.0, "mol_m3"),
        (3, 0.0, "film_m"),
    ],
)
def test_an_impossible_input_is_named(place, value, quantity):
    inputs = [2, 7e-10, 700.0, 2e-4]
    inputs[place] = value

    with pytest.raises(OutOfRange, match=quantity):
        film_limiting_a_m2(*inputs)


def test_a_limit_of_nothing_has_no_share():
    with pytest.raises(OutOfRange, match="limiting_a_m2"):
        share_of_limit(300.0, 0.0)
    with pytest.raises(OutOfRange, match="current_a_m2"):
        share_of_limit(-300.0, 800.0)
