"""OpenStax, Chemistry 2e, section 17.4: examples 17.6 to 17.8 and their "check your learning".

Looked up: a public copy of the section. The book works with 0.0592 V and rounds on the way; where
its last digit comes from a rounded step the tolerance says so.
"""

import math

import pytest

from server.science.constants import ALUMINIUM, COBALT, COPPER, IRON, SILVER, TIN, ZINC
from server.science.equilibrium.gibbs import equilibrium_ln_constant, gibbs_j_mol
from server.science.equilibrium.potential import concentration_cell_volts, metal_potential_v
from server.science.equilibrium.tables import DEFAULT_TABLE


def test_silver_ions_and_iron():
    # Example 17.6: +1.247 V, -240.6 kJ/mol, log K 42.128.
    volts = float(metal_potential_v(SILVER) - metal_potential_v(IRON))

    assert volts == pytest.approx(1.247, abs=0.0005)
    assert gibbs_j_mol(volts, electrons=2) / 1000 == pytest.approx(-240.6, abs=0.1)
    decades = equilibrium_ln_constant(volts, electrons=2) / math.log(10)
    # 0.0592 V is 0.07 % above the slope at 25 degC.
    assert decades == pytest.approx(42.128, rel=0.001)


def test_tin_and_cupric_ions():
    # Check your learning: +0.291 V, -56.2 kJ/mol, K = 6.8e9, from the rounded 0.291 V.
    volts = DEFAULT_TABLE.couple_v("Cu2+/Cu+") - float(metal_potential_v(TIN))

    assert volts == pytest.approx(0.291, abs=0.00051)
    assert gibbs_j_mol(0.291, electrons=2) / 1000 == pytest.approx(-56.2, abs=0.05)
    assert equilibrium_ln_constant(0.291, electrons=2) == pytest.approx(math.log(6.8e9), rel=0.001)


def test_cobalt_and_ferrous_ions_of_unequal_strength():
    # Example 17.7: 1.94 M iron, 0.15 M cobalt, -0.17 V + 0.033 V = -0.14 V.
    volts = metal_potential_v(IRON, 1.94) - metal_potential_v(COBALT, 0.15)

    assert volts == pytest.approx(-0.14, abs=0.006)
    standard = metal_potential_v(IRON) - metal_potential_v(COBALT)
    assert volts - standard == pytest.approx(0.033, abs=0.0005)


def test_aluminium_and_copper():
    # Check your learning: 0.15 M aluminium, 0.025 M copper, +1.97 V.
    volts = metal_potential_v(COPPER, 0.025) - metal_potential_v(ALUMINIUM, 0.15)

    assert volts == pytest.approx(1.97, abs=0.005)


def test_a_concentration_cell_of_zinc():
    # Example 17.8: 0.10 M and 0.50 M, +0.021 V, its standard voltage 0.000 V.
    given = -concentration_cell_volts(0.10, 0.50, electrons=2)

    assert given == pytest.approx(0.021, abs=0.0005)
    difference = metal_potential_v(ZINC, 0.50) - metal_potential_v(ZINC, 0.10)
    assert difference == pytest.approx(given, rel=1e-9)


def test_a_concentration_cell_that_has_run_out():
    # Check your learning: 0.30 M on both sides, 0.000 V.
    assert concentration_cell_volts(0.30, 0.30, electrons=2) == 0.0
