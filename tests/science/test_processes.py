"""Every process a plant file may name is known, with values that stand in."""

import math

import pytest

from server.science.errors import OutOfRange, ScienceError, UnknownName
from server.science.faraday import specific_energy_from_volts_j_kg
from server.science.processes import PROCESSES, process

OF_THE_PLANT_FILE = {
    "copper electrowinning": ("Cu", 2),
    "copper electrorefining": ("Cu", 2),
    "zinc electrowinning": ("Zn", 2),
    "nickel electrowinning": ("Ni", 2),
    "nickel electrorefining": ("Ni", 2),
    "cobalt electrowinning": ("Co", 2),
    "manganese electrowinning": ("Mn", 2),
    "cadmium electrowinning": ("Cd", 2),
    "lead electrorefining": ("Pb", 2),
    "tin electrorefining": ("Sn", 2),
    "silver electrorefining": ("Ag", 1),
    "gold electrorefining": ("Au", 3),
    "aluminium electrolysis": ("Al", 3),
}


def test_the_processes_are_those_of_the_plant_file():
    known = {name: (p.metal.symbol, p.metal.electrons) for name, p in PROCESSES.items()}

    assert known == OF_THE_PLANT_FILE


@pytest.mark.parametrize("known", PROCESSES.values(), ids=PROCESSES)
def test_what_is_usual_is_in_order(known):
    low_volts, high_volts = known.typical_volts
    low, high = known.efficiency_band

    assert 0 < low_volts < high_volts < 6
    assert 0.5 < low < known.typical_efficiency < high < 1
    assert known.typical_efficiency == pytest.approx((low + high) / 2)
    assert 0 < known.resistive_share < 1
    assert known.resistive_share + known.resistive_share_half_width <= 1.1
    assert known.resistive_share > known.resistive_share_half_width
    assert known.crop_days > 0


@pytest.mark.parametrize("known", PROCESSES.values(), ids=PROCESSES)
def test_refining_alone_has_no_reversible_voltage(known):
    assert known.has_reversible_voltage == ("refining" not in known.name)
    assert ("refining" in known.name) == (known.kind == "electrorefining")


def test_a_name_is_found_whatever_its_capitals_and_blanks():
    assert process(" Copper  Electrowinning") is PROCESSES["copper electrowinning"]


def test_a_slip_of_the_pen_is_answered_with_the_right_name():
    with pytest.raises(UnknownName, match="near it: copper electrowinning"):
        process("copper electrowining")


def test_other_takes_its_metal_and_knows_nothing_usual():
    chromium = process("other", symbol="Cr", electrons=3)

    assert (chromium.metal.symbol, chromium.metal.electrons) == ("Cr", 3)
    assert chromium.kind == "other"
    assert math.isnan(chromium.typical_efficiency)
    assert all(math.isnan(volts) for volts in chromium.typical_volts)
    assert not chromium.has_reversible_voltage


@pytest.mark.parametrize(
    ("symbol", "electrons", "quantity"), [(None, 3, "metal"), ("Cr", None, "electrons")]
)
def test_other_without_its_metal_is_refused(symbol, electrons, quantity):
    with pytest.raises(ScienceError, match=quantity):
        process("other", symbol=symbol, electrons=electrons)


def test_other_with_an_impossible_valency_is_refused():
    with pytest.raises(OutOfRange, match="electrons"):
        process("other", symbol="Cr", electrons=0)


def test_a_named_process_may_repeat_its_metal_but_not_change_it():
    assert process("gold electrorefining", symbol="Au", electrons=3).metal.electrons == 3
    with pytest.raises(ScienceError, match="electrons"):
        process("gold electrorefining", electrons=1)
    with pytest.raises(ScienceError, match="metal"):
        process("gold electrorefining", symbol="Ag")


@pytest.mark.parametrize("known", PROCESSES.values(), ids=PROCESSES)
def test_usual_volts_and_efficiency_give_a_believable_energy(known):
    volts = sum(known.typical_volts) / 2

    kwh_t = specific_energy_from_volts_j_kg(volts, known.typical_efficiency, known.metal) / 3600

    assert 100 < kwh_t < 16_000
