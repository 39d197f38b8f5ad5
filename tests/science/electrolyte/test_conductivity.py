import dataclasses
import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.science.electrolyte.conductivity import (
    CONDUCTIVITIES,
    Conductivity,
    calibrated,
    conductivity_s_m,
    conductivity_with_doubt,
    plant_conductivity,
)
from server.science.electrolyte.sulfuric_acid import acid_conductivity_s_m
from server.science.errors import OutOfRange, UnknownName
from server.science.ranges import outside

MODELS = [pytest.param(model, id=symbol) for symbol, model in CONDUCTIVITIES.items()]
COPPER, ZINC, NICKEL = (CONDUCTIVITIES[symbol] for symbol in ("Cu", "Zn", "Ni"))


def middle(model):
    """The bath in the middle of the model's ranges: metal, acid, temperature."""
    held = {known.quantity: (known.low + known.high) / 2 for known in model.ranges}
    return held["metal_g_l"], held["acid_g_l"], held["temperature_k"]


@pytest.mark.parametrize("model", MODELS)
def test_it_falls_with_metal_and_rises_with_acid_and_warmth(model):
    metal, acid, kelvin = middle(model)
    bath = conductivity_s_m(model, metal, acid, kelvin)

    assert conductivity_s_m(model, metal + 5.0, acid, kelvin) < bath
    assert conductivity_s_m(model, metal, acid + 5.0, kelvin) > bath
    assert conductivity_s_m(model, metal, acid, kelvin + 5.0) > bath


@pytest.mark.parametrize("symbol", ["Ni", "As", "Fe"])
def test_further_metals_lower_that_of_copper(symbol):
    bath = conductivity_s_m(COPPER, 45.0, 180.0, 333.15)

    assert conductivity_s_m(COPPER, 45.0, 180.0, 333.15, {symbol: 10.0}) < bath


@pytest.mark.parametrize("symbol", ["Mg", "Mn"])
def test_further_metals_lower_that_of_zinc(symbol):
    bath = conductivity_s_m(ZINC, 55.0, 170.0, 311.15)

    assert conductivity_s_m(ZINC, 55.0, 170.0, 311.15, {symbol: 10.0}) < bath


@pytest.mark.parametrize("model", [COPPER, ZINC])
def test_an_acid_bath_conducts_less_than_its_acid_alone(model):
    metal, acid, kelvin = middle(model)

    assert conductivity_s_m(model, metal, acid, kelvin) < acid_conductivity_s_m(acid, kelvin)


@pytest.mark.parametrize("model", MODELS)
def test_every_corner_of_the_ranges_has_a_sensible_value(model):
    corners = np.meshgrid(*[[known.low, known.high] for known in model.ranges])

    found = conductivity_s_m(model, *corners)

    assert (found > 5.0).all()
    assert (found < 100.0).all()


@pytest.mark.parametrize("model", MODELS)
def test_what_is_recalled_is_marked_and_doubted(model):
    assert model.status == "from memory"
    assert "from memory" in model.source
    assert model.u_share >= 0.10


def test_the_ranges_tell_when_a_bath_lies_outside():
    left = outside(COPPER.ranges, metal_g_l=40.0, acid_g_l=180.0, temperature_k=318.15)

    assert [known.quantity for known in left] == ["temperature_k"]


def test_the_doubt_is_a_share_of_the_value():
    value, doubt = conductivity_with_doubt(COPPER, 45.0, 180.0, 333.15)

    assert value == conductivity_s_m(COPPER, 45.0, 180.0, 333.15)
    assert doubt == pytest.approx(0.10 * value)


def test_further_metals_add_their_own_doubt():
    value, doubt = conductivity_with_doubt(COPPER, 45.0, 180.0, 333.15, {"Ni": 20.0, "As": 10.0})

    # By hand: terms of 7.7 and 1.5 S/m, half of each doubted.
    assert doubt == pytest.approx(math.hypot(0.10 * value, 3.85, 0.75))


def test_a_measured_value_holds_for_its_bath():
    own = plant_conductivity(62.0, 318.15, per_kelvin_share=0.01, u_share=0.015)

    value, doubt = conductivity_with_doubt(own, [0.0, 60.0], 185.0, [318.15, 328.15])

    assert value == pytest.approx([62.0, 62.0 * 1.10])
    assert doubt == pytest.approx(0.015 * value)
    assert own.status == "plant"
    assert outside(own.ranges, metal_g_l=500.0) == ()


def test_a_plant_enters_its_own_correlation():
    own = Conductivity(
        name="section 2",
        constant_s_m=20.0,
        per_metal_g_l=-0.4,
        per_acid_g_l=0.3,
        per_kelvin=0.5,
        reference_k=318.15,
        u_share=0.02,
        ranges=(),
        status="plant",
        source="laboratory, spring campaign",
    )

    # By hand: 20 - 16 + 54 + 1.
    assert conductivity_s_m(own, 40.0, 180.0, 320.15) == pytest.approx(59.0)


@given(
    measured=st.floats(20.0, 80.0),
    metal=st.floats(40.0, 60.0),
    acid=st.floats(165.0, 223.0),
    kelvin=st.floats(323.15, 343.15),
)
def test_a_scaled_correlation_passes_through_the_measurement(measured, metal, acid, kelvin):
    own = calibrated(COPPER, measured, metal, acid, kelvin)

    assert conductivity_s_m(own, metal, acid, kelvin) == pytest.approx(measured)


def test_a_scaled_correlation_keeps_its_relative_slopes():
    own = calibrated(COPPER, 60.0, 45.0, 180.0, 333.15, u_share=0.04)

    def ratio(model):
        return conductivity_s_m(model, 50.0, 200.0, 338.15, {"Ni": 10.0}) / conductivity_s_m(
            model, 45.0, 180.0, 333.15
        )

    assert ratio(own) == pytest.approx(ratio(COPPER))
    assert (own.status, own.u_share, own.ranges) == ("plant", 0.04, COPPER.ranges)


def test_missing_numbers_stay_missing_and_spare_their_neighbours():
    metal = [45.0, math.nan, 45.0, 45.0, 45.0]
    acid = [180.0, 180.0, math.nan, 180.0, 180.0]
    kelvin = [333.15, 333.15, 333.15, math.nan, 333.15]
    nickel = [0.0, 0.0, 0.0, 0.0, math.nan]

    value, doubt = conductivity_with_doubt(COPPER, metal, acid, kelvin, {"Ni": nickel})

    assert np.isnan(value).tolist() == [False, True, True, True, True]
    assert np.isnan(doubt).tolist() == [False, True, True, True, True]


def test_a_bath_beyond_the_correlations_reach_is_refused():
    with pytest.raises(OutOfRange, match="conductivity_s_m of acid zinc sulfate"):
        conductivity_s_m(ZINC, 150.0, 0.0, 303.15)


def test_a_further_metal_without_a_term_is_named():
    with pytest.raises(UnknownName, match="Bi"):
        conductivity_s_m(COPPER, 45.0, 180.0, 333.15, {"Bi": 0.5})


@pytest.mark.parametrize(
    ("quantity", "value"),
    [("constant_s_m", math.nan), ("per_kelvin", math.inf), ("reference_k", 0.0), ("u_share", -0.1)],
)
def test_a_correlation_that_is_none_is_refused(quantity, value):
    with pytest.raises(OutOfRange, match=quantity):
        dataclasses.replace(NICKEL, **{quantity: value})


def test_a_measured_value_of_zero_is_refused():
    with pytest.raises(OutOfRange, match="measured_s_m"):
        plant_conductivity(0.0, 318.15)
