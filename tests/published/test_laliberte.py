"""M. Laliberte's model of density and viscosity, on the baths of tankhouses.

M. Laliberte and W. E. Cooper, J. Chem. Eng. Data 49 (2004) 1141; M. Laliberte, ibid. 54 (2009)
1725. Status: the figures of sodium chloride are looked up, in the documentation of a public library
of properties, which takes the first two from the author's own spreadsheet. Those of the baths are
computed, marked "recomputed" in a library of reference values made apart from this program, marked
"by the public library" here with thermo 0.6.1's own functions, repeated until the density stood.
The standard deviation of mixtures, 1.39 kg/m3, is looked up in the abstract of 2004.
"""

import math

import pytest

from server.science.electrolyte.laliberte import (
    DENSITY_SD_KG_M3,
    density_from_shares_kg_m3,
    density_kg_m3,
    viscosity_from_shares_pa_s,
    viscosity_pa_s,
)
from server.science.electrolyte.laliberte_fits import SALT_FITS, SaltFit
from server.science.electrolyte.salts import bath_g_l
from server.science.electrolyte.water import water_density_kg_m3, water_viscosity_pa_s
from server.science.units import kelvin_from_degc

# Sodium chloride, which no bath here holds: coefficients as that documentation prints them.
SODIUM_CHLORIDE = SaltFit(
    "NaCl",
    (-0.00324112223655149, 0.0636354335906616, 1.01371399467365, 0.0145951015210159,
     3317.34854426537),
    SALT_FITS["H2SO4"].density_ranges,
    (16.221788633396, 1.32293086770011, 1.48485985010431, 0.00746912559657377, 30.7802007540575,
     2.05826852322558),
    SALT_FITS["H2SO4"].viscosity_ranges,
)  # fmt: skip

# Name, metals and acid in g/L, degC, kg/m3, mPa s.
BATHS = [
    pytest.param({"Cu": 40}, 180, 45, 1190.53, 1.132, id="copper winning, recomputed"),
    pytest.param({"Cu": 45}, 180, 60, 1192.74, 0.9022, id="copper refining, recomputed"),
    pytest.param({"Zn": 55}, 170, 38, 1222.54, 1.734, id="spent zinc, recomputed"),
    pytest.param({"Ni": 75}, 0, 60, 1176.87, 1.041, id="nickel winning, recomputed"),
    pytest.param({}, 180, 60, 1090.94, 0.7137, id="acid alone, recomputed"),
    pytest.param({"Cu": 63.546}, 0, 25, 1152.24, 1.563, id="one mole of copper, recomputed"),
    pytest.param({"Cu": 35}, 180, 40, 1182.267, 1.2123, id="winning, by the public library"),
    pytest.param(
        {"Cu": 45, "Ni": 15}, 180, 60, 1228.277, 1.0564, id="with nickel, by the public library"
    ),
    pytest.param({"Zn": 150}, 0, 30, 1341.666, 3.8783, id="neutral zinc, by the public library"),
]


@pytest.mark.parametrize(("metals_g_l", "acid_g_l", "degc", "kg_m3", "mpa_s"), BATHS)
def test_baths(metals_g_l, acid_g_l, degc, kg_m3, mpa_s):
    bath = bath_g_l(metals_g_l, acid_g_l)

    assert density_kg_m3(bath, kelvin_from_degc(degc)) == pytest.approx(kg_m3, abs=0.006)
    found = viscosity_pa_s(bath, kelvin_from_degc(degc)) * 1000
    assert found == pytest.approx(mpa_s, rel=5e-4)


@pytest.mark.parametrize(
    ("shares", "kg_m3"),
    [
        pytest.param({"CuSO4": 0.10}, 1107.496, id="copper sulfate, recomputed"),
        pytest.param({"H2SO4": 0.15}, 1103.034, id="acid, recomputed"),
        pytest.param({"ZnSO4": 0.10}, 1107.747, id="zinc sulfate, by the public library"),
    ],
)
def test_densities_by_mass_at_20_degrees(shares, kg_m3):
    assert density_from_shares_kg_m3(shares, 293.15) == pytest.approx(kg_m3, abs=6e-4)


def test_ten_per_cent_zinc_sulfate_by_hand():
    # The five coefficients of the paper, S = 0.1, t = 20: what a kilogram seems to take, and the
    # volumes of salt and water added.
    weight = (19.3998326 * 0.1 + 36.9810553) * math.exp(1e-6 * (20 + 2058.602177) ** 2)
    apparent = (0.1 - 0.08876578477 + 0.001068931375 * 20) / weight
    by_hand = 1 / (0.9 / 998.2041 + 0.1 * apparent)

    found = density_from_shares_kg_m3({"ZnSO4": 0.10}, 293.15)

    assert found == pytest.approx(by_hand, abs=0.001)


def test_sodium_chloride_of_the_authors_spreadsheet(monkeypatch):
    monkeypatch.setitem(SALT_FITS, "NaCl", SODIUM_CHLORIDE)

    density = density_from_shares_kg_m3({"NaCl": 0.0037838838}, 273.15)
    viscosity = viscosity_from_shares_pa_s({"NaCl": 0.005810}, 278.15)

    assert density == pytest.approx(1002.62501201, abs=1e-7)
    assert viscosity == pytest.approx(0.0015285828581961414, rel=1e-10)


@pytest.mark.parametrize(("kelvin", "kg_m3"), [(298.15, 997.0448954), (323.15, 988.0362916)])
def test_water_as_documented(kelvin, kg_m3):
    assert water_density_kg_m3(kelvin) == pytest.approx(kg_m3, abs=1e-6)


def test_viscosity_of_water_as_documented():
    assert water_viscosity_pa_s(298.0) == pytest.approx(0.000893226448703328, rel=1e-12)


def test_the_standard_deviation_of_mixtures():
    assert DENSITY_SD_KG_M3 == 1.39
