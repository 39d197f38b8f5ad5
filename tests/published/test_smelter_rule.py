"""The aluminium smelter's rule: kWh/kg = 2.98 V / CE.

The rule is from memory (common practice of the industry); its constant to six figures is computed
from F and the atomic weight, in a library of reference values made apart from this program. The
cell of 180 kA has our own numbers and is computed here.
"""

import pytest

from server.science.constants import ALUMINIUM
from server.science.faraday import deposited_kg, specific_energy_from_volts_j_kg
from server.science.units import kwh_t_from_j_kg


def test_the_constant_of_the_rule():
    kwh_kg = kwh_t_from_j_kg(specific_energy_from_volts_j_kg(1.0, 1.0, ALUMINIUM)) / 1000

    assert kwh_kg == pytest.approx(2.98, abs=0.005)
    assert kwh_kg == pytest.approx(2.97998, abs=5e-6)


def test_energy_of_a_cell_of_ours():
    # By hand: k = 26.9815384 / (3 x 26.8014811454) g/Ah; 4.15 V / (k x 0.94).
    k = 26.9815384 / (3 * 26.8014811454)

    kwh_kg = kwh_t_from_j_kg(specific_energy_from_volts_j_kg(4.15, 0.94, ALUMINIUM)) / 1000

    assert kwh_kg == pytest.approx(4.15 / (k * 0.94), rel=1e-9)
    assert 13 < kwh_kg < 15  # The band of public engineering notes (looked up).


def test_metal_of_a_cell_of_ours():
    # By hand: 180 kA x 24 h x k x 0.94.
    kg = 0.94 * deposited_kg(180e3 * 86_400, ALUMINIUM)

    assert kg == pytest.approx(180 * 24 * 26.9815384 / (3 * 26.8014811454) * 0.94, rel=1e-9)
