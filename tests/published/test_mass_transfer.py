"""Nernst's film, Levich's disc and free convection at given concentrations of cells.

Status of the figures: computed, in a library of reference values made apart from this program, from
the formulas; those marked "by hand" are computed here, the arithmetic written out. Diffusivities
and films are assumed, of the usual size. The current per gram of copper in air-sparged cells: a
summary of a report of the U.S. Bureau of Mines on a metallurgy page (looked up).
"""

import math

import pytest

from server.science.constants import COPPER, IRON, ZINC
from server.science.electrode.convection import grashof, natural_film_m, schmidt
from server.science.electrode.film import (
    film_limiting_a_m2,
    film_thickness_m,
    levich_film_m,
    levich_limiting_a_m2,
)
from server.science.units import mol_m3_from_g_l

THOUSAND_TURNS_RAD_S = 1000 * 2 * math.pi / 60


def test_the_limit_of_a_copper_refinery():
    mol_m3 = mol_m3_from_g_l(45.0, COPPER.molar_mass_kg_mol)

    assert film_limiting_a_m2(2, 7.0e-10, mol_m3, 0.20e-3) == pytest.approx(478.28, rel=1e-4)


def test_the_limit_of_a_zinc_cell_by_hand():
    # 60 / 0.06538 = 917.712 mol/m3; 2 x 96485.332 x 6.0e-10 x 917.712 / 1.5e-4 = 708.37.
    mol_m3 = mol_m3_from_g_l(60.0, ZINC.molar_mass_kg_mol)

    assert film_limiting_a_m2(2, 6.0e-10, mol_m3, 0.15e-3) == pytest.approx(708.37, rel=1e-5)


def test_ferric_ions_at_their_limit():
    mol_m3 = mol_m3_from_g_l(2.0, IRON.molar_mass_kg_mol)

    assert film_limiting_a_m2(1, 6.0e-10, mol_m3, 0.15e-3) == pytest.approx(13.822, rel=5e-5)


def test_a_disc_at_a_thousand_turns():
    limit = levich_limiting_a_m2(2, 7.0e-10, 1.0e-6, 100.0, THOUSAND_TURNS_RAD_S)

    assert limit == pytest.approx(965.23, rel=1e-5)


def test_the_film_of_that_disc_by_hand():
    # D^(1/3) = 8.8790e-4, nu^(1/6) = 0.1, omega^(1/2) = 10.2333; over 0.620 that is 13.995 um.
    film_m = levich_film_m(7.0e-10, 1.0e-6, THOUSAND_TURNS_RAD_S)

    assert film_m == pytest.approx(13.995e-6, rel=1e-4)


def test_free_convection_on_a_plate_of_a_metre():
    # Made with g = 9.81, ours is 9.80665: 3 parts in 10,000 of the product. The layer is turbulent
    # there, so the laminar law is checked as a formula only.
    product = schmidt(1.0e-6, 7.0e-10) * grashof(0.010, 1.0, 1.0e-6)

    film_m = natural_film_m(1.0, product, "laminar")

    assert product == pytest.approx(1.4014e14, rel=1e-3)
    assert film_m == pytest.approx(0.43015e-3, rel=2e-4)


def test_air_sparged_copper_has_a_thin_film():
    # 32 A/m2 for each g/L of copper, an order of magnitude: by hand 2 x 96485 x 7e-10 x 15.737 / 32
    # = 66 um, between the disc's 14 um and the 350 um of a still metre.
    mol_m3 = mol_m3_from_g_l(1.0, COPPER.molar_mass_kg_mol)

    assert film_thickness_m(2, 7.0e-10, mol_m3, 32.0) == pytest.approx(66e-6, rel=0.01)
