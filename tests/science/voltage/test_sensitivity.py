"""Derivatives of the terms: right against differences, and of the sign that plants know."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.science.voltage.cells import CELL_MODELS, cell_model
from server.science.voltage.sensitivity import sensitivities
from server.science.voltage.terms import cell_terms

ACID_CELLS = [
    cell_model(name)
    for name in ("copper electrowinning", "copper electrorefining", "zinc electrowinning")
]
INPUTS = ("current_density_a_m2", "temperature_k", "metal_g_l", "acid_g_l", "gap_m")
TERMS = ("reversible", "anode", "cathode", "electrolyte", "contacts")


def usual(model):
    """The usual conditions of a model by name."""
    return {name: getattr(model.usual, name) for name in INPUTS}


@pytest.mark.parametrize("model", CELL_MODELS.values(), ids=CELL_MODELS)
@pytest.mark.parametrize("limit", [None, 3.0])
def test_each_derivative_is_the_difference_of_terms(model, limit):
    at = usual(model)
    held = None if limit is None else limit * at["current_density_a_m2"]
    found = sensitivities(model, **at, limiting_a_m2=held)

    by_input = zip(
        INPUTS,
        (
            found.current_density_ohm_m2,
            found.temperature_v_k,
            found.metal_v_per_g_l,
            found.acid_v_per_g_l,
            found.gap_v_m,
        ),
        strict=True,
    )
    for name, slopes in by_input:
        step = 2e-4 * at[name]
        above, below = (
            cell_terms(model, **{**at, name: at[name] + moved}, limiting_a_m2=held)
            for moved in (step, -step)
        )
        for term in TERMS:
            rise = getattr(above, f"{term}_v") - getattr(below, f"{term}_v")
            expected = rise / (2 * step)
            assert getattr(slopes, term) == pytest.approx(expected, rel=1e-3, abs=1e-9), name
        assert slopes.total == pytest.approx((above.total_v - below.total_v) / (2 * step), rel=1e-3)


def test_by_hand_where_a_hand_can():
    # Contacts 0.175 V and electrolyte at 300 A/m2; a Tafel slope of 0.1 V: 0.1 / (ln 10 x 300).
    model = cell_model("copper electrowinning")
    terms = cell_terms(model, **usual(model))

    found = sensitivities(model, **usual(model))

    assert found.current_density_ohm_m2.contacts == pytest.approx(0.175 / 300.0)
    assert found.current_density_ohm_m2.electrolyte == pytest.approx(terms.electrolyte_v / 300.0)
    assert found.current_density_ohm_m2.anode == pytest.approx(0.1 / 2.302585093 / 300.0)
    assert found.current_density_ohm_m2.reversible == 0.0
    assert found.gap_v_m.total == pytest.approx(terms.electrolyte_v / 0.040)
    # R T / 2 F is 13.708 mV at 45 degC, and twice that for the acid.
    assert found.metal_v_per_g_l.reversible == pytest.approx(-13.708e-3 / 40.0, rel=1e-4)
    assert found.acid_v_per_g_l.reversible == pytest.approx(27.416e-3 / 180.0, rel=1e-4)


@given(
    amps_m2=st.floats(100.0, 700.0),
    temperature_k=st.floats(303.15, 333.15),
    metal_g_l=st.floats(30.0, 70.0),
    acid_g_l=st.floats(120.0, 220.0),
    gap_m=st.floats(0.02, 0.06),
)
@pytest.mark.parametrize("model", ACID_CELLS, ids=lambda model: model.title)
def test_signs_are_those_that_plants_know(
    model, amps_m2, temperature_k, metal_g_l, acid_g_l, gap_m
):
    found = sensitivities(model, amps_m2, temperature_k, metal_g_l, acid_g_l, gap_m)

    assert found.current_density_ohm_m2.total > 0.0
    assert found.gap_v_m.total > 0.0
    assert found.acid_v_per_g_l.electrolyte < 0.0 <= found.acid_v_per_g_l.reversible
    assert found.metal_v_per_g_l.electrolyte > 0.0 >= found.metal_v_per_g_l.reversible
    assert found.temperature_v_k.electrolyte < 0.0


@pytest.mark.parametrize("model", CELL_MODELS.values(), ids=CELL_MODELS)
def test_at_usual_conditions_the_voltage_falls_with_heat_and_with_acid(model):
    found = sensitivities(model, **usual(model))

    assert -0.025 < found.temperature_v_k.total < 0.0
    assert -0.025 < found.acid_v_per_g_l.total < 0.0


def test_near_its_limit_a_cathode_stiffens():
    model = cell_model("copper electrowinning")

    free = sensitivities(model, **usual(model)).current_density_ohm_m2.cathode
    held = sensitivities(model, **usual(model), limiting_a_m2=330.0).current_density_ohm_m2.cathode

    assert held > 3.0 * free


def test_shapes_broadcast_and_a_missing_number_stays_at_its_place():
    model = cell_model("zinc electrowinning")

    found = sensitivities(model, [500.0, np.nan], 311.15, 60.0, 170.0, [[0.03], [0.04], [0.05]])

    assert found.temperature_v_k.total.shape == (3, 2)
    assert found.current_density_ohm_m2.total.shape == (3, 2)
    assert np.isnan(found.current_density_ohm_m2.total).tolist() == [[False, True]] * 3
