"""Equilibrium potentials and the reversible voltage of a cell."""

import numpy as np
import pytest

from server.science.constants import ANTIMONY, COPPER, ZINC
from server.science.errors import OutOfRange, UnknownName
from server.science.equilibrium.potential import (
    STANDARD_POTENTIALS_V,
    metal_potential_v,
    nernst_slope_v,
    nernst_v,
    oxygen_potential_v,
    reversible_volts,
)
from server.science.processes import PROCESSES, process


def test_two_electrons_halve_the_slope():
    assert nernst_slope_v(318.15, 2) == pytest.approx(nernst_slope_v(318.15) / 2)


def test_unit_activity_gives_the_standard_potential():
    assert metal_potential_v(COPPER) == STANDARD_POTENTIALS_V["Cu", 2]


def test_thinner_solution_lowers_the_metal_and_raises_the_cell():
    volts = reversible_volts(PROCESSES["copper electrowinning"], metal_activity=[1.0, 0.1, 0.01])

    np.testing.assert_allclose(np.diff(volts), nernst_slope_v(298.15, 2), rtol=1e-12)


def test_acid_raises_the_oxygen_potential():
    assert oxygen_potential_v(10.0) > oxygen_potential_v(1.0) > oxygen_potential_v(1e-7)


@pytest.mark.parametrize("known", PROCESSES.values(), ids=PROCESSES)
def test_every_process_has_its_reversible_voltage(known):
    volts = float(reversible_volts(known))

    if known.kind == "electrorefining":
        assert volts == 0.0
    else:
        assert 0.5 < volts < known.typical_volts[0]


def test_an_unknown_anode_reaction_has_no_voltage():
    assert np.isnan(reversible_volts(process("other", symbol="Cr", electrons=3)))


@pytest.mark.parametrize("name", ["zinc electrowinning", "copper electrorefining"])
def test_missing_activity_gives_no_voltage(name):
    volts = reversible_volts(PROCESSES[name], metal_activity=[1.0, np.nan])

    assert np.isnan(volts).tolist() == [False, True]


def test_a_couple_that_is_not_tabulated_is_refused():
    with pytest.raises(UnknownName, match="Sb with 3"):
        metal_potential_v(ANTIMONY)


@pytest.mark.parametrize(
    ("arguments", "quantity"),
    [
        ({"metal_activity": 0.0}, "metal_activity"),
        ({"acid_activity": -1.0}, "acid_activity"),
        ({"temperature_k": 0.0}, "temperature_k"),
        ({"oxygen_bar": 0.0}, "oxygen_bar"),
    ],
)
@pytest.mark.parametrize("name", ["zinc electrowinning", "copper electrorefining"])
def test_what_cannot_be_is_refused_for_every_kind(name, arguments, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        reversible_volts(PROCESSES[name], **arguments)


@pytest.mark.parametrize("electrons", [0, -2])
def test_a_couple_exchanges_at_least_one_electron(electrons):
    with pytest.raises(OutOfRange, match="electrons"):
        nernst_v(0.34, electrons, 1.0)


def test_a_daniell_cell_is_the_difference_of_its_halves():
    volts = metal_potential_v(COPPER) - metal_potential_v(ZINC)

    assert volts == pytest.approx(1.1037, abs=1e-4)
