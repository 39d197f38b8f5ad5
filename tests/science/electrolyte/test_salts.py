import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.science.electrolyte.laliberte_fits import SALT_FITS
from server.science.electrolyte.salts import (
    SULFATES,
    SULFURIC_ACID_KG_MOL,
    bath_g_l,
    metal_g_l_from_salt,
    salt_g_l_from_metal,
    sulfate,
)
from server.science.errors import OutOfRange, UnknownName


@pytest.mark.parametrize(
    ("symbol", "formula", "g_mol"),
    [
        # By hand from the atomic weights: metal + 32.06 + 4 x 15.999.
        ("Cu", "CuSO4", 63.546 + 96.056),
        ("Zn", "ZnSO4", 65.38 + 96.056),
        ("Ni", "NiSO4", 58.6934 + 96.056),
        ("Na", "Na2SO4", 2 * 22.98976928 + 96.056),
        ("NH4", "(NH4)2SO4", 2 * (14.007 + 4 * 1.008) + 96.056),
        ("Fe3+", "Fe2(SO4)3", 2 * 55.845 + 3 * 96.056),
    ],
)
def test_a_mole_weighs_what_its_atoms_weigh(symbol, formula, g_mol):
    known = sulfate(symbol)

    assert known.formula == formula
    assert known.molar_mass_kg_mol * 1000 == pytest.approx(g_mol, rel=1e-12)


def test_sulfuric_acid_weighs_two_hydrogens_more():
    assert SULFURIC_ACID_KG_MOL * 1000 == pytest.approx(2 * 1.008 + 96.056, rel=1e-12)


def test_the_density_of_every_sulfate_is_known():
    assert {known.formula for known in SULFATES.values()} | {"H2SO4"} == set(SALT_FITS)


def test_capitals_do_not_matter():
    assert sulfate("cu") is sulfate("Cu")


def test_ferric_sulfate_holds_two_irons():
    # By hand: 399.858 / 111.69 = 3.5801.
    assert salt_g_l_from_metal(1.0, "Fe3+") == pytest.approx(399.858 / 111.69, rel=1e-9)


@given(g_l=st.floats(0.0, 500.0), symbol=st.sampled_from(sorted(SULFATES)))
def test_there_and_back_is_the_same_metal(g_l, symbol):
    assert metal_g_l_from_salt(salt_g_l_from_metal(g_l, symbol), symbol) == pytest.approx(g_l)


def test_a_missing_assay_stays_missing():
    assert np.isnan(salt_g_l_from_metal([45.0, math.nan], "Cu")).tolist() == [False, True]


def test_a_bath_is_written_by_formula():
    bath = bath_g_l({"Zn": [50.0, 60.0], "Mn": 5.0}, acid_g_l=170.0)

    assert list(bath) == ["ZnSO4", "MnSO4", "H2SO4"]
    assert bath["ZnSO4"] == pytest.approx(np.array([50.0, 60.0]) * 161.436 / 65.38)
    assert bath["H2SO4"] == 170.0


def test_an_unknown_cation_is_named():
    with pytest.raises(UnknownName, match="Xx"):
        sulfate("Xx")


def test_a_negative_concentration_is_named():
    with pytest.raises(OutOfRange, match="Cu_g_l"):
        bath_g_l({"Cu": -1.0})
    with pytest.raises(OutOfRange, match="CuSO4_g_l"):
        metal_g_l_from_salt(-1.0, "Cu")
    with pytest.raises(OutOfRange, match="acid_g_l"):
        bath_g_l({}, acid_g_l=-1.0)
