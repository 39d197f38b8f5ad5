"""Gibbs energy and voltage, each from the other."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.science.constants import COPPER, INDIUM, SILVER, metal
from server.science.equilibrium.gibbs import (
    ION_FORMATION,
    equilibrium_ln_constant,
    gibbs_j_mol,
    thermoneutral_volts,
    volts_from_gibbs,
    winning_enthalpy_j_mol,
    winning_gibbs_j_mol,
)
from server.science.equilibrium.tables import TABLES
from server.science.errors import OutOfRange, UnknownName


@given(volts=st.floats(-10, 10), electrons=st.integers(1, 12))
def test_a_voltage_comes_back_from_its_gibbs_energy(volts, electrons):
    there = gibbs_j_mol(volts, electrons)

    assert volts_from_gibbs(there, electrons) == pytest.approx(volts, rel=1e-12, abs=1e-12)


def test_a_cell_that_gives_voltage_gives_energy():
    assert gibbs_j_mol(1.1, 2) < 0 < gibbs_j_mol(-1.1, 2)


def test_writing_a_reaction_twice_doubles_energy_and_leaves_voltage():
    assert gibbs_j_mol(-0.89, 4) == pytest.approx(2 * gibbs_j_mol(-0.89, 2))
    assert volts_from_gibbs(2 * 171_700.0, 4) == pytest.approx(volts_from_gibbs(171_700.0, 2))


def test_a_driven_reaction_has_a_constant_below_one():
    ln_k = equilibrium_ln_constant([-0.89, 0.0, 0.89], 2, 328.0)

    assert ln_k[0] == -ln_k[2]
    assert ln_k[1] == 0.0


def test_missing_stays_missing_and_leaves_neighbours_alone():
    for found in (
        gibbs_j_mol([np.nan, 1.0], 2),
        volts_from_gibbs([np.nan, 1.0], 2),
        equilibrium_ln_constant([np.nan, 1.0], 2),
        thermoneutral_volts([np.nan, 1.0], 2),
    ):
        assert np.isnan(found).tolist() == [True, False]


@pytest.mark.parametrize(
    "function", [gibbs_j_mol, volts_from_gibbs, equilibrium_ln_constant, thermoneutral_volts]
)
def test_a_reaction_exchanges_at_least_one_electron(function):
    with pytest.raises(OutOfRange, match="electrons"):
        function(1.0, 0)


def test_a_temperature_of_nothing_is_refused():
    with pytest.raises(OutOfRange, match="temperature_k"):
        equilibrium_ln_constant(1.0, 2, 0.0)


@pytest.mark.parametrize("couple", ION_FORMATION, ids=str)
def test_formation_gives_the_potentials_of_the_tables_within_their_spread(couple):
    known = metal(*couple)
    # Oxygen and water apart: 237.129 kJ/mol over two electrons.
    oxygen_v = 237_129.0 / (2 * 96485.33212)

    metal_v = oxygen_v + float(volts_from_gibbs(winning_gibbs_j_mol(known), couple[1]))

    printed = [table.metals[couple] for table in TABLES.values() if couple in table.metals]
    assert min(printed) - 0.015 < metal_v < max(printed) + 0.015


@pytest.mark.parametrize("couple", ION_FORMATION, ids=str)
def test_winning_takes_more_heat_than_work_from_all_but_silver(couple):
    known = metal(*couple)

    takes_heat = winning_enthalpy_j_mol(known) > winning_gibbs_j_mol(known)

    # The silver ion has more entropy than silver, by more than the oxygen brings.
    assert takes_heat == (couple != ("Ag", 1))


def test_silver_needs_half_a_water_for_each_atom():
    # By hand: 237.129 / 2 - 77.107 = 41.4575 kJ/mol.
    assert winning_gibbs_j_mol(SILVER) == pytest.approx(41_457.5)
    # By hand: 285.83 - 64.77 = 221.06 kJ/mol.
    assert winning_enthalpy_j_mol(COPPER) == pytest.approx(221_060.0)


@pytest.mark.parametrize("function", [winning_gibbs_j_mol, winning_enthalpy_j_mol])
def test_an_ion_without_data_is_refused(function):
    with pytest.raises(UnknownName, match="In with 3"):
        function(INDIUM)
