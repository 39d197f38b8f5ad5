"""Water: M. Tanaka and others (2001), L. Korson and others (1969), and the standards of IAPWS.

M. Tanaka, G. Girard, R. Davis, A. Peuto and N. Bignell, Metrologia 38 (2001) 301; L. Korson, W.
Drost-Hansen and F. J. Millero, J. Phys. Chem. 73 (1969) 34, table II. Status: looked up, both
tables as printed in the tests of the public library chempy 0.10.2. Figures of the IAPWS standards
of 1995 (density) and 2008 (viscosity), at 101 325 Pa, are computed with the public library
chemicals 1.5.2. Tolerances are those of the model's own equations for water.
"""

import pytest

from server.science.electrolyte.water import water_density_kg_m3, water_viscosity_pa_s
from server.science.units import kelvin_from_degc


@pytest.mark.parametrize(
    ("degc", "kg_m3"),
    [
        (0, 999.8395), (4, 999.9720), (10, 999.7026), (15, 999.1026), (20, 998.2071),
        (22, 997.7735), (25, 997.0479), (30, 995.6502),
    ],
)  # fmt: skip
def test_density_of_the_metrologists(degc, kg_m3):
    found = water_density_kg_m3(kelvin_from_degc(float(degc)))

    assert found == pytest.approx(kg_m3, abs=0.005)


@pytest.mark.parametrize(
    ("degc", "kg_m3"),
    [
        (0, 999.8431), (20, 998.2072), (25, 997.0476), (40, 992.2164), (50, 988.0350),
        (60, 983.1958), (70, 977.7646), (80, 971.7904),
    ],
)  # fmt: skip
def test_density_of_the_standard(degc, kg_m3):
    found = water_density_kg_m3(kelvin_from_degc(float(degc)))

    assert found == pytest.approx(kg_m3, abs=0.01)


@pytest.mark.parametrize(
    ("degc", "mpa_s"),
    [
        (0, 1.7916), (5, 1.5192), (10, 1.3069), (15, 1.1382), (20, 1.0020), (25, 0.8903),
        (30, 0.7975), (35, 0.7195), (40, 0.6532), (45, 0.5963), (50, 0.5471), (55, 0.5042),
        (60, 0.4666), (65, 0.4334), (70, 0.4039), (75, 0.3775), (80, 0.3538),
    ],
)  # fmt: skip
def test_viscosity_of_the_table(degc, mpa_s):
    found = water_viscosity_pa_s(kelvin_from_degc(float(degc))) * 1000

    assert found == pytest.approx(mpa_s, rel=0.004)


@pytest.mark.parametrize(
    ("degc", "mpa_s"),
    [
        (0, 1.79176), (20, 1.00160), (25, 0.89002), (40, 0.65273), (50, 0.54652), (60, 0.46604),
        (70, 0.40355), (80, 0.35405),
    ],
)  # fmt: skip
def test_viscosity_of_the_standard(degc, mpa_s):
    found = water_viscosity_pa_s(kelvin_from_degc(float(degc))) * 1000

    assert found == pytest.approx(mpa_s, rel=0.003)
