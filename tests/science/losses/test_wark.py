import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.science.errors import OutOfRange, WrongShape
from server.science.losses.wark import fitted_wark_constant, wark_constant, wark_efficiency

METAL = st.floats(20.0, 160.0)
ACID = st.floats(50.0, 300.0)
CONSTANT = st.floats(5.0, 200.0)


@given(METAL, ACID, CONSTANT)
def test_the_constant_comes_back_from_the_efficiency(metal, acid, constant):
    share = wark_efficiency(metal, acid, constant)

    assert 0.0 < share < 1.0
    assert wark_constant(share, metal, acid) == pytest.approx(constant, rel=1e-9)


@given(METAL, ACID, CONSTANT)
def test_more_acid_and_less_zinc_cost_efficiency(metal, acid, constant):
    share = wark_efficiency(metal, acid, constant)

    assert wark_efficiency(metal, 1.1 * acid, constant) < share
    assert wark_efficiency(0.9 * metal, acid, constant) < share


@given(st.lists(st.tuples(METAL, ACID), min_size=2, max_size=10), CONSTANT)
def test_a_house_without_scatter_gives_its_constant_back(baths, constant):
    metal, acid = np.array(baths).T

    found = fitted_wark_constant(wark_efficiency(metal, acid, constant), metal, acid)

    assert found.value == pytest.approx(constant, rel=1e-9)
    assert found.standard_uncertainty <= 1e-6 * constant
    assert found.pairs == len(baths)


def test_a_surer_day_counts_for_more():
    bath = ([0.90, 0.92], [60.0, 60.0], [170.0, 170.0])

    alike = fitted_wark_constant(*bath)
    second_surer = fitted_wark_constant(*bath, u_efficiency=[0.02, 0.002])

    assert second_surer.value > alike.value
    assert second_surer.value == pytest.approx(float(wark_constant(0.92, 60.0, 170.0)), rel=0.01)


def test_the_uncertainty_is_that_of_many_repetitions():
    rng = np.random.default_rng(seed=3)
    metal, acid = rng.uniform(50, 70, 15), rng.uniform(150, 190, 15)
    true = wark_efficiency(metal, acid, 30.0)

    fits = [
        fitted_wark_constant(true + rng.normal(0.0, 0.003, 15), metal, acid) for _ in range(1000)
    ]

    spread = np.std([fit.value for fit in fits])
    stated = math.sqrt(np.mean([fit.standard_uncertainty**2 for fit in fits]))
    assert stated == pytest.approx(spread, rel=0.08)


def test_a_missing_day_is_left_out():
    found = fitted_wark_constant([0.91, np.nan, 0.90], [60, 60, 55], [170, 170, 172])

    assert found == fitted_wark_constant([0.91, 0.90], [60, 55], [170, 172])
    assert found.pairs == 2


def test_no_day_gives_nothing_and_one_day_no_scatter():
    none, one = fitted_wark_constant([np.nan], 60.0, 170.0), fitted_wark_constant(0.91, 60.0, 170.0)

    assert math.isnan(none.value)
    assert none.pairs == 0
    assert one.value == pytest.approx(float(wark_constant(0.91, 60.0, 170.0)))
    assert math.isnan(one.standard_uncertainty)


def test_a_missing_number_stays_missing_and_its_neighbours_do_not():
    found = wark_efficiency([60.0, np.nan, 55.0], [170.0, 170.0, np.nan], 30.0)

    assert list(np.isnan(found)) == [False, True, True]


@pytest.mark.parametrize(
    ("call", "quantity"),
    [
        (lambda: wark_efficiency(0.0, 170.0, 30.0), "metal_g_l"),
        (lambda: wark_efficiency(60.0, 0.0, 30.0), "acid_g_l"),
        (lambda: wark_efficiency(60.0, 170.0, 0.0), "constant"),
        (lambda: wark_constant(1.0, 60.0, 170.0), "efficiency"),
        (lambda: wark_constant(0.0, 60.0, 170.0), "efficiency"),
        (lambda: fitted_wark_constant([0.9], 60.0, 170.0, u_efficiency=0.0), "u_efficiency"),
    ],
)
def test_an_impossible_value_is_named(call, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        call()


@pytest.mark.parametrize(
    ("metal", "errors"),
    [([[60.0], [55.0]], 1.0), ([60.0, 55.0], [1.0, 1.0, 1.0]), ([60.0, 55.0, 50.0], 1.0)],
)
def test_observations_that_do_not_belong_together_are_refused(metal, errors):
    with pytest.raises(WrongShape):
        fitted_wark_constant([0.91, 0.90], metal, [170.0, 172.0], u_efficiency=errors)
