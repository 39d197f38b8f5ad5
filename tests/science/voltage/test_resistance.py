"""Differential resistance from the terms, the usual one, and two opinions weighed together."""

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.science.errors import OutOfRange
from server.science.processes import PROCESSES, process
from server.science.uncertainty.propagation import standard_from_limit
from server.science.voltage.cells import CELL_MODELS, cell_model
from server.science.voltage.resistance import (
    differential_resistance,
    resistive_share,
    shrunk_resistance,
    typical_resistance,
)
from server.science.voltage.terms import cell_terms

COPPER = cell_model("copper electrowinning")
AT = (300.0, 318.15, 40.0, 180.0, 0.040)


def usual(model):
    """The usual conditions of a model, in the order of the terms' inputs."""
    at = model.usual
    return (at.current_density_a_m2, at.temperature_k, at.metal_g_l, at.acid_g_l, at.gap_m)


def test_one_ampere_more_costs_the_resistance():
    more = (300.0 + 1.0 / 100.0, *AT[1:])

    found = differential_resistance(COPPER, 100.0, *AT)

    rise = cell_terms(COPPER, *more).total_v - cell_terms(COPPER, *AT).total_v
    assert found.ohm == pytest.approx(rise, rel=1e-4)


def test_twice_the_area_halves_resistance_and_doubt():
    one, two = (differential_resistance(COPPER, area, *AT) for area in (50.0, 100.0))

    assert one.ohm == pytest.approx(2.0 * two.ohm)
    assert one.standard_uncertainty_ohm == pytest.approx(2.0 * two.standard_uncertainty_ohm)


def test_a_doubted_gap_makes_the_resistance_less_sure():
    before = differential_resistance(COPPER, 100.0, *AT)
    after = differential_resistance(COPPER, 100.0, *AT, measured_u={"gap_m": 0.010})

    # Ten millimetres of a gap of forty are a quarter of the electrolyte's drop.
    quarter = cell_terms(COPPER, *AT).electrolyte_v / 4.0 / 300.0 / 100.0
    assert after.standard_uncertainty_ohm == pytest.approx(
        math.hypot(float(before.standard_uncertainty_ohm), float(quarter)), rel=1e-6
    )


def test_the_doubt_of_the_bath_is_in_the_resistance():
    found = differential_resistance(COPPER, 100.0, *AT)

    # The correlation is doubted by a tenth, which moves the electrolyte's share by as much.
    least = 0.10 * cell_terms(COPPER, *AT).electrolyte_v / 300.0 / 100.0
    assert found.standard_uncertainty_ohm > least


@pytest.mark.parametrize("name", CELL_MODELS)
def test_the_share_that_follows_the_current_is_the_one_the_process_states(name):
    model = CELL_MODELS[name]
    stated = PROCESSES[model.process]

    share = resistive_share(model, *usual(model))

    assert abs(share - stated.resistive_share) < stated.resistive_share_half_width


def test_share_and_resistance_are_one_matter():
    found = differential_resistance(COPPER, 100.0, *AT)

    volts = cell_terms(COPPER, *AT).total_v

    assert resistive_share(COPPER, *AT) == pytest.approx(found.ohm * 30e3 / volts)


def test_the_usual_resistance_by_hand():
    # A fifth of 2.0 V over 30 kA; half-width 0.10 of it.
    found = typical_resistance(process("copper electrowinning"), 2.0, [30e3, np.nan])

    assert found.ohm[0] == pytest.approx(0.20 * 2.0 / 30e3)
    assert found.standard_uncertainty_ohm[0] == pytest.approx(
        standard_from_limit(0.10) * 2.0 / 30e3
    )
    assert np.isnan(found.ohm[1])


def test_two_opinions_of_equal_weight_meet_in_the_middle():
    found = shrunk_resistance(16e-6, 2e-6, 12e-6, 2e-6)

    assert found.ohm == pytest.approx(14e-6)
    assert found.standard_uncertainty_ohm == pytest.approx(2e-6 / math.sqrt(2))


def test_without_readings_the_prior_stands():
    found = shrunk_resistance([np.nan, 15e-6], [np.nan, 1e-9], 13e-6, 4e-6)

    assert found.ohm.tolist() == pytest.approx([13e-6, 15e-6], rel=1e-6)
    assert found.standard_uncertainty_ohm.tolist() == pytest.approx([4e-6, 1e-9], rel=1e-6)


def test_without_a_prior_there_is_nothing_to_shrink_to():
    assert np.isnan(shrunk_resistance(15e-6, 1e-6, np.nan, 4e-6).ohm)


@given(
    own=st.floats(1e-6, 1e-3),
    own_u=st.floats(1e-8, 1e-3),
    prior=st.floats(1e-6, 1e-3),
    prior_u=st.floats(1e-8, 1e-3),
)
def test_the_blend_lies_between_and_is_surer_than_either(own, own_u, prior, prior_u):
    found = shrunk_resistance(own, own_u, prior, prior_u)
    back = shrunk_resistance(prior, prior_u, own, own_u)

    slack = 1e-12
    assert min(own, prior) - slack <= found.ohm <= max(own, prior) + slack
    assert found.standard_uncertainty_ohm <= min(own_u, prior_u) * (1 + 1e-9)
    assert found.ohm == pytest.approx(float(back.ohm), rel=1e-6)


@pytest.mark.parametrize(
    ("call", "quantity"),
    [
        (lambda: differential_resistance(COPPER, 0.0, *AT), "cathode_area_m2"),
        (lambda: shrunk_resistance(1e-5, 0.0, 1e-5, 1e-6), "standard_uncertainty_ohm"),
        (lambda: shrunk_resistance(1e-5, 1e-6, 1e-5, 0.0), "prior_standard_uncertainty_ohm"),
        (lambda: typical_resistance(process("zinc electrowinning"), 3.4, 0.0), "amps"),
    ],
)
def test_an_impossible_quantity_is_named(call, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        call()
