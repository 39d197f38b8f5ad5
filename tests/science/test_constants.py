"""Metals are found by symbol or name, at the valency of their bath."""

import pytest

from server.science.constants import COPPER, GOLD, METALS, metal
from server.science.errors import OutOfRange, UnknownName


@pytest.mark.parametrize("asked", ["Cu", "cu", " CU ", "copper", "Copper"])
def test_a_metal_answers_to_symbol_and_name(asked):
    assert metal(asked) is COPPER


def test_the_valency_is_the_baths():
    assert metal("Au").electrons == 3
    assert metal("Au", electrons=1).electrons == 1
    assert metal("Au", electrons=1).molar_mass_kg_mol == GOLD.molar_mass_kg_mol


def test_an_unknown_metal_is_refused_with_a_near_one():
    with pytest.raises(UnknownName, match="copper"):
        metal("coper")


@pytest.mark.parametrize("electrons", [0, -1, 9, 1.5])
def test_impossible_valencies_are_refused(electrons):
    with pytest.raises(OutOfRange, match="electrons"):
        metal("Cu", electrons=electrons)


def test_symbols_are_chemical_symbols():
    assert all(symbol == known.symbol for symbol, known in METALS.items())
    assert all(1 <= known.electrons <= 4 for known in METALS.values())
    assert all(known.name == known.name.lower() for known in METALS.values())
