"""CRC Handbook, 54th edition, p. D-120, and a corrosion textbook's table 4.2: the older generation.

Looked up: a public general-chemistry page quoting the 54th edition; the page of "Corrosion
Engineering Principles and Practice" with table 4.2. They are not the table of this program; the
checks say how far the generations lie apart, so that nobody mixes them unawares.
"""

import pytest

from server.science.equilibrium.potential import FERRIC_FERROUS_V, STANDARD_POTENTIALS_V

HANDBOOK_54 = {
    ("Cu", 2): 0.3419,
    ("Zn", 2): -0.7628,
    ("Sn", 2): -0.1364,
    ("Pb", 2): -0.1263,
    ("Ag", 1): 0.7996,
    ("Cr", 3): -0.74,
}
CORROSION_TABLE = {
    ("Cu", 2): 0.3402,
    ("Cu", 1): 0.522,
    ("Co", 2): -0.28,
    ("Zn", 2): -0.7628,
    ("Mg", 2): -2.375,
}
# Metal: printed in the 54th edition, distance of the newer figure.
APART = {
    ("Ni", 2): (-0.23, 0.027),
    ("Fe", 2): (-0.409, 0.038),
    ("Al", 3): (-1.706, 0.044),
    ("Mn", 2): (-1.029, 0.156),
    ("Au", 1): (1.68, 0.012),
}


@pytest.mark.parametrize(
    ("couple", "volts"), [*HANDBOOK_54.items(), *CORROSION_TABLE.items()], ids=str
)
def test_most_metals_moved_by_less_than_five_millivolts(couple, volts):
    assert STANDARD_POTENTIALS_V[couple] == pytest.approx(volts, abs=0.005)


@pytest.mark.parametrize(("couple", "printed"), APART.items())
def test_some_metals_moved_much(couple, printed):
    volts, distance = printed

    assert abs(STANDARD_POTENTIALS_V[couple] - volts) == pytest.approx(distance, abs=5e-4)


def test_ferric_over_ferrous():
    assert FERRIC_FERROUS_V == pytest.approx(0.77, abs=0.005)
