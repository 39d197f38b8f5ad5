"""CODATA recommended values of the fundamental constants, adjustments of 2018 and 2022.

Looked up: scipy.constants, which ships the CODATA tables; the SI's defining constants are exact
(SI Brochure, 9th ed., 2019). The value of 2014 is kept for reading old sheets.
"""

import pytest
import scipy.constants

from server.science import constants
from server.science.faraday import charge_for_c


def test_the_elementary_charge_is_exact():
    assert constants.ELEMENTARY_CHARGE_C == 1.602176634e-19
    assert constants.ELEMENTARY_CHARGE_C == scipy.constants.elementary_charge


def test_the_avogadro_constant_is_exact():
    assert constants.AVOGADRO_PER_MOL == 6.02214076e23
    assert constants.AVOGADRO_PER_MOL == scipy.constants.Avogadro


def test_the_faraday_constant():
    assert constants.FARADAY_C_MOL == pytest.approx(96485.33212331, rel=1e-12)
    assert constants.FARADAY_C_MOL == pytest.approx(
        scipy.constants.value("Faraday constant"), rel=1e-10
    )


def test_the_faraday_constant_is_the_product_of_its_two():
    product = constants.ELEMENTARY_CHARGE_C * constants.AVOGADRO_PER_MOL

    assert constants.FARADAY_C_MOL == pytest.approx(product, rel=1e-15)


def test_the_faraday_constant_of_2014_differs_by_eight_parts_in_a_thousand_million():
    assert constants.FARADAY_C_MOL == pytest.approx(96485.33289, abs=0.0015)


def test_the_gas_constant():
    assert constants.GAS_CONSTANT_J_MOL_K == pytest.approx(8.31446261815324, rel=1e-15)
    assert constants.GAS_CONSTANT_J_MOL_K == pytest.approx(scipy.constants.R, rel=1e-12)


def test_zero_degrees_celsius():
    assert constants.ZERO_CELSIUS_K == scipy.constants.zero_Celsius == 273.15


def test_the_molar_volume_of_an_ideal_gas():
    table = scipy.constants.value("molar volume of ideal gas (273.15 K, 101.325 kPa)")

    assert pytest.approx(table, rel=1e-9) == constants.IDEAL_GAS_M3_MOL
    # R T / p, from the exact constants (computed here).
    assert pytest.approx(8.31446261815324 * 273.15 / 101325, rel=1e-13) == (
        constants.IDEAL_GAS_M3_MOL
    )


def test_a_mole_of_electrons_in_ampere_hours():
    # Computed from F: F / 3600.
    assert constants.FARADAY_C_MOL / 3600 == pytest.approx(26.8014811454, rel=1e-11)
    one_mole = charge_for_c(constants.SILVER.molar_mass_kg_mol, constants.SILVER)
    assert one_mole / 3600 == pytest.approx(26.8014811454, rel=1e-11)
