import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.science.constants import COPPER, ZINC
from server.science.errors import OutOfRange
from server.science.faraday import deposited_kg
from server.science.losses.ladder import ladder_cell, ladder_volts
from server.science.losses.shorts import (
    lost_metal_kg,
    lost_value,
    share_of_many_shorts,
    short_energy_ratio,
    short_from_volts,
    short_ohm_from_volts,
)

AMPS = st.floats(1e3, 100e3)
BACK = st.floats(0.0, 3.0)
PAIR_OHM = st.floats(1e-4, 1e-3)
SHORT_OHM = st.floats(1e-4, 1e-2)


@given(AMPS, BACK, PAIR_OHM, SHORT_OHM)
def test_current_and_resistance_come_back_from_the_voltage_of_a_ladder(amps, back, pair, short):
    volts = ladder_volts(amps, back, pair, 50, short)
    healthy = back + amps * pair / 50

    current = short_from_volts(volts - healthy, pair / 50)
    resistance = short_ohm_from_volts(healthy, volts - healthy, pair / 50)

    assert current.value == pytest.approx(float(volts / short), rel=1e-8)
    assert resistance.value == pytest.approx(short, rel=1e-8)


@given(st.floats(-0.5, 0.5), st.floats(1e-6, 1e-3))
def test_the_sign_is_kept(deviation, ohm):
    found = short_from_volts([deviation, -deviation], ohm).value

    assert found[0] == -found[1]
    assert math.copysign(1.0, found[0]) == -math.copysign(1.0, deviation)


def test_noise_cancels_over_many_readings():
    rng = np.random.default_rng(seed=7)

    found = short_from_volts(rng.normal(0.0, 2e-3, 100_000), 16e-6).value

    # 2 mV over 16 microohm is 125 A; the mean of 100 000 is known to 0.4 A.
    assert np.std(found) == pytest.approx(125.0, rel=0.02)
    assert np.mean(found) == pytest.approx(0.0, abs=1.6)


def test_the_uncertainty_is_that_of_a_quotient():
    found = short_from_volts(-0.02, 20e-6, 0.001, 1e-6)

    # 5 % of the deviation and 5 % of the resistance.
    assert found.value == pytest.approx(1000.0)
    assert found.standard_uncertainty == pytest.approx(1000 * math.hypot(0.05, 0.05))


def test_a_healthy_cell_still_has_the_doubt_of_its_reading():
    found = short_from_volts(0.0, 20e-6, 0.001, 1e-6)

    assert found.value == 0.0
    assert found.standard_uncertainty == pytest.approx(50.0)


def test_the_uncertainty_of_a_resistance_is_that_of_many_trials():
    rng = np.random.default_rng(seed=5)
    deviations = rng.normal(-0.02, 2e-4, 50_000)
    resistances = rng.normal(20e-6, 2e-7, 50_000)

    stated = short_ohm_from_volts(2.0, -0.02, 20e-6, 2e-4, 2e-7)
    trials = short_ohm_from_volts(2.0, deviations, resistances).value

    assert stated.standard_uncertainty == pytest.approx(np.std(trials), rel=0.02)


@pytest.mark.parametrize("deviation", [0.0, 0.01])
def test_a_voltage_that_is_not_low_has_no_short(deviation):
    found = short_ohm_from_volts(2.0, deviation, 20e-6, 1e-3)

    assert np.isnan(found.value)
    assert np.isnan(found.standard_uncertainty)


def test_energy_rises_as_the_ladder_says():
    back, pair = 1.6, 7e-4
    cell = ladder_cell(30e3, back, np.full(50, pair), [2e-3, 1e-3] + [math.inf] * 48)
    resistive = 30e3 * pair / 50 / float(cell.healthy_volts)

    assert short_energy_ratio(cell.loss_share, resistive) == pytest.approx(
        float(cell.energy_ratio), rel=1e-12
    )


@given(st.floats(0.0, 0.9), st.floats(0.0, 1.0))
def test_energy_never_falls_with_a_short_and_stays_where_all_is_resistance(lost, resistive):
    assert short_energy_ratio(lost, resistive) >= 1.0
    assert short_energy_ratio(lost, 1.0) == 1.0


@given(st.floats(0.0, 10.0), st.floats(0.0, 100.0))
def test_the_share_of_many_shorts_stays_below_one(shorted, ratio):
    assert 0.0 <= share_of_many_shorts(shorted, ratio) < 1.0


def test_lost_metal_is_faradays_with_the_efficiency_of_the_rest():
    found = lost_metal_kg([1000.0, -1000.0], 3600.0, ZINC, 0.9)

    assert found == pytest.approx([0.9, -0.9] * deposited_kg(3.6e6, ZINC))


def test_value_follows_the_metal():
    kg = lost_metal_kg(1000.0, 86_400, COPPER, 0.95)

    assert lost_value(kg, 8.0) == pytest.approx(8.0 * float(kg))


def test_a_missing_number_stays_missing_and_its_neighbours_do_not():
    found = short_from_volts([-0.01, np.nan, -0.02], [2e-5, 2e-5, np.nan], 1e-3, 1e-6)

    assert list(np.isnan(found.value)) == [False, True, True]
    assert list(np.isnan(found.standard_uncertainty)) == [False, True, True]
    assert list(np.isnan(lost_metal_kg([1.0, np.nan], 1.0, COPPER))) == [False, True]
    assert list(np.isnan(short_energy_ratio([0.1, np.nan], 0.2))) == [False, True]
    assert list(np.isnan(share_of_many_shorts([0.1, np.nan], 1.5))) == [False, True]


@pytest.mark.parametrize(
    ("call", "quantity"),
    [
        (lambda: short_from_volts(-0.01, 0.0), "differential_resistance_ohm"),
        (lambda: short_from_volts(-0.01, 1e-5, -1.0), "u_deviation_v"),
        (lambda: short_from_volts(-0.01, 1e-5, 0.0, -1.0), "u_differential_resistance_ohm"),
        (lambda: short_ohm_from_volts(0.0, -0.01, 1e-5), "healthy_volts"),
        (lambda: short_energy_ratio(1.0, 0.2), "loss_share"),
        (lambda: short_energy_ratio(0.1, 1.2), "resistive_share"),
        (lambda: share_of_many_shorts(-0.1, 1.0), "shorted_share"),
        (lambda: lost_metal_kg(1.0, -1.0, COPPER), "duration_s"),
        (lambda: lost_value(1.0, -1.0), "metal_value_per_kg"),
    ],
)
def test_an_impossible_value_is_named(call, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        call()
