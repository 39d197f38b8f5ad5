"""The doubt of the terms and of their sum, with what the terms share."""

import math
from dataclasses import replace

import numpy as np
import pytest

from server.science.electrolyte.conductivity import CONDUCTIVITIES, plant_conductivity
from server.science.errors import OutOfRange, UnknownName
from server.science.voltage.cells import CELL_MODELS, cell_model
from server.science.voltage.doubt import cell_terms_with_doubt
from server.science.voltage.models import stated_values, with_stated
from server.science.voltage.overpotentials import StatedValue

COPPER = cell_model("copper electrowinning")
AT = (300.0, 318.15, 40.0, 180.0, 0.040)
EXACT_BATH = plant_conductivity(60.0, 318.15, u_share=0.0)


def sure(model):
    """The same model with every value known exactly."""
    for name, stated in stated_values(model):
        model = with_stated(model, name, replace(stated, standard_uncertainty=0.0))
    return model


def test_a_sure_model_and_bath_leave_the_doubt_of_what_was_measured():
    found = cell_terms_with_doubt(
        sure(COPPER), *AT, EXACT_BATH, measured_u={"gap_m": 0.004, "acid_g_l": 0.0}
    )

    # 300 A/m2 over 55.557 S/m: 5.4 V/m, and 4 mm of it.
    by_hand = 300.0 / (60.0 * 0.95**1.5) * 0.004
    assert found.total_standard_uncertainty_v == pytest.approx(by_hand)
    assert found.standard_uncertainties.electrolyte_v == pytest.approx(by_hand)
    assert found.standard_uncertainties.anode_v == 0.0
    assert list(found.parts) == ["gap_m", "acid_g_l"]


def test_terms_that_share_an_input_do_not_average_it_out():
    found = cell_terms_with_doubt(
        sure(COPPER), *AT, EXACT_BATH, measured_u={"current_density_a_m2": 3.0}
    )

    each = [float(volts) for volts in found.standard_uncertainties.stated().values()]
    # All of them move the same way with the current: their doubts add up straight.
    assert found.total_standard_uncertainty_v == pytest.approx(sum(each))
    assert found.total_standard_uncertainty_v > math.hypot(*each)


def test_acid_moves_two_terms_against_each_other():
    bath = replace(CONDUCTIVITIES["Cu"], u_share=0.0)
    found = cell_terms_with_doubt(sure(COPPER), *AT, bath, measured_u={"acid_g_l": 5.0})
    doubt = found.standard_uncertainties
    parts = {name: float(part) for name, part in found.parts.items()}

    # Five grams conduct better by more volts than they cost in the reversible voltage.
    assert parts["acid_g_l"] == pytest.approx(float(doubt.reversible_v - doubt.electrolyte_v))
    assert parts["acid_g_l"] < 0.0


def test_the_doubt_of_the_bath_is_that_of_the_correlation():
    bath = plant_conductivity(60.0, 318.15, u_share=0.05)

    found = cell_terms_with_doubt(sure(COPPER), *AT, bath)

    assert found.total_standard_uncertainty_v == pytest.approx(
        0.05 * float(found.terms.electrolyte_v), rel=0.01
    )


def test_a_value_that_the_plant_measured_is_surer():
    own = StatedValue(0.3e-3, 0.03e-3, "plant", "millivolts over hangers")

    before = cell_terms_with_doubt(COPPER, *AT)
    after = cell_terms_with_doubt(with_stated(COPPER, "contact_ohm_m2", own), *AT)

    assert after.standard_uncertainties.contacts_v == pytest.approx(300.0 * 0.03e-3)
    assert after.total_standard_uncertainty_v < before.total_standard_uncertainty_v


def test_far_from_usual_temperatures_the_electrodes_are_less_sure():
    usual, far = cell_terms_with_doubt(
        COPPER, 300.0, [318.15, 333.15], *AT[2:]
    ).standard_uncertainties.cathode_v

    # Fifteen kelvin at 2 % of 65 mV, beside the doubt of the band: 19.5 and 20.2 mV.
    assert usual == pytest.approx(0.0202, abs=0.0001)
    assert far == pytest.approx(math.hypot(0.0195, 0.0202), abs=0.001)


@pytest.mark.parametrize("model", CELL_MODELS.values(), ids=CELL_MODELS)
def test_the_parts_make_the_whole(model):
    at = model.usual
    found = cell_terms_with_doubt(
        model, at.current_density_a_m2, at.temperature_k, at.metal_g_l, at.acid_g_l, at.gap_m
    )

    assert math.hypot(*found.parts.values()) == pytest.approx(
        float(found.total_standard_uncertainty_v)
    )


def test_drawing_the_values_at_random_gives_the_same_doubt():
    # Anode and contacts are by far the largest doubts and enter straight; rectangular bands.
    doubted = ("anode.point.overpotential_v", "contact_ohm_m2")
    model = sure(COPPER)
    for name in doubted:
        model = with_stated(model, name, dict(stated_values(COPPER))[name])
    found = cell_terms_with_doubt(model, *AT, EXACT_BATH)
    draws = np.random.default_rng(seed=20250301)

    sums = (
        found.terms.total_v
        + draws.uniform(-0.125, 0.125, 400_000)
        + draws.uniform(-0.125, 0.125, 400_000)
    )

    assert found.total_standard_uncertainty_v == pytest.approx(sums.std(), rel=0.005)


def test_a_missing_input_takes_its_doubt_along_and_leaves_the_neighbour():
    found = cell_terms_with_doubt(
        COPPER, [300.0, np.nan, 300.0], *AT[1:], measured_u={"gap_m": [0.001, 0.001, np.nan]}
    )

    assert np.isnan(found.total_standard_uncertainty_v).tolist() == [False, True, True]


def test_a_doubt_of_nothing_that_is_measured_is_refused():
    with pytest.raises(UnknownName, match="gap_m"):
        cell_terms_with_doubt(COPPER, *AT, measured_u={"gap": 0.001})


def test_a_negative_doubt_is_refused():
    with pytest.raises(OutOfRange, match="gap_m"):
        cell_terms_with_doubt(COPPER, *AT, measured_u={"gap_m": -0.001})
