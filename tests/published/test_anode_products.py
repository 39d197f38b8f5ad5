"""Oxygen, acid and hydrogen of electrowinning, from stoichiometry and standard atomic weights.

Status: computed, in a library of reference values made apart from this program; zinc's acid is
computed here. Weights as looked up in test_atomic_weights.py.
"""

import pytest

from server.science.constants import COPPER, NICKEL, ZINC
from server.science.stoichiometry import hydrogen_made_m3, oxygen_made_kg, sulfuric_acid_made_kg


def test_oxygen_per_kilogram_of_copper():
    assert oxygen_made_kg(1.0, COPPER) == pytest.approx(0.25177, rel=1e-4)


@pytest.mark.parametrize(
    ("known", "kg"),
    [
        pytest.param(COPPER, 1.54332, id="copper, recomputed"),
        pytest.param(NICKEL, 1.67092, id="nickel, recomputed"),
        # 2 x 1.008 + 32.06 + 4 x 15.999 = 98.072 g of acid for 65.38 g of zinc.
        pytest.param(ZINC, 98.072 / 65.38, id="zinc, by hand"),
    ],
)
def test_sulfuric_acid_per_kilogram_of_metal(known, kg):
    assert sulfuric_acid_made_kg(1.0, known) == pytest.approx(kg, rel=1e-5)


def test_hydrogen_per_ampere_hour():
    assert hydrogen_made_m3(3600.0) * 1000 == pytest.approx(0.418148, rel=1e-5)
