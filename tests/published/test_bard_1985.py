"""A. J. Bard, R. Parsons and J. Jordan, Standard Potentials in Aqueous Solution (1985).

From memory: every figure of the table itself. Looked up: a school textbook's table 15.1 that names
J. A. Dean, Lange's Handbook of Chemistry (1999), whose table follows theirs (from memory) and
rounds to two or three decimals; and a textbook's appendix of formal potentials of an older
generation, for what moved.
"""

import pytest

from server.science.equilibrium.tables import BARD_1985

FROM_MEMORY = {
    ("Cu", 2): 0.340,
    ("Zn", 2): -0.7626,
    ("Ni", 2): -0.257,
    ("Co", 2): -0.277,
    ("Cd", 2): -0.4025,
    ("Ag", 1): 0.7991,
    ("Pb", 2): -0.1251,
    ("Sn", 2): -0.136,
    ("Mn", 2): -1.18,
    ("Fe", 2): -0.44,
}
# Looked up: potential and its last digit.
LANGE = {
    ("Mg", 2): (-2.356, 0.001),
    ("Al", 3): (-1.676, 0.001),
    ("Zn", 2): (-0.762, 0.001),
    ("Cr", 3): (-0.74, 0.01),
    ("Fe", 2): (-0.44, 0.01),
    ("Cd", 2): (-0.403, 0.001),
    ("Ni", 2): (-0.257, 0.001),
    ("Sn", 2): (-0.137, 0.001),
    ("Pb", 2): (-0.126, 0.001),
    ("Cu", 2): (0.340, 0.001),
    ("Ag", 1): (0.799, 0.001),
    ("Au", 3): (1.52, 0.01),
}
LANGE_COUPLES = {"H+/H2": 0.0, "Fe3+/Fe2+": 0.771, "O2/H2O": 1.229, "Cl2/Cl-": 1.358}


@pytest.mark.parametrize(("couple", "volts"), FROM_MEMORY.items())
def test_potentials_as_remembered(couple, volts):
    assert BARD_1985.metal_v(*couple) == volts


def test_oxygen_and_iron_as_remembered():
    assert BARD_1985.couple_v("O2/H2O") == 1.229
    assert BARD_1985.couple_v("Fe3+/Fe2+") == 0.771


@pytest.mark.parametrize(("couple", "printed"), LANGE.items())
def test_potentials_agree_with_the_handbook_that_follows_them(couple, printed):
    volts, last_digit = printed

    assert BARD_1985.metal_v(*couple) == pytest.approx(volts, abs=1.01 * last_digit)


@pytest.mark.parametrize(("couple", "volts"), LANGE_COUPLES.items())
def test_couples_agree_with_the_handbook_that_follows_them(couple, volts):
    assert BARD_1985.couple_v(couple) == pytest.approx(volts, abs=0.0005)


def test_the_memory_is_marked():
    assert BARD_1985.status == "from memory"
