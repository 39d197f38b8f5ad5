import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.science.errors import OutOfRange, WrongShape
from server.science.losses.ferric import (
    TYPICAL_TRANSFER_M_S,
    calibrated_transfer_m_s,
    ferric_current_a_m2,
    ferric_current_at_a_m2,
    ferric_loss_share,
    ferric_rule_share,
    ferric_transfer_m_s,
    takes_all_current,
)

IRON = st.floats(0.01, 20.0)
TRANSFER = st.floats(1e-7, 1e-4)


def test_twice_the_iron_takes_twice_the_current():
    one, two = ferric_current_a_m2([1.0, 2.0], 6e-10, 0.15e-3)

    assert two == pytest.approx(2 * one, rel=1e-14)


def test_half_the_film_takes_twice_the_current():
    thick, thin = ferric_current_a_m2(2.0, 6e-10, [0.2e-3, 0.1e-3])

    assert thin == pytest.approx(2 * thick, rel=1e-14)


def test_no_iron_takes_nothing():
    assert ferric_current_at_a_m2(0.0, 4e-6) == 0.0


def test_a_loss_beyond_the_current_is_shown_and_flagged():
    shares = ferric_loss_share([2.0, 60.0, np.nan], 300.0, 4e-6)

    assert shares[1] == pytest.approx(1.382, abs=0.001)
    assert list(takes_all_current(shares)) == [False, True, False]


def test_a_missing_number_stays_missing_and_its_neighbours_do_not():
    found = ferric_loss_share([1.0, np.nan, 2.0], [300.0, 300.0, np.nan], 4e-6)

    assert list(np.isnan(found)) == [False, True, True]


@given(st.lists(IRON, min_size=2, max_size=12), TRANSFER)
def test_a_house_without_scatter_gives_its_coefficient_back(iron, transfer):
    found = calibrated_transfer_m_s(iron, ferric_current_at_a_m2(iron, transfer))

    assert found.value == pytest.approx(transfer, rel=1e-12)
    assert found.standard_uncertainty <= 1e-9 * transfer


def test_a_calibration_keeps_its_sign():
    assert calibrated_transfer_m_s([1.0, 2.0], [-3.0, -5.0]).value < 0.0


def test_the_coefficient_is_diffusivity_over_film():
    assert ferric_transfer_m_s(6e-10, 1.5e-4) == pytest.approx(4e-6, rel=1e-14)


def test_the_typical_loss_holds_to_the_rule_at_its_middle():
    # Near 250 A/m2 and 1 g/L the rule gives 2 to 3 points.
    share = ferric_loss_share(1.0, 250.0, TYPICAL_TRANSFER_M_S.value)
    low, high = ferric_rule_share(1.0)

    assert low < share < high
    assert math.isinf(TYPICAL_TRANSFER_M_S.degrees_of_freedom)
    assert TYPICAL_TRANSFER_M_S.pairs == 0


@pytest.mark.parametrize(
    ("call", "quantity"),
    [
        (lambda: ferric_current_a_m2(-1.0, 6e-10, 1e-4), "ferric_g_l"),
        (lambda: ferric_current_a_m2(1.0, 0.0, 1e-4), "diffusivity_m2_s"),
        (lambda: ferric_current_a_m2(1.0, 6e-10, 0.0), "film_m"),
        (lambda: ferric_current_at_a_m2(1.0, -1e-6), "transfer_m_s"),
        (lambda: ferric_loss_share(1.0, 0.0, 1e-6), "current_density_a_m2"),
        (lambda: takes_all_current(math.inf), "loss_share"),
        (lambda: ferric_rule_share(-1.0), "ferric_g_l"),
    ],
)
def test_an_impossible_value_is_named(call, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        call()


def test_pairs_of_different_length_are_refused():
    with pytest.raises(WrongShape):
        calibrated_transfer_m_s([1.0, 2.0], [7.0])
