"""CRC Handbook of Chemistry and Physics, Electrochemical Series (P. Vanysek), recent editions.

Looked up: silver (92nd edition, opening of the series), zinc (a public element-data test suite),
copper(II) and oxygen (a public general-chemistry page quoting the handbook). Bismuth, tellurium,
and the last digits of the couples of lead and manganese dioxide: from memory. The others were
looked up elsewhere, see test_textbook_potentials.py.
"""

import pytest

from server.science.equilibrium.tables import CRC_RECENT, DEFAULT_TABLE

LOOKED_UP = {("Ag", 1): 0.7996, ("Zn", 2): -0.7618, ("Cu", 2): 0.3419}
FROM_MEMORY = {("Bi", 3): 0.308, ("Te", 4): 0.568}
COUPLES_FROM_MEMORY = {"PbO2/PbSO4": 1.6913, "PbSO4/Pb": -0.3588, "MnO2/Mn2+": 1.224}


@pytest.mark.parametrize(("couple", "volts"), (LOOKED_UP | FROM_MEMORY).items())
def test_potentials_are_those_of_the_handbook(couple, volts):
    assert CRC_RECENT.metal_v(*couple) == volts


@pytest.mark.parametrize(("couple", "volts"), COUPLES_FROM_MEMORY.items())
def test_couples_from_memory(couple, volts):
    assert CRC_RECENT.couple_v(couple) == volts


def test_oxygen_over_water():
    assert CRC_RECENT.couple_v("O2/H2O") == 1.229


def test_it_is_the_table_used_where_none_is_chosen():
    assert DEFAULT_TABLE is CRC_RECENT
