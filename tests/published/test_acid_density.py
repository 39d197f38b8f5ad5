"""C. E. L. Myhre, C. J. Nielsen and O. W. Saastad, J. Chem. Eng. Data 43 (1998) 617.

Their polynomial of the density of sulfuric acid, against the model of Laliberte used here. Status:
1396 kg/m3 (0.50 at 293 K, cut, not rounded), 1063.8 (0.10 at 298 K) and 1058.5 (1 mol/L at 298.15
K) are looked up, in the documentation and the tests of the public library chempy 0.10.2, which
gives DOI 10.1021/je980013g; the others are computed with that library. Two fits to different
collections of measurements: 0.2 % is what may lie between them.
"""

import pytest

from server.science.electrolyte.laliberte import density_from_shares_kg_m3, density_kg_m3


def test_half_acid_as_documented():
    assert density_from_shares_kg_m3({"H2SO4": 0.50}, 293.0) == pytest.approx(1396, abs=1)


@pytest.mark.parametrize(
    ("share", "kelvin", "kg_m3"),
    [
        pytest.param(0.10, 298.0, 1063.8, id="0.10 at 298 K, looked up"),
        pytest.param(0.18, 298.15, 1121.750, id="0.18 at 25 degC, computed"),
        pytest.param(0.10, 293.15, 1065.859, id="0.10 at 20 degC, computed"),
        pytest.param(0.15, 293.15, 1102.161, id="0.15 at 20 degC, computed"),
        pytest.param(0.30, 293.15, 1218.908, id="0.30 at 20 degC, computed"),
        pytest.param(0.20, 313.15, 1129.912, id="0.20 at 40 degC, computed"),
    ],
)
def test_acid_by_mass(share, kelvin, kg_m3):
    found = density_from_shares_kg_m3({"H2SO4": share}, kelvin)

    assert found == pytest.approx(kg_m3, rel=0.002)


def test_a_mole_in_a_litre():
    assert density_kg_m3({"H2SO4": 98.078}, 298.15) == pytest.approx(1058.5, rel=0.002)
