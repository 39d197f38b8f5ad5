"""Oxygen and acid beside the metal, hydrogen in its stead."""

import numpy as np
import pytest

from server.science.constants import COPPER, METALS
from server.science.errors import OutOfRange
from server.science.faraday import charge_for_c
from server.science.stoichiometry import hydrogen_made_m3, oxygen_made_kg, sulfuric_acid_made_kg


@pytest.mark.parametrize("known", METALS.values(), ids=METALS)
def test_every_coulomb_makes_the_same_oxygen(known):
    charge_c = charge_for_c(1.0, known)

    assert oxygen_made_kg(1.0, known) / charge_c == pytest.approx(0.031998 / (4 * 96485.33212))


def test_acid_keeps_its_ratio_to_oxygen():
    ratio = sulfuric_acid_made_kg(5.0, COPPER) / oxygen_made_kg(5.0, COPPER)

    assert ratio == pytest.approx(2 * 98.072 / 31.998, rel=1e-9)


def test_missing_stays_missing():
    assert np.isnan(hydrogen_made_m3(np.nan))
    assert np.isnan(oxygen_made_kg(np.nan, COPPER))


@pytest.mark.parametrize(
    ("function", "arguments", "quantity"),
    [
        (oxygen_made_kg, (-1.0, COPPER), "metal_kg"),
        (sulfuric_acid_made_kg, (-1.0, COPPER), "metal_kg"),
        (hydrogen_made_m3, (-1.0,), "charge_c"),
    ],
)
def test_a_negative_quantity_is_named(function, arguments, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        function(*arguments)
