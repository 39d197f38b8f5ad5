"""Brown et al., Chemistry: The Central Science, ch. 23: zinc on both faces of a steel sheet.

Looked up: the problem, on public pages: 0.49 mm on a sheet of 2.0 m by 80 m, 3.5 V, 90 % efficient,
USD 0.082 per kWh, 7.1 g/cm3. The answers are computed, in a library of reference values made apart
from this program; its density is the problem's, not this program's.
"""

import pytest

from server.science.constants import ZINC
from server.science.faraday import specific_energy_from_volts_j_kg
from server.science.units import (
    joules_from_kwh,
    kwh_from_joules,
    price_per_j_from_price_per_kwh,
)

MASS_KG = 2 * 2.0 * 80 * 0.49e-3 * 7100


def test_the_mass_of_the_coat():
    assert pytest.approx(1113.28, abs=0.005) == MASS_KG


def test_the_energy():
    energy_j = MASS_KG * specific_energy_from_volts_j_kg(3.5, 0.90, ZINC)

    assert kwh_from_joules(energy_j) == pytest.approx(3549.55, abs=0.05)


def test_the_price():
    energy_j = joules_from_kwh(3549.55)

    assert energy_j * price_per_j_from_price_per_kwh(0.082) == pytest.approx(291.06, abs=0.005)
