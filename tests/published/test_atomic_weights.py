"""IUPAC standard atomic weights (CIAAW), and their abridged values.

Looked up: periodictable 2.1.0, whose weights agree with a second library within 1e-7. The abridged
values, cut to five figures (IUPAC 2021), are from memory; they are held to their own last digit.
Densities: looked up in periodictable; tables differ by some tenths of a per cent.
"""

import periodictable
import pytest

from server.science.constants import (
    HYDROGEN_KG_MOL,
    METALS,
    OXYGEN_KG_MOL,
    SULFUR_KG_MOL,
)

LOOKED_UP = {
    "Cu": 63.546,
    "Zn": 65.38,
    "Ni": 58.6934,
    "Co": 58.933194,
    "Ag": 107.8682,
    "Au": 196.96657,
    "Pb": 207.2,
    "Sn": 118.71,
    "Mn": 54.938043,
    "Cd": 112.414,
    "Cr": 51.9961,
    "Fe": 55.845,
    "In": 114.818,
    "Ga": 69.723,
    "Al": 26.9815384,
    "Mg": 24.305,
    "Bi": 208.9804,
    "Sb": 121.76,
    "Te": 127.6,
}
ABRIDGED_FROM_MEMORY = {
    "Cu": (63.546, 0.003),
    "Zn": (65.38, 0.02),
    "Ni": (58.693, 0.001),
    "Co": (58.933, 0.001),
    "Ag": (107.87, 0.01),
    "Au": (196.97, 0.01),
    "Pb": (207.2, 1.1),
    "Sn": (118.71, 0.01),
    "Mn": (54.938, 0.001),
    "Cd": (112.41, 0.01),
    "Al": (26.982, 0.001),
}


def test_every_metal_has_its_weight_here():
    assert METALS.keys() == LOOKED_UP.keys()


@pytest.mark.parametrize(("symbol", "g_mol"), LOOKED_UP.items())
def test_molar_masses_are_the_standard_weights(symbol, g_mol):
    assert METALS[symbol].molar_mass_kg_mol * 1000 == pytest.approx(g_mol, rel=1e-12)


@pytest.mark.parametrize("symbol", LOOKED_UP)
def test_molar_masses_are_those_of_the_library(symbol):
    library = getattr(periodictable, symbol).mass

    assert METALS[symbol].molar_mass_kg_mol * 1000 == pytest.approx(library, rel=1e-7)


@pytest.mark.parametrize(("symbol", "abridged"), ABRIDGED_FROM_MEMORY.items())
def test_molar_masses_agree_with_the_abridged_ones(symbol, abridged):
    g_mol, uncertainty = abridged

    assert METALS[symbol].molar_mass_kg_mol * 1000 == pytest.approx(g_mol, abs=uncertainty)


@pytest.mark.parametrize(
    ("kg_mol", "element"),
    [(HYDROGEN_KG_MOL, "H"), (OXYGEN_KG_MOL, "O"), (SULFUR_KG_MOL, "S")],
)
def test_weights_of_the_non_metals(kg_mol, element):
    assert kg_mol * 1000 == pytest.approx(getattr(periodictable, element).mass, rel=1e-5)


@pytest.mark.parametrize("symbol", LOOKED_UP)
def test_densities_lie_near_those_of_the_library(symbol):
    library = getattr(periodictable, symbol).density * 1000

    assert METALS[symbol].density_kg_m3 == pytest.approx(library, rel=0.006)
