"""S. G. Bratsch, J. Phys. Chem. Ref. Data 18 (1989) 1: temperature coefficients at 25 degC.

Looked up: title and abstract (based on the NBS tables), in public copies of its first page. From
memory: every figure, in mV/K. Ours come from entropies of the NBS tables (test_nbs_tables.py), not
from this paper; aluminium and iron lie apart by some hundredths where its entropies are others.
"""

import pytest

from server.science.constants import metal
from server.science.equilibrium.entropy import couple_coefficient_v_k, metal_coefficient_v_k

METALS_FROM_MEMORY = {
    ("Cu", 2): 0.011,
    ("Zn", 2): 0.119,
    ("Ni", 2): 0.146,
    ("Co", 2): 0.065,
    ("Ag", 1): -0.989,
    ("Pb", 2): -0.395,
    ("Cd", 2): -0.029,
}
COUPLES_FROM_MEMORY = {
    "O2/H2O": -0.846,
    "Cl2/Cl-": -1.248,
    "Fe3+/Fe2+": 1.175,
    "MnO2/Mn2+": -0.609,
    "H+/H2": 0.0,
}


@pytest.mark.parametrize(("couple", "mv_k"), METALS_FROM_MEMORY.items())
def test_metals(couple, mv_k):
    assert 1000 * metal_coefficient_v_k(metal(*couple)) == pytest.approx(mv_k, abs=0.002)


@pytest.mark.parametrize(("couple", "mv_k"), COUPLES_FROM_MEMORY.items())
def test_couples(couple, mv_k):
    assert 1000 * couple_coefficient_v_k(couple) == pytest.approx(mv_k, abs=0.006)


def test_oxygen_by_hand():
    # O2 + 2 H2 = 2 H2O with the textbook's rounded entropies: (140.0 - 205.2 - 261.4) / (4 F).
    by_hand = (2 * 70.0 - 205.2 - 2 * 130.7) / (4 * 96.48533)

    assert 1000 * couple_coefficient_v_k("O2/H2O") == pytest.approx(by_hand, abs=0.002)
