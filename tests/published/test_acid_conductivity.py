"""Conductivity of sulfuric acid: F. Kohlrausch at 18 degC, and a correlation of battery models.

Kohlrausch's table (in F. Kohlrausch and L. Holborn, Das Leitvermoegen der Elektrolyte, 1898) is
from memory, as is the correlation tested, so the agreement is of two recollections. The other
correlation, W. B. Gu, C. Y. Wang and B. Y. Liaw, J. Electrochem. Soc. 144 (1997) 2053, is looked up
in the public battery model PyBaMM.
"""

import math

import pytest

from server.science.electrolyte.laliberte import density_from_shares_kg_m3
from server.science.electrolyte.salts import SULFURIC_ACID_KG_MOL
from server.science.electrolyte.sulfuric_acid import acid_conductivity_s_m


@pytest.mark.parametrize(
    ("share", "s_cm"),
    [
        (0.05, 0.2085), (0.10, 0.3915), (0.15, 0.5432), (0.20, 0.6527), (0.25, 0.7171),
        (0.30, 0.7388), (0.35, 0.7243), (0.40, 0.6800),
    ],
)  # fmt: skip
def test_kohlrausch(share, s_cm):
    acid_g_l = share * density_from_shares_kg_m3({"H2SO4": share}, 291.15)

    found = acid_conductivity_s_m(acid_g_l, 291.15) / 100

    assert found == pytest.approx(s_cm, rel=0.02)


@pytest.mark.parametrize("mol_m3", [500.0, 1000.0, 1800.0, 3000.0, 5000.0])
def test_the_battery_models_lie_a_ninth_higher(mol_m3):
    battery = mol_m3 * math.exp(6.23 - 1.34e-4 * mol_m3 - 1.61e-8 * mol_m3**2) * 1e-4

    found = acid_conductivity_s_m(mol_m3 * SULFURIC_ACID_KG_MOL)

    assert battery / found == pytest.approx(1.109, abs=0.001)
