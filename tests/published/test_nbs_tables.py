"""Wagman et al., NBS tables of chemical thermodynamic properties (1982).

J. Phys. Chem. Ref. Data 11, Suppl. 2. Looked up: a public copy of a textbook's appendix G (OpenStax
Chemistry, named from memory), the CRC Handbook's table of aqueous ions (public copies of its first
page), a public geochemical database naming the NBS tables (water, hydrogen, oxygen). Each prints
its own number of digits; the textbook's nickel, cobalt and cuprous ion are of an older generation
and are left out.
"""

import pytest

from server.science.equilibrium.entropy import ENTROPIES_J_MOL_K
from server.science.equilibrium.gibbs import ION_FORMATION, WATER_FORMATION

# Textbook: ion, enthalpy and Gibbs energy of formation, kJ/mol, with their last digits.
TEXTBOOK_IONS = {
    ("Cu", 2): (64.77, 65.49, 0.01),
    ("Zn", 2): (-153.9, -147.1, 0.1),
    ("Ag", 1): (105.6, 77.11, 0.1),
    ("Pb", 2): (-1.7, -24.43, 0.1),
    ("Mn", 2): (-220.8, -228.1, 0.1),
    ("Cd", 2): (-75.90, -77.61, 0.01),
    ("Fe", 2): (-89.1, -78.90, 0.1),
    ("Al", 3): (-531.0, -485.0, 1.0),
    ("Mg", 2): (-466.9, -454.8, 0.1),
}
# Handbook: the same, to one decimal.
HANDBOOK_IONS = {
    ("Ag", 1): (105.6, 77.1),
    ("Al", 3): (-531.0, -485.0),
    ("Cd", 2): (-75.9, -77.6),
    ("Co", 2): (-58.2, -54.4),
    ("Cu", 2): (64.8, 65.5),
    ("Fe", 2): (-89.1, -78.9),
    ("Mg", 2): (-466.9, -454.8),
    ("Mn", 2): (-220.8, -228.1),
}
# Entropies, J/(mol K), and their last digit: textbook.
TEXTBOOK_ENTROPIES = {
    "Cu": (33.15, 0.01), "Cu2+": (-99.6, 0.1), "Zn": (41.6, 0.1), "Zn2+": (-112.1, 0.1),
    "Ag": (42.55, 0.01), "Ag+": (72.68, 0.01), "Pb": (64.81, 0.01), "Pb2+": (10.5, 0.1),
    "Mn": (32.0, 0.1), "Mn2+": (-73.6, 0.1), "Cd": (51.76, 0.01), "Cd2+": (-73.2, 0.1),
    "Fe": (27.3, 0.1), "Fe2+": (-137.7, 0.1), "Fe3+": (-315.9, 0.1), "Al": (28.3, 0.1),
    "Al3+": (-321.7, 0.1), "Mg2+": (-138.1, 0.1), "Co": (30.0, 0.1), "MnO2": (53.05, 0.01),
    "PbO2": (68.6, 0.1), "SO4--": (20.1, 0.1), "Cl2": (223.1, 0.1), "Cl-": (56.5, 0.1),
    "H2": (130.7, 0.1), "O2": (205.2, 0.1), "H2O": (70.0, 0.1), "H+": (0.0, 0.1),
}  # fmt: skip
# Entropies from the handbook's table of ions and from a public list of elements.
OTHER_ENTROPIES = {
    "Cu+": (40.6, 0.1), "Co2+": (-113.0, 0.1), "Ga3+": (-331.0, 0.1), "Co": (30.04, 0.01),
    "Ni": (29.87, 0.01), "Mg": (32.67, 0.01), "Zn": (41.63, 0.01), "Mn": (32.01, 0.01),
    "H2": (130.684, 0.001), "O2": (205.138, 0.001),
}  # fmt: skip


@pytest.mark.parametrize(("couple", "printed"), TEXTBOOK_IONS.items())
def test_formation_of_ions_in_the_textbook(couple, printed):
    enthalpy, gibbs, last_digit = printed

    held = ION_FORMATION[couple]

    assert held.enthalpy_j_mol / 1000 == pytest.approx(enthalpy, abs=0.51 * last_digit)
    assert held.gibbs_j_mol / 1000 == pytest.approx(gibbs, abs=0.51 * last_digit)


@pytest.mark.parametrize(("couple", "printed"), HANDBOOK_IONS.items())
def test_formation_of_ions_in_the_handbook(couple, printed):
    enthalpy, gibbs = printed

    held = ION_FORMATION[couple]

    assert held.enthalpy_j_mol / 1000 == pytest.approx(enthalpy, abs=0.051)
    assert held.gibbs_j_mol / 1000 == pytest.approx(gibbs, abs=0.051)


def test_formation_of_water():
    # The database prints -237.129 and -285.83, the textbook -237.1 and -285.83 kJ/mol.
    assert WATER_FORMATION.gibbs_j_mol == -237_129.0
    assert WATER_FORMATION.enthalpy_j_mol == -285_830.0


@pytest.mark.parametrize(("species", "printed"), TEXTBOOK_ENTROPIES.items())
def test_entropies_in_the_textbook(species, printed):
    entropy, last_digit = printed

    assert ENTROPIES_J_MOL_K[species] == pytest.approx(entropy, abs=last_digit)


@pytest.mark.parametrize(("species", "printed"), OTHER_ENTROPIES.items())
def test_entropies_elsewhere(species, printed):
    entropy, last_digit = printed

    assert ENTROPIES_J_MOL_K[species] == pytest.approx(entropy, abs=1.01 * last_digit)
