"""Electrochemical equivalents of the metals: k = M / (z F), in the units of the trade.

The weights behind them were looked up (IUPAC, see test_atomic_weights.py). Status of the three
figures of each metal in RECOMPUTED: computed, in a library of reference values made apart from this
program, from z, the exact F and the weight, to the digits kept here. Status of the metals in
BY_HAND: computed here, with the arithmetic written out; no printed figure stands behind them.
Lead's tolerance is wider because its weight is an interval.
"""

import pytest

from server.science.constants import metal
from server.science.faraday import (
    deposited_kg,
    equivalent_kg_c,
    specific_energy_from_volts_j_kg,
)
from server.science.units import kg_kah_from_kg_c, kwh_t_from_j_kg

# Symbol, electrons: g/Ah, kg per kA and day, kWh/t per volt at an efficiency of 1.
RECOMPUTED = {
    ("Cu", 2): (1.185494, 28.45186, 843.5301),
    ("Zn", 2): (1.219709, 29.27301, 819.8679),
    ("Co", 2): (1.099439, 26.38654, 909.5547),
    ("Au", 1): (7.349093, 176.37823, 136.0712),
    ("Pb", 2): (3.865458, 92.77099, 258.7016),
    ("Sn", 2): (2.214616, 53.15079, 451.5455),
    ("Mn", 2): (1.024907, 24.59776, 975.6984),
    ("Cr", 3): (0.646682, 15.52037, 1546.3553),
    ("Fe", 2): (1.041827, 25.00384, 959.8525),
    ("Ga", 3): (0.867154, 20.81169, 1153.1983),
    ("Al", 3): (0.335573, 8.05375, 2979.9799),
    ("Mg", 2): (0.453426, 10.88223, 2205.4294),
    ("Sb", 3): (1.514344, 36.34426, 660.3519),
    ("Cu", 1): (2.370988, 56.90372, 421.7650),
}
# Symbol, electrons: atomic weight, g/mol. k in g/Ah is the weight over z times 26.8014811454 Ah.
BY_HAND = {
    ("Ni", 2): 58.6934,
    ("Ag", 1): 107.8682,
    ("Au", 3): 196.96657,
    ("Sn", 4): 118.71,
    ("Cd", 2): 112.414,
    ("In", 3): 114.818,
    ("Bi", 3): 208.9804,
    ("Te", 4): 127.6,
}
AMPERE_HOURS_PER_MOLE = 26.8014811454


def tolerance(symbol):
    """Relative tolerance: the digits printed, and the interval of lead."""
    return 1e-3 if symbol == "Pb" else 1e-6


@pytest.mark.parametrize(("couple", "figures"), RECOMPUTED.items())
def test_grams_per_ampere_hour(couple, figures):
    g_ah = kg_kah_from_kg_c(equivalent_kg_c(metal(*couple)))

    assert g_ah == pytest.approx(figures[0], rel=tolerance(couple[0]))


@pytest.mark.parametrize(("couple", "figures"), RECOMPUTED.items())
def test_kilograms_per_kiloampere_and_day(couple, figures):
    kg = deposited_kg(1000.0 * 86_400, metal(*couple))

    assert kg == pytest.approx(figures[1], rel=tolerance(couple[0]))


@pytest.mark.parametrize(("couple", "figures"), RECOMPUTED.items())
def test_kilowatt_hours_per_tonne_and_volt(couple, figures):
    kwh_t = kwh_t_from_j_kg(specific_energy_from_volts_j_kg(1.0, 1.0, metal(*couple)))

    assert kwh_t == pytest.approx(figures[2], rel=tolerance(couple[0]))


@pytest.mark.parametrize(("couple", "g_mol"), BY_HAND.items())
def test_equivalents_worked_out_by_hand(couple, g_mol):
    g_ah = g_mol / (couple[1] * AMPERE_HOURS_PER_MOLE)

    known = metal(*couple)

    assert kg_kah_from_kg_c(equivalent_kg_c(known)) == pytest.approx(g_ah, rel=1e-10)
    assert deposited_kg(1000.0 * 86_400, known) == pytest.approx(24 * g_ah, rel=1e-10)
    kwh_t = kwh_t_from_j_kg(specific_energy_from_volts_j_kg(1.0, 1.0, known))
    assert kwh_t == pytest.approx(1000 / g_ah, rel=1e-10)


def test_the_rounded_constants_of_practice_lie_near():
    # Common practice: 1.185 or 1.186 g/Ah for copper, 0.05 % apart.
    g_ah = kg_kah_from_kg_c(equivalent_kg_c(metal("Cu")))

    assert g_ah == pytest.approx(1.185, abs=0.0005)
    assert g_ah == pytest.approx(1.186, abs=0.00051)
