"""Aalto University, course ELEC-E8174, homework 3 (2019): copper refining and winning.

Looked up: stored copies of the problem sheet and of one solved script. Question 1's answer, 0.3075
kWh/kg, is published; that of question 2 was cut off and is computed; question 3's current
efficiency was cut off, so 95 % is ours and the answer computed. The sheet rounds F to 96485.
"""

import pytest

from server.science.constants import COPPER
from server.science.faraday import deposited_kg, specific_energy_from_volts_j_kg
from server.science.units import kwh_t_from_j_kg


def test_refining_energy_as_published():
    kwh_kg = kwh_t_from_j_kg(specific_energy_from_volts_j_kg(0.35, 0.96, COPPER)) / 1000

    assert kwh_kg == pytest.approx(0.3075, abs=0.00005)


def test_cathode_mass_on_a_square_metre_in_seven_days():
    # 300 A/m2 at 96 %; computed: 57.359 kg.
    kg = 0.96 * deposited_kg(300.0 * 7 * 86_400, COPPER)

    assert kg == pytest.approx(57.359, abs=0.0005)


def test_winning_energy_with_our_own_efficiency():
    # 2.2 V from the sheet, 95 % ours; computed: 1.9534 kWh/kg.
    kwh_kg = kwh_t_from_j_kg(specific_energy_from_volts_j_kg(2.2, 0.95, COPPER)) / 1000

    assert kwh_kg == pytest.approx(1.9534, abs=0.00005)
