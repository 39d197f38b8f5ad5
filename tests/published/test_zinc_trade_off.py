"""A university homework in mineral processing: at which current density is zinc cheapest?

Looked up: the problem, on a public page: six rows of current density, voltage and efficiency, a
plant of 10 000 m2, USD 0.06 per kWh, USD 20 000 a day. The answers are computed, in a library of
reference values made apart from this program, to the digits kept here.
"""

import numpy as np
import pytest

from server.science.constants import ZINC
from server.science.faraday import deposited_kg, specific_energy_from_volts_j_kg
from server.science.units import kwh_t_from_j_kg

# Current density A/m2, volts, share; kg/d, kWh/d, kWh/kg, USD/kg.
ROWS = [
    (300, 1.5, 0.92, 80_794, 108_000, 1.3367, 0.3277),
    (400, 2.3, 0.88, 103_041, 220_800, 2.1428, 0.3227),
    (500, 3.0, 0.82, 120_019, 360_000, 2.9995, 0.3466),
    (600, 3.9, 0.72, 126_459, 561_600, 4.441, 0.4246),
    (700, 4.8, 0.52, 106_554, 806_400, 7.568, 0.6418),
    (800, 5.8, 0.10, 23_418, 1_113_600, 47.552, 3.707),
]
AREA_M2, DAY_S = 10_000.0, 86_400.0
DENSITIES, VOLTS, SHARES, KG_D, KWH_D, KWH_KG, USD_KG = np.array(ROWS).T

MADE_KG = SHARES * deposited_kg(DENSITIES * AREA_M2 * DAY_S, ZINC)
SPENT_KWH_KG = kwh_t_from_j_kg(specific_energy_from_volts_j_kg(VOLTS, SHARES, ZINC)) / 1000
PRICE_USD_KG = SPENT_KWH_KG * 0.06 + 20_000 / MADE_KG


@pytest.mark.parametrize("row", range(6), ids=lambda row: f"{ROWS[row][0]} A/m2")
def test_metal_of_a_day(row):
    assert MADE_KG[row] == pytest.approx(KG_D[row], abs=0.5)


@pytest.mark.parametrize("row", range(6), ids=lambda row: f"{ROWS[row][0]} A/m2")
def test_energy_of_a_day_and_of_a_kilogram(row):
    assert SPENT_KWH_KG[row] == pytest.approx(KWH_KG[row], rel=5e-5)
    assert SPENT_KWH_KG[row] * MADE_KG[row] == pytest.approx(KWH_D[row], rel=1e-9)


@pytest.mark.parametrize("row", range(6), ids=lambda row: f"{ROWS[row][0]} A/m2")
def test_price_of_a_kilogram(row):
    assert PRICE_USD_KG[row] == pytest.approx(USD_KG[row], rel=2e-4)


def test_the_cheapest_is_400_amperes_per_square_metre():
    assert DENSITIES[np.argmin(PRICE_USD_KG)] == 400
