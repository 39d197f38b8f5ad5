"""Industrial ranges that the values standing in for a plant must not leave.

Bands for plausibility, never for passing or failing arithmetic. Looked up: copper refining at 0.35
V and 96 % (Aalto homework), silver 1.5 to 2.8 V (Metals 10 (2020) 1596), lead 0.35 to 0.65 V
(encyclopaedia article), aluminium 4.0 to 4.5 V (public notes), copper crops 6 to 14 days (refinery
pages), up to 30 % of copper winning's energy lost (JOM 2024). From memory, the trade: the rest.
Resistive shares of copper and zinc: common practice, wide.
"""

import pytest

from server.science.processes import PROCESSES

VOLTS = {
    "copper electrowinning": (1.8, 2.2),
    "copper electrorefining": (0.25, 0.4),
    "nickel electrowinning": (3.2, 4.0),
    "cobalt electrowinning": (3.5, 5.0),
    "manganese electrowinning": (4.2, 5.2),
    "lead electrorefining": (0.35, 0.65),
    "silver electrorefining": (1.5, 2.8),
    "gold electrorefining": (0.5, 2.8),
    "aluminium electrolysis": (4.0, 4.5),
}
SHARES = {
    "copper electrowinning": (0.85, 0.95),
    "copper electrorefining": (0.92, 0.98),
    "nickel electrowinning": (0.92, 0.98),
    "cobalt electrowinning": (0.85, 0.95),
    "manganese electrowinning": (0.60, 0.70),
    "cadmium electrowinning": (0.85, 0.95),
    "tin electrorefining": (0.85, 0.95),
    "aluminium electrolysis": (0.90, 0.96),
}
CROP_DAYS = {"copper electrowinning": (4, 8), "copper electrorefining": (6, 14)}
RESISTIVE = {
    "copper electrowinning": 0.2,
    "copper electrorefining": 0.9,
    "zinc electrowinning": 0.25,
}


@pytest.mark.parametrize(("name", "band"), VOLTS.items())
def test_usual_volts_are_those_of_the_trade(name, band):
    assert PROCESSES[name].typical_volts == band


@pytest.mark.parametrize(("name", "band"), SHARES.items())
def test_usual_efficiency_lies_in_the_band_of_the_trade(name, band):
    assert PROCESSES[name].efficiency_band == band


@pytest.mark.parametrize(("name", "band"), CROP_DAYS.items())
def test_usual_crops_lie_in_the_band_of_the_trade(name, band):
    assert band[0] <= PROCESSES[name].crop_days <= band[1]


@pytest.mark.parametrize(("name", "share"), RESISTIVE.items())
def test_resistive_shares_are_those_of_common_practice(name, share):
    assert PROCESSES[name].resistive_share == share


def test_refining_is_not_given_the_voltage_of_winning():
    # A public page states 1.8 to 2.5 V for copper refining: that is winning, six times too much.
    assert PROCESSES["copper electrorefining"].typical_volts[1] < 0.5
