"""Rate and supply together: the limit, the two parts, there and back."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.science.constants import FARADAY_C_MOL, GAS_CONSTANT_J_MOL_K
from server.science.electrode.mixed import (
    cathode_current_a_m2,
    cathode_overpotential_v,
    concentration_overpotential_v,
    dissolution_overpotential_v,
    kinetic_current_a_m2,
    mixed_current_a_m2,
)
from server.science.electrode.rates import butler_volmer_a_m2, butler_volmer_overpotential_v
from server.science.errors import OutOfRange

THERMAL_V = GAS_CONSTANT_J_MOL_K * 318.15 / FARADAY_C_MOL
COPPER = (50.0, 1.5, 0.5, 318.15)

decades = st.floats(-6.0, 6.0).map(lambda decade: 10.0**decade)
transfers = st.floats(0.05, 4.0)
# Nearer the limit the rest, 1 - i/i_L, has too few digits left to come back.
shares = st.floats(1e-9, 0.999)


def test_two_equal_resistances_halve_the_current():
    assert mixed_current_a_m2(400.0, 400.0) == pytest.approx(200.0)


def test_the_smaller_of_two_very_different_ones_rules():
    assert mixed_current_a_m2(1e-300, 1e300) == 1e-300
    assert mixed_current_a_m2(1e300, 400.0) == 400.0
    assert mixed_current_a_m2(0.0, 400.0) == 0.0


@given(decades, decades)
def test_the_kinetic_current_is_the_one_it_came_from(kinetic, limiting):
    mixed = mixed_current_a_m2(kinetic, limiting)

    assert mixed < min(kinetic, limiting)
    # The difference from the limit loses as many digits as the kinetic current exceeds it.
    rel = 1e-14 * max(1.0, kinetic / limiting) + 1e-14
    assert kinetic_current_a_m2(mixed, limiting) == pytest.approx(kinetic, rel=rel)


def test_concentration_costs_by_hand():
    # ln 2 = 0.693147 and ln 1.5 = 0.405465 of R T / 2 F.
    assert concentration_overpotential_v(0.5, 2, 318.15) == pytest.approx(0.693147 * THERMAL_V / 2)
    assert dissolution_overpotential_v(0.5, 2, 318.15) == pytest.approx(0.405465 * THERMAL_V / 2)


@pytest.mark.parametrize("share", [1.0, 1.2])
def test_at_the_limit_and_above_there_is_no_overpotential(share):
    with pytest.raises(OutOfRange, match=r"share_of_limit.*below 1"):
        concentration_overpotential_v([0.4, share], 2, 318.15)
    with pytest.raises(OutOfRange, match=r"share_of_limit.*below 1"):
        cathode_overpotential_v(share * 800.0, *COPPER, 800.0)
    with pytest.raises(OutOfRange, match=r"share_of_limit.*below 1"):
        kinetic_current_a_m2(share * 800.0, 800.0)


def test_a_dissolving_anode_has_no_limit():
    assert dissolution_overpotential_v(3.0, 2, 318.15) > 0.0


@given(shares, decades, transfers, transfers)
def test_the_current_of_an_overpotential_is_the_one_asked_for(share, exchange, anodic, cathodic):
    kinetics = (exchange, anodic, cathodic, 318.15)

    volts = cathode_overpotential_v(share * 800.0, *kinetics, 800.0)

    back = cathode_current_a_m2(volts, *kinetics, 800.0)
    assert back == pytest.approx(share * 800.0, rel=1e-11)


@given(
    st.floats(1e-6, 0.2),
    decades,
    transfers,
    transfers,
    st.floats(-3.0, 6.0).map(lambda decade: 10.0**decade),
)
def test_the_overpotential_of_a_current_is_the_one_it_came_from(
    volts, exchange, anodic, cathodic, supply
):
    kinetics = (exchange, anodic, cathodic, 318.15)
    limit = -supply * butler_volmer_a_m2(-volts, *kinetics)

    current = cathode_current_a_m2(volts, *kinetics, limit)

    # At a thousandth of the supply the current is told from its limit in the third digit, so
    # three of sixteen digits are lost; three more where the overpotential is small.
    back = cathode_overpotential_v(current, *kinetics, limit)
    assert back == pytest.approx(volts, rel=1e-9)


@given(transfers, transfers)
def test_more_current_always_needs_more(anodic, cathodic):
    currents = np.linspace(0.0, 799.0, 200)

    volts = cathode_overpotential_v(currents, 50.0, anodic, cathodic, 318.15, 800.0)

    assert volts[0] == 0.0
    assert (np.diff(volts) > 0.0).all()


def test_a_film_out_of_reach_leaves_butler_volmer():
    alone = -butler_volmer_overpotential_v(-300.0, *COPPER)

    assert cathode_overpotential_v(300.0, *COPPER, 1e15) == pytest.approx(alone)


def test_a_fast_reaction_leaves_nernst():
    # The transfer coefficients add up to the two electrons, so what is left is Nernst's alone.
    nernst = concentration_overpotential_v(0.375, 2, 318.15)

    found = cathode_overpotential_v(300.0, 1e12, 1.5, 0.5, 318.15, 800.0)

    assert found == pytest.approx(nernst, rel=1e-8)


def test_driven_hard_it_is_koutecky_and_levich():
    kinetic = 50.0 * np.exp(0.5 * 0.3 / THERMAL_V)

    assert cathode_current_a_m2(0.3, *COPPER, 800.0) == pytest.approx(
        mixed_current_a_m2(kinetic, 800.0), rel=1e-8
    )


def test_driven_beyond_measure_it_runs_at_the_limit():
    assert cathode_current_a_m2(1e6, *COPPER, 800.0) == pytest.approx(800.0)
    assert cathode_current_a_m2(0.0, *COPPER, 800.0) == 0.0


def test_a_missing_value_leaves_its_neighbours_alone():
    volts = cathode_overpotential_v([300.0, np.nan], *COPPER, [800.0, 800.0])

    assert np.isnan(volts).tolist() == [False, True]
    assert volts[0] == cathode_overpotential_v(300.0, *COPPER, 800.0)


@pytest.mark.parametrize("place", range(6))
def test_any_missing_input_gives_no_answer(place):
    for function, first in ((cathode_overpotential_v, 300.0), (cathode_current_a_m2, 0.1)):
        inputs = [first, *COPPER, 800.0]
        inputs[place] = np.nan
        assert np.isnan(function(*inputs))


def test_a_negative_current_is_refused():
    with pytest.raises(OutOfRange, match="current_a_m2"):
        cathode_overpotential_v(-300.0, *COPPER, 800.0)
    with pytest.raises(OutOfRange, match="overpotential_v"):
        cathode_current_a_m2(-0.1, *COPPER, 800.0)
