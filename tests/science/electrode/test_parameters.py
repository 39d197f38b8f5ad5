"""Parameters of known reactions: within their own limits, marked, and of a believable size."""

import pytest

from server.science.electrode.parameters import (
    COPPER_EXCHANGE_REPORTED_A_M2,
    COPPER_FOR_TEACHING,
    COPPER_IN_SULFATE,
    HYDROGEN_EXCHANGE_LOG10_A_CM2,
    HYDROGEN_ON,
    OXYGEN_ON_COATED_TITANIUM,
    OXYGEN_ON_LEAD_CALCIUM,
    OXYGEN_ON_LEAD_SILVER,
    ZINC_IN_SULFATE,
)
from server.science.electrode.tafel import tafel_slope_v

REACTIONS = [COPPER_IN_SULFATE, COPPER_FOR_TEACHING, ZINC_IN_SULFATE, *HYDROGEN_ON.values()]
ANODES = [OXYGEN_ON_LEAD_CALCIUM, OXYGEN_ON_LEAD_SILVER, OXYGEN_ON_COATED_TITANIUM]


@pytest.mark.parametrize("known", REACTIONS, ids=lambda known: known.name)
def test_a_value_lies_within_its_limits(known):
    assert 0.0 < known.low_a_m2 < known.exchange_a_m2 < known.high_a_m2
    assert known.source


@pytest.mark.parametrize("known", ANODES, ids=lambda known: known.name)
def test_a_slope_lies_in_the_middle_of_its_limits(known):
    assert known.slope_v == pytest.approx((known.low_v + known.high_v) / 2)
    assert known.source


def test_what_was_recalled_is_not_passed_off_as_looked_up():
    looked_up = {known.name for known in [*REACTIONS, *ANODES] if known.status == "looked up"}

    assert looked_up == {
        COPPER_FOR_TEACHING.name,
        OXYGEN_ON_LEAD_CALCIUM.name,
        OXYGEN_ON_LEAD_SILVER.name,
    }


@pytest.mark.parametrize("known", [COPPER_IN_SULFATE, ZINC_IN_SULFATE])
def test_the_coefficients_of_a_two_electron_metal_add_up_to_two(known):
    assert known.anodic_transfer + known.cathodic_transfer == 2.0


def test_square_centimetres_are_turned_into_square_metres():
    # 10^-7 A/cm2 is 10^-3 A/m2.
    assert HYDROGEN_ON["Cu"].exchange_a_m2 == pytest.approx(1e-3)
    assert HYDROGEN_ON.keys() == HYDROGEN_EXCHANGE_LOG10_A_CM2.keys()


def test_hydrogen_costs_about_a_hundred_and_twenty_millivolts_a_decade():
    slope_v = tafel_slope_v(HYDROGEN_ON["Zn"].cathodic_transfer, 298.15)

    assert slope_v == pytest.approx(0.12, abs=0.005)


def test_reports_on_copper_lie_orders_of_magnitude_apart():
    lowest = min(low for low, _ in COPPER_EXCHANGE_REPORTED_A_M2.values())

    assert COPPER_IN_SULFATE.low_a_m2 / lowest > 10
