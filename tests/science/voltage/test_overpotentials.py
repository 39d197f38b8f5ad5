"""Electrodes held at a point: the point, the slope, and what heat does to them."""

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.science.errors import OutOfRange
from server.science.voltage.overpotentials import (
    StatedValue,
    TafelElectrode,
    TwoWayElectrode,
    UsualPoint,
    stated_between,
)

UNMOVED = StatedValue(0.0, 0.0, "chosen", "held")


def stated(value):
    """A value of a test."""
    return StatedValue(value, 0.0, "chosen", "a test")


ANODE = TafelElectrode("oxygen", UsualPoint(300.0, 318.15, stated(0.575), UNMOVED), stated(0.100))
CATHODE = TwoWayElectrode(
    "copper", UsualPoint(300.0, 318.15, stated(0.065), UNMOVED), stated(0.5), stated(1.5)
)


def test_a_band_becomes_its_middle_and_a_rectangular_doubt():
    band = stated_between(0.45, 0.70, "from memory", "textbooks")

    assert band.value == 0.575
    assert band.standard_uncertainty == pytest.approx(0.125 / math.sqrt(3))
    assert (band.status, band.source) == ("from memory", "textbooks")


@pytest.mark.parametrize(("electrode", "volts"), [(ANODE, 0.575), (CATHODE, 0.065)])
def test_the_curve_goes_through_its_point(electrode, volts):
    assert electrode.overpotential_v(300.0, 318.15) == pytest.approx(volts, rel=1e-9)


def test_ten_times_the_current_costs_one_slope_more():
    volts = ANODE.overpotential_v([30.0, 300.0, 3000.0], 318.15)

    assert np.diff(volts).tolist() == pytest.approx([0.100, 0.100])


def test_the_exchange_current_of_a_line_by_hand():
    # 0.575 V over 0.100 V per decade: 5.75 decades below 300 A/m2.
    assert ANODE.exchange_a_m2(318.15) == pytest.approx(300.0 / 10**5.75, rel=1e-9)


def test_the_exchange_current_of_a_curve_by_hand():
    # x = 0.065 F / R T = 2.37090; exp(x / 2) = 3.27172, exp(-1.5 x) = 0.02856.
    reduced = 0.065 * 96485.33212 / (8.314462618 * 318.15)

    assert CATHODE.exchange_a_m2(318.15) == pytest.approx(
        300.0 / (math.exp(0.5 * reduced) - math.exp(-1.5 * reduced)), rel=1e-9
    )


@pytest.mark.parametrize("electrode", [ANODE, CATHODE])
def test_at_the_point_heat_does_nothing_unless_it_is_stated(electrode):
    warm = electrode.overpotential_v(300.0, [308.15, 318.15, 328.15])

    assert np.ptp(warm) == pytest.approx(0.0, abs=1e-9)


def test_off_the_point_the_slope_grows_with_temperature():
    cold, warm = (np.diff(ANODE.overpotential_v([300.0, 3000.0], at_k)) for at_k in (300.0, 330.0))

    assert warm / cold == pytest.approx(1.1)


def test_a_stated_change_with_temperature_counts_by_the_kelvin():
    point = UsualPoint(300.0, 318.15, stated(0.6), stated(-0.004))
    electrode = TafelElectrode("oxygen", point, stated(0.1))

    # 10 K warmer at -0.4 % per kelvin: 0.6 exp(-0.04).
    assert electrode.overpotential_v(300.0, 328.15) == pytest.approx(0.576474, abs=1e-6)


def test_a_limit_of_supply_costs_more():
    free = CATHODE.overpotential_v(300.0, 318.15)
    far, near = CATHODE.overpotential_v(300.0, 318.15, [1e9, 330.0])

    assert far == pytest.approx(free, rel=1e-6)
    assert near > free + 0.03


def test_a_current_beyond_the_limit_is_refused():
    with pytest.raises(OutOfRange, match="share_of_limit"):
        CATHODE.overpotential_v(300.0, 318.15, 300.0)


def test_no_current_has_no_cost_on_a_line():
    assert np.isnan(ANODE.overpotential_v(0.0, 318.15))
    assert np.isnan(ANODE.differential_ohm_m2(0.0, 318.15))


@given(current=st.floats(1.0, 2000.0), kelvin=st.floats(280.0, 350.0))
@pytest.mark.parametrize("electrode", [ANODE, CATHODE])
def test_the_differential_resistance_is_the_slope_of_the_curve(electrode, current, kelvin):
    step = 1e-4 * current
    above, below = electrode.overpotential_v([current + step, current - step], kelvin)

    slope = electrode.differential_ohm_m2(current, kelvin)

    assert slope == pytest.approx((above - below) / (2 * step), rel=1e-5)
