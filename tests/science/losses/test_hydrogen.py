import numpy as np
import pytest

from server.science.errors import OutOfRange, UnknownName
from server.science.losses.hydrogen import (
    LOG_EXCHANGE_A_CM2,
    hydrogen_current_a_m2,
    hydrogen_exchange_a_m2,
    hydrogen_rate_a_m2,
)


def test_what_metal_and_other_losses_leave_makes_hydrogen():
    assert hydrogen_current_a_m2(500.0, 0.90) == pytest.approx(50.0)
    assert hydrogen_current_a_m2(500.0, 0.90, 0.04) == pytest.approx(30.0)


def test_books_that_contradict_each_other_are_shown():
    assert hydrogen_current_a_m2(500.0, 0.98, 0.04) == pytest.approx(-10.0)


def test_one_slope_lower_makes_ten_times_as_much():
    high, low = hydrogen_rate_a_m2([-0.80, -0.92], 1e-6)

    assert low == pytest.approx(10 * high, rel=1e-12)


def test_the_rate_at_equilibrium_is_the_exchange_current():
    assert hydrogen_rate_a_m2(-0.05, 1e-3, equilibrium_v=-0.05) == pytest.approx(1e-3)


def test_copper_is_won_without_hydrogen_and_nickel_is_not():
    # Copper plates near +0.3 V, where hydrogen has no driving force at all; nickel near -0.5 V.
    copper = hydrogen_rate_a_m2(0.25, hydrogen_exchange_a_m2("Cu")[1])
    nickel = hydrogen_rate_a_m2(-0.5, hydrogen_exchange_a_m2("Ni")[0])

    assert copper < 1e-3
    assert nickel > 10.0


def test_exchange_currents_are_a_hundredth_of_a_square_metre_times_the_table():
    # 1e-7 A/cm2 is 1e-3 A/m2.
    assert hydrogen_exchange_a_m2("cu") == pytest.approx((1e-3, 1e-3))
    assert hydrogen_exchange_a_m2("Pb") == pytest.approx((1e-9, 1e-8))
    assert all(low <= high for low, high in LOG_EXCHANGE_A_CM2.values())


def test_a_metal_that_is_not_in_the_table_is_named_with_those_that_are():
    with pytest.raises(UnknownName, match="Zn"):
        hydrogen_exchange_a_m2("Ti")


def test_a_missing_number_stays_missing_and_its_neighbours_do_not():
    assert list(np.isnan(hydrogen_rate_a_m2([-0.8, np.nan], 1e-6))) == [False, True]
    assert list(np.isnan(hydrogen_current_a_m2([500.0, np.nan], 0.9))) == [False, True]


@pytest.mark.parametrize(
    ("call", "quantity"),
    [
        (lambda: hydrogen_current_a_m2(-1.0, 0.9), "current_density_a_m2"),
        (lambda: hydrogen_current_a_m2(500.0, -0.1), "current_efficiency"),
        (lambda: hydrogen_current_a_m2(500.0, 0.9, -0.1), "other_losses_share"),
        (lambda: hydrogen_rate_a_m2(-0.8, 0.0), "exchange_a_m2"),
        (lambda: hydrogen_rate_a_m2(-0.8, 1e-6, 0.0), "slope_v"),
        (lambda: hydrogen_rate_a_m2(np.inf, 1e-6), "cathode_potential_v"),
    ],
)
def test_an_impossible_value_is_named(call, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        call()
