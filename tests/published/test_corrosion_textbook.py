"""Table 4.2 of "Corrosion Engineering Principles and Practice": potentials by falling order.

Looked up: the page of the book with the table (author, P. R. Roberge, and year from memory).
"""

import pytest

from server.science.equilibrium.tables import CORROSION_TEXTBOOK

PRINTED = {
    ("Au", 1): 1.68,
    ("Ag", 1): 0.7996,
    ("Cu", 1): 0.522,
    ("Cu", 2): 0.3402,
    ("Pb", 2): -0.1263,
    ("Sn", 2): -0.1364,
    ("Ni", 2): -0.23,
    ("Co", 2): -0.28,
    ("Fe", 2): -0.409,
    ("Cr", 3): -0.74,
    ("Zn", 2): -0.7628,
    ("Mn", 2): -1.04,
    ("Al", 3): -1.706,
    ("Mg", 2): -2.375,
}


@pytest.mark.parametrize(("couple", "volts"), PRINTED.items())
def test_potentials_are_those_printed(couple, volts):
    assert CORROSION_TEXTBOOK.metal_v(*couple) == volts


def test_oxygen_over_water():
    assert CORROSION_TEXTBOOK.couple_v("O2/H2O") == 1.229


def test_the_table_holds_nothing_else():
    assert CORROSION_TEXTBOOK.metals.keys() == PRINTED.keys()
