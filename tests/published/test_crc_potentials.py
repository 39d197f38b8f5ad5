"""CRC Handbook of Chemistry and Physics, Electrochemical Series (P. Vanysek), recent editions.

Looked up: silver (92nd edition, opening of the series), zinc (a public element-data test suite),
copper(II) and oxygen (a public general-chemistry page quoting the handbook). Bismuth, tellurium:
from memory. The others were looked up elsewhere, see test_textbook_potentials.py.
"""

import pytest

from server.science.equilibrium.potential import OXYGEN_WATER_V, STANDARD_POTENTIALS_V

LOOKED_UP = {("Ag", 1): 0.7996, ("Zn", 2): -0.7618, ("Cu", 2): 0.3419}
FROM_MEMORY = {("Bi", 3): 0.308, ("Te", 4): 0.568}


@pytest.mark.parametrize(("couple", "volts"), (LOOKED_UP | FROM_MEMORY).items())
def test_potentials_are_those_of_the_handbook(couple, volts):
    assert STANDARD_POTENTIALS_V[couple] == volts


def test_oxygen_over_water():
    assert OXYGEN_WATER_V == 1.229
