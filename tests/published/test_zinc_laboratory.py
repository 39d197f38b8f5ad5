"""J. Appl. Electrochem., DOI 10.1007/BF01016215: the lowest laboratory energy of zinc winning.

Looked up: the abstract's 2637 kWh/t (70 g/L Zn, 180 g/L acid, 45 degC, 400 A/m2). The voltage over
the efficiency that it implies is computed, in a library of reference values made apart from this
program.
"""

import pytest

from server.science.constants import ZINC
from server.science.faraday import equivalent_kg_c, specific_energy_from_volts_j_kg
from server.science.units import j_kg_from_kwh_t, kwh_t_from_j_kg


def test_volts_over_efficiency():
    assert j_kg_from_kwh_t(2637.0) * equivalent_kg_c(ZINC) == pytest.approx(3.21637, abs=5e-6)


def test_the_same_voltage_gives_the_energy_back():
    found = kwh_t_from_j_kg(specific_energy_from_volts_j_kg(3.21637, 1.0, ZINC))

    assert found == pytest.approx(2637.0, abs=0.05)
