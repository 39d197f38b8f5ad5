"""A general-chemistry textbook's appendix L, "Standard electrode (half-cell) potentials", table L1.

Looked up: a public copy of the appendix (the book, OpenStax Chemistry, is named from memory). Its
figures follow the handbook's newer series. It rounds copper to 0.34 V, and for tellurium it gives
another reaction, TeO2 to Te, which is left out.
"""

import pytest

from server.science.equilibrium.potential import (
    FERRIC_FERROUS_V,
    OXYGEN_WATER_V,
    STANDARD_POTENTIALS_V,
)

PRINTED = {
    ("Ag", 1): 0.7996,
    ("Al", 3): -1.662,
    ("Au", 3): 1.498,
    ("Au", 1): 1.692,
    ("Cd", 2): -0.4030,
    ("Co", 2): -0.28,
    ("Cr", 3): -0.744,
    ("Cu", 1): 0.521,
    ("Fe", 2): -0.447,
    ("Ga", 3): -0.549,
    ("In", 3): -0.3382,
    ("Mg", 2): -2.372,
    ("Mn", 2): -1.185,
    ("Ni", 2): -0.257,
    ("Pb", 2): -0.1262,
    ("Sn", 2): -0.1375,
    ("Zn", 2): -0.7618,
}


@pytest.mark.parametrize(("couple", "volts"), PRINTED.items())
def test_potentials_are_those_printed(couple, volts):
    assert STANDARD_POTENTIALS_V[couple] == volts


def test_copper_to_its_two_figures():
    assert STANDARD_POTENTIALS_V["Cu", 2] == pytest.approx(0.34, abs=0.005)


def test_couples_that_are_no_metals():
    assert OXYGEN_WATER_V == 1.229
    assert FERRIC_FERROUS_V == 0.771
