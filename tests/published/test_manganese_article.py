"""P. Ilea et al., Hydrometallurgy 46 (1997) 149-156: manganese electrowinning with selenium.

Looked up: the abstract's 82 % and 6.8 kWh/kg at 500 A/m2. The cell voltage that they imply is
computed here.
"""

import pytest

from server.science.constants import MANGANESE
from server.science.faraday import equivalent_kg_c, specific_energy_from_volts_j_kg
from server.science.units import j_kg_from_kwh_t, kwh_t_from_j_kg


def test_the_voltage_implied():
    # By hand: 6.8 kWh/kg x 54.938043 / (2 x 26.8014811454) g/Ah x 0.82 = 5.715 V.
    volts = j_kg_from_kwh_t(6800.0) * equivalent_kg_c(MANGANESE) * 0.82

    assert volts == pytest.approx(6.8 * 54.938043 / (2 * 26.8014811454) * 0.82, rel=1e-9)
    assert volts == pytest.approx(5.715, abs=0.0005)


def test_the_published_energy_comes_back():
    found = kwh_t_from_j_kg(specific_energy_from_volts_j_kg(5.715, 0.82, MANGANESE)) / 1000

    assert found == pytest.approx(6.8, abs=0.05)
