import math

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from server.science.errors import OutOfRange, ScienceError
from server.science.refining.bleed import (
    bleed_m3_s,
    concentration_after_g_l,
    governing_impurity,
    impurity_to_solution_kg_s,
    steady_g_l,
    time_to_limit_s,
)

DAY_S = 86_400
START = st.floats(0.0, 30.0)
IMPURITY = st.floats(1e-4, 0.1)
BLEED = st.one_of(st.just(0.0), st.floats(1e-6, 1e-2))
VOLUME = st.floats(100.0, 20_000.0)
DURATION = st.floats(0.0, 1000 * DAY_S)


@given(IMPURITY, st.floats(0.1, 50.0))
def test_the_bleed_holds_its_limit(impurity, limit):
    assert steady_g_l(impurity, bleed_m3_s(impurity, limit)) == pytest.approx(limit, rel=1e-12)


def test_other_ways_out_spare_bleed_and_may_spare_all():
    assert bleed_m3_s(0.02, 10.0, [0.0, 0.01, 0.03]) == pytest.approx([0.002, 0.001, -0.001])


@given(START, IMPURITY, BLEED, VOLUME, DURATION, DURATION)
def test_two_spells_are_one(start, impurity, bleed, volume, first, second):
    middle = concentration_after_g_l(start, impurity, bleed, volume, first)
    end = concentration_after_g_l(middle, impurity, bleed, volume, second)

    whole = concentration_after_g_l(start, impurity, bleed, volume, first + second)
    assert end == pytest.approx(float(whole), rel=1e-9)


@given(START, IMPURITY, VOLUME, DURATION)
def test_a_bleed_of_almost_nothing_is_no_bleed(start, impurity, volume, duration):
    none, hardly = concentration_after_g_l(start, impurity, [0.0, 1e-15], volume, duration)

    assert hardly == pytest.approx(none, rel=1e-6)


@given(IMPURITY, st.floats(1e-6, 1e-2), VOLUME, DURATION)
def test_at_its_steady_level_it_stays(impurity, bleed, volume, duration):
    steady = steady_g_l(impurity, bleed)

    after = concentration_after_g_l(steady, impurity, bleed, volume, duration)

    assert after == pytest.approx(float(steady), rel=1e-9)


@given(START, IMPURITY, BLEED, VOLUME, st.floats(DAY_S, 200 * DAY_S))
def test_the_time_comes_back_from_the_concentration(start, impurity, bleed, volume, duration):
    end = concentration_after_g_l(start, impurity, bleed, volume, duration)
    # Where hardly anything changes any more the time is lost in the digits of a float.
    slope = (impurity - bleed * end) / volume
    assume(slope * duration > 1e-6 * max(end, start))

    found = time_to_limit_s(start, end, impurity, bleed, volume)

    assert found == pytest.approx(duration, rel=1e-6)


def test_a_limit_that_is_reached_takes_no_time():
    assert time_to_limit_s([15.0, 16.0], 15.0, 0.02, 0.001, 5000.0) == pytest.approx([0.0, 0.0])


def test_a_bleed_that_suffices_is_never_overrun():
    found = time_to_limit_s(12.0, 15.0, 0.015, [0.001, 0.002], 5000.0)

    assert found == pytest.approx([math.inf, math.inf])


def test_the_impurity_that_asks_for_the_most_governs_and_the_unknown_are_named():
    found = governing_impurity({"As": 0.8e-3, "Sb": math.nan, "Ni": 1.2e-3, "Bi": -0.1e-3})

    assert (found.name, found.bleed_m3_s, found.unknown) == ("Ni", 1.2e-3, ("Sb",))


def test_where_nothing_is_known_nothing_governs():
    found = governing_impurity({"As": math.nan})

    assert found.name is None
    assert math.isnan(found.bleed_m3_s)
    assert found.unknown == ("As",)


def test_no_impurity_at_all_is_refused():
    with pytest.raises(ScienceError, match="bleeds_m3_s"):
        governing_impurity({})


def test_a_missing_number_stays_missing_and_its_neighbours_do_not():
    nans = [12.0, np.nan]
    assert list(np.isnan(concentration_after_g_l(nans, 0.02, 0.0, 5000.0, 1.0))) == [False, True]
    assert list(np.isnan(time_to_limit_s(nans, 15.0, 0.02, 0.0, 5000.0))) == [False, True]
    assert list(np.isnan(bleed_m3_s([0.02, np.nan], 15.0))) == [False, True]
    assert list(np.isnan(steady_g_l([0.02, np.nan], 0.001))) == [False, True]
    assert np.isnan(time_to_limit_s(16.0, 15.0, 0.02, 0.0, np.nan))


@pytest.mark.parametrize(
    ("call", "quantity"),
    [
        (lambda: impurity_to_solution_kg_s(-1.0, 0.1, 0.9), "dissolved_kg_s"),
        (lambda: impurity_to_solution_kg_s(1.0, 1.1, 0.9), "impurity_share"),
        (lambda: impurity_to_solution_kg_s(1.0, 0.1, 1.9), "to_solution_share"),
        (lambda: bleed_m3_s(1.0, 0.0), "limit_g_l"),
        (lambda: bleed_m3_s(1.0, 1.0, -1.0), "leaves_otherwise_kg_s"),
        (lambda: steady_g_l(1.0, 0.0), "bleed_m3_s"),
        (lambda: concentration_after_g_l(1.0, 1.0, 1.0, 0.0, 1.0), "volume_m3"),
        (lambda: concentration_after_g_l(1.0, 1.0, 1.0, 1.0, -1.0), "duration_s"),
        (lambda: time_to_limit_s(-1.0, 1.0, 1.0, 1.0, 1.0), "start_g_l"),
        (lambda: governing_impurity({"Ni": math.inf}), "Ni"),
    ],
)
def test_an_impossible_value_is_named(call, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        call()
