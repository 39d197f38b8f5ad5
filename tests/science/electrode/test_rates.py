"""Butler-Volmer both ways: signs, limits, the whole range, and what it refuses."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.science.constants import FARADAY_C_MOL, GAS_CONSTANT_J_MOL_K
from server.science.electrode.rates import (
    back_reaction_share,
    butler_volmer_a_m2,
    butler_volmer_overpotential_v,
    charge_transfer_ohm_m2,
)
from server.science.errors import OutOfRange

THERMAL_V = GAS_CONSTANT_J_MOL_K * 298.15 / FARADAY_C_MOL

transfers = st.floats(0.01, 4.0)
exchanges = st.floats(-12.0, 4.0).map(lambda decade: 10.0**decade)
kelvins = st.floats(273.15, 373.15)
# Current over exchange current, either direction, over 24 decades.
ratios = st.tuples(st.sampled_from([-1.0, 1.0]), st.floats(-12.0, 12.0)).map(
    lambda drawn: drawn[0] * 10.0 ** drawn[1]
)


def test_no_overpotential_no_current():
    assert butler_volmer_a_m2(0.0, 50.0, 1.5, 0.5, 318.15) == 0.0
    assert butler_volmer_overpotential_v(0.0, 50.0, 1.5, 0.5, 318.15) == 0.0
    assert butler_volmer_overpotential_v(0.0, 50.0, 0.5, 0.5, 318.15) == 0.0


def test_a_positive_overpotential_dissolves():
    assert butler_volmer_a_m2(0.05, 50.0, 1.5, 0.5, 318.15) > 0.0
    assert butler_volmer_a_m2(-0.05, 50.0, 1.5, 0.5, 318.15) < 0.0


def test_one_thermal_volt_by_hand():
    # e^1.5 - e^-0.5 = 4.481689 - 0.606531.
    assert butler_volmer_a_m2(THERMAL_V, 10.0, 1.5, 0.5, 298.15) == pytest.approx(38.75158)


def test_a_tiny_overpotential_keeps_its_digits():
    # To first order i = i0 (a_a + a_c) x, here 3e-13 of the thermal volts.
    current = butler_volmer_a_m2(1e-13 * THERMAL_V, 1.0, 2.0, 1.0, 298.15)

    assert current == pytest.approx(3e-13, rel=1e-12)


@given(ratios, exchanges, transfers, transfers, kelvins)
def test_the_current_of_an_overpotential_is_the_one_asked_for(
    ratio, exchange, anodic, cathodic, kelvin
):
    current = ratio * exchange

    volts = butler_volmer_overpotential_v(current, exchange, anodic, cathodic, kelvin)

    back = butler_volmer_a_m2(volts, exchange, anodic, cathodic, kelvin)
    # An exponent of up to 28 turns a relative error of 1e-16 into a few of 1e-15.
    assert back == pytest.approx(current, rel=1e-12)


@given(
    st.floats(-12.0, 1.4).map(lambda decade: 10.0**decade),
    st.sampled_from([-1.0, 1.0]),
    exchanges,
    transfers,
    transfers,
)
def test_the_overpotential_of_a_current_is_the_one_it_came_from(
    size, sign, exchange, anodic, cathodic
):
    volts = sign * size * THERMAL_V / max(anodic, cathodic)

    current = butler_volmer_a_m2(volts, exchange, anodic, cathodic, 298.15)

    back = butler_volmer_overpotential_v(current, exchange, anodic, cathodic, 298.15)
    assert back == pytest.approx(volts, rel=1e-11)


@given(ratios, transfers, transfers)
def test_exchanging_the_directions_changes_only_the_sign(ratio, one, other):
    forth = butler_volmer_overpotential_v(ratio, 1.0, one, other, 298.15)
    back = butler_volmer_overpotential_v(-ratio, 1.0, other, one, 298.15)

    assert forth == -back


@given(transfers, transfers)
def test_more_current_always_needs_more(anodic, cathodic):
    currents = np.concatenate((-np.logspace(12, -12, 60), [0.0], np.logspace(-12, 12, 60)))

    volts = butler_volmer_overpotential_v(currents, 1.0, anodic, cathodic, 318.15)

    assert (np.diff(volts) > 0.0).all()


def test_equal_and_nearly_equal_coefficients_agree():
    currents = np.array([-1e9, -3.0, 1e-9, 2.0, 1e12])

    closed = butler_volmer_overpotential_v(currents, 1.0, 0.5, 0.5, 298.15)
    solved = butler_volmer_overpotential_v(currents, 1.0, 0.5 + 1e-13, 0.5, 298.15)

    np.testing.assert_allclose(solved, closed, rtol=1e-11)


def test_far_out_it_is_tafels_line():
    # 10^6 i0 at a coefficient of 0.5: ln(10^6) R T / 0.5 F, the reverse reaction long gone.
    volts = butler_volmer_overpotential_v(-1e6, 1.0, 1.5, 0.5, 298.15)

    assert volts == pytest.approx(-np.log(1e6) * THERMAL_V / 0.5, rel=1e-12)


@pytest.mark.parametrize("anodic", [0.5, 1.5])
def test_a_missing_current_leaves_its_neighbours_alone(anodic):
    currents = np.array([-300.0, np.nan, 40.0])

    volts = butler_volmer_overpotential_v(currents, 50.0, anodic, 0.5, 318.15)

    assert np.isnan(volts).tolist() == [False, True, False]
    for place in (0, 2):
        alone = butler_volmer_overpotential_v(currents[place], 50.0, anodic, 0.5, 318.15)
        assert volts[place] == alone


@pytest.mark.parametrize("place", range(5))
def test_any_missing_input_gives_no_answer(place):
    inputs = [0.1, 50.0, 1.5, 0.5, 318.15]
    inputs[place] = np.nan

    for function in (butler_volmer_a_m2, butler_volmer_overpotential_v, charge_transfer_ohm_m2):
        assert np.isnan(function(*inputs))


def test_shapes_broadcast():
    volts = butler_volmer_overpotential_v(
        np.array([[-100.0], [200.0]]), 50.0, np.array([0.5, 1.0, 1.5]), 0.5, 318.15
    )

    assert volts.shape == (2, 3)
    assert butler_volmer_a_m2(volts, 50.0, [0.5, 1.0, 1.5], 0.5, 318.15) == pytest.approx(
        np.broadcast_to([[-100.0], [200.0]], (2, 3))
    )


def test_a_current_beyond_any_float_is_refused_without_a_warning():
    with pytest.raises(OutOfRange, match="current_a_m2: found inf"):
        butler_volmer_a_m2([0.1, 1e3], 1.0, 1.0, 1.0, 298.15)
    with pytest.raises(OutOfRange, match="current over exchange"):
        butler_volmer_overpotential_v(1e300, 1e-300, 1.0, 1.0, 298.15)


@pytest.mark.parametrize(
    ("place", "value", "quantity"),
    [
        (0, np.inf, "overpotential_v"),
        (1, 0.0, "exchange_a_m2"),
        (2, -0.5, "anodic_transfer"),
        (3, 0.0, "cathodic_transfer"),
        (4, -1.0, "temperature_k"),
    ],
)
def test_an_impossible_input_is_named(place, value, quantity):
    inputs = [0.1, 50.0, 1.5, 0.5, 318.15]
    inputs[place] = value

    with pytest.raises(OutOfRange, match=quantity):
        butler_volmer_a_m2(*inputs)


@given(st.floats(-0.3, 0.3), transfers, transfers)
def test_the_back_reaction_is_what_tafel_leaves_out(volts, anodic, cathodic):
    net = butler_volmer_a_m2(volts, 1.0, anodic, cathodic, 298.15)
    driven = np.exp((anodic if volts >= 0 else cathodic) * abs(volts) / THERMAL_V)

    share = back_reaction_share(volts, anodic, cathodic, 298.15)

    assert driven * (1.0 - share) == pytest.approx(abs(net), rel=1e-9, abs=1e-12)


@pytest.mark.parametrize("volts", [-0.2, -0.01, 0.0, 0.03, 0.1])
def test_the_resistance_is_the_slope_of_the_curve(volts):
    step = 1e-6
    ends = butler_volmer_a_m2([volts - step, volts + step], 50.0, 1.5, 0.5, 318.15)

    resistance = charge_transfer_ohm_m2(volts, 50.0, 1.5, 0.5, 318.15)

    assert resistance == pytest.approx(2 * step / np.diff(ends)[0], rel=1e-7)
