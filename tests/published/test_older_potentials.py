"""CRC Handbook, 54th edition, p. D-120: the older generation of potentials.

Looked up: a public general-chemistry page quoting the 54th edition. A plant may choose this table;
the checks hold its figures to the print, and say how far the newer ones lie apart, so that nobody
mixes them unawares.
"""

import pytest

from server.science.equilibrium.tables import CRC_54TH, CRC_RECENT

PRINTED = {
    ("Cu", 2): 0.3419,
    ("Zn", 2): -0.7628,
    ("Ni", 2): -0.230,
    ("Sn", 2): -0.1364,
    ("Pb", 2): -0.1263,
    ("Ag", 1): 0.7996,
    ("Fe", 2): -0.409,
    ("Al", 3): -1.706,
    ("Mn", 2): -1.029,
    ("Cr", 3): -0.740,
    ("Au", 1): 1.680,
}
COUPLES_PRINTED = {
    "H+/H2": 0.0,
    "O2/H2O": 1.229,
    "Fe3+/Fe2+": 0.770,
    "Cl2/Cl-": 1.3583,
    "PbO2/PbSO4": 1.685,
    "PbSO4/Pb": -0.356,
    "MnO4-/Mn2+": 1.507,
    "Sn4+/Sn2+": 0.150,
}
# Distance of the newer figure, by hand from the two prints.
APART = {
    ("Ni", 2): 0.027,
    ("Fe", 2): 0.038,
    ("Al", 3): 0.044,
    ("Mn", 2): 0.156,
    ("Au", 1): 0.012,
}


@pytest.mark.parametrize(("couple", "volts"), PRINTED.items())
def test_potentials_are_those_printed(couple, volts):
    assert CRC_54TH.metal_v(*couple) == volts


@pytest.mark.parametrize(("couple", "volts"), COUPLES_PRINTED.items())
def test_couples_are_those_printed(couple, volts):
    assert CRC_54TH.couple_v(couple) == volts


def test_the_table_holds_nothing_else():
    assert CRC_54TH.metals.keys() == PRINTED.keys()
    assert CRC_54TH.couples.keys() == COUPLES_PRINTED.keys()


@pytest.mark.parametrize("couple", sorted(PRINTED.keys() - APART.keys()), ids=str)
def test_most_metals_moved_by_less_than_five_millivolts(couple):
    assert CRC_RECENT.metal_v(*couple) == pytest.approx(PRINTED[couple], abs=0.005)


@pytest.mark.parametrize(("couple", "distance"), APART.items())
def test_some_metals_moved_much(couple, distance):
    assert abs(CRC_RECENT.metal_v(*couple) - PRINTED[couple]) == pytest.approx(distance, abs=5e-4)
