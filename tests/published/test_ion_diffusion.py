"""Diffusion of single ions in water at 25 degC, after three tables that are made differently.

Y.-H. Li and S. Gregory, Geochim. Cosmochim. Acta 38 (1974) 703, as printed in a public page of a
textbook of soils (looked up); limiting conductivities of the CRC Handbook (looked up in a data
table of the public library chemicals 1.5.2) with D = R T lambda / (z F^2), which is W. Nernst's and
A. Einstein's; limiting molar conductivities of Y. Marcus (same library). They differ by 4 % among
each other, which is the tolerance.
"""

import pytest

from server.science.constants import FARADAY_C_MOL, GAS_CONSTANT_J_MOL_K
from server.science.electrolyte.diffusion import ion_diffusivity_m2_s


@pytest.mark.parametrize(
    ("ion", "printed"),
    [
        ("H+", 9.31), ("Mg2+", 0.70), ("Mn2+", 0.69), ("Fe2+", 0.72), ("Ni2+", 0.68),
        ("Cu2+", 0.73), ("Zn2+", 0.72), ("Cd2+", 0.72),
    ],
)  # fmt: skip
def test_the_textbook(ion, printed):
    assert ion_diffusivity_m2_s(ion, 298.15) == pytest.approx(printed * 1e-9, rel=0.04)


@pytest.mark.parametrize(
    ("ion", "charge", "equivalent_s_cm2"),
    [
        ("Cu2+", 2, 53.6), ("Zn2+", 2, 52.8), ("Ni2+", 2, 49.6), ("Fe2+", 2, 54.0),
        ("Fe3+", 3, 68.0), ("HSO4-", 1, 52.0),
    ],
)  # fmt: skip
def test_the_handbooks_conductivities(ion, charge, equivalent_s_cm2):
    by_conductivity = (
        GAS_CONSTANT_J_MOL_K * 298.15 * equivalent_s_cm2 * 1e-4 / (charge * FARADAY_C_MOL**2)
    )

    assert ion_diffusivity_m2_s(ion, 298.15) == pytest.approx(by_conductivity, rel=0.045)


@pytest.mark.parametrize(
    ("ion", "charge", "molar_s_cm2"),
    [
        ("Cu2+", 2, 107.2), ("Zn2+", 2, 105.6), ("Ni2+", 2, 98.0), ("Co2+", 2, 110.0),
        ("Cd2+", 2, 108.0), ("Mn2+", 2, 100.0), ("Mg2+", 2, 106.1), ("Fe2+", 2, 107.0),
        ("Fe3+", 3, 204.0), ("HSO4-", 1, 50.0),
    ],
)  # fmt: skip
def test_the_ions_of_marcus(ion, charge, molar_s_cm2):
    by_conductivity = (
        GAS_CONSTANT_J_MOL_K * 298.15 * molar_s_cm2 * 1e-4 / (charge**2 * FARADAY_C_MOL**2)
    )

    assert ion_diffusivity_m2_s(ion, 298.15) == pytest.approx(by_conductivity, rel=0.04)
