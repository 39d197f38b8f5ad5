"""Equilibrium potentials and the reversible voltage of a cell."""

import numpy as np
import pytest

from server.science.constants import ANTIMONY, BISMUTH, COPPER, MANGANESE, ZINC
from server.science.equilibrium.potential import (
    concentration_cell_volts,
    metal_potential_v,
    nernst_slope_v,
    nernst_v,
    oxygen_potential_v,
    reversible_volts,
)
from server.science.equilibrium.tables import CRC_54TH, CRC_RECENT, TABLES
from server.science.errors import OutOfRange, UnknownName
from server.science.processes import PROCESSES, process

REFINING = [known for known in PROCESSES.values() if known.kind == "electrorefining"]
WON_FROM_SULFATE = ["copper", "zinc", "nickel", "cobalt", "manganese", "cadmium"]


def test_two_electrons_halve_the_slope():
    assert nernst_slope_v(318.15, 2) == pytest.approx(nernst_slope_v(318.15) / 2)


def test_unit_activity_gives_the_standard_potential():
    assert metal_potential_v(COPPER) == CRC_RECENT.metal_v("Cu", 2)


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


@pytest.mark.parametrize("known", REFINING, ids=lambda known: known.name)
@pytest.mark.parametrize("table", TABLES.values(), ids=TABLES)
def test_refining_asks_for_nothing_whatever_the_bath_and_the_table(known, table):
    volts = reversible_volts(
        known,
        metal_activity=[0.001, 0.04, 1.0],
        temperature_k=333.15,
        table=table,
        standard_at_temperature=True,
    )

    assert volts.tolist() == [0.0, 0.0, 0.0]


def test_the_same_couple_on_both_sides_leaves_only_its_concentrations():
    # Anode richer than cathode: the difference of two potentials of one couple, in any table, is
    # (R T / n F) ln of the ratio, by hand 8.314462618 x 333.15 x ln 2 / (2 x 96485.33212).
    by_hand = 8.314462618 * 333.15 * np.log(2.0) / (2 * 96485.33212)

    for table in TABLES.values():
        difference = metal_potential_v(
            COPPER, 0.04, 333.15, table, standard_at_temperature=True
        ) - metal_potential_v(COPPER, 0.02, 333.15, table, standard_at_temperature=True)
        assert difference == pytest.approx(by_hand, rel=1e-9)
    assert concentration_cell_volts(0.04, 0.02, 2, 333.15) == pytest.approx(by_hand, rel=1e-9)


def test_equal_concentrations_ask_for_nothing():
    assert concentration_cell_volts(0.03, 0.03, 2) == 0.0


def test_a_poorer_anode_gives_voltage_back():
    volts = concentration_cell_volts([0.01, np.nan], 0.02, 1)

    assert volts[0] < 0.0
    assert np.isnan(volts).tolist() == [False, True]


def test_another_table_moves_the_cell_by_the_difference_of_its_figures():
    manganese = PROCESSES["manganese electrowinning"]

    newer = reversible_volts(manganese)
    older = reversible_volts(manganese, table=CRC_54TH)

    assert newer - older == pytest.approx(1.185 - 1.029, abs=1e-9)


def test_a_table_without_the_metal_refuses_and_says_what_it_has():
    with pytest.raises(UnknownName, match="Bi with 3") as refusal:
        metal_potential_v(BISMUTH, table=CRC_54TH)

    assert "crc 54th edition" in str(refusal.value)
    assert "Cu with 2" in refusal.value.known


@pytest.mark.parametrize("name", WON_FROM_SULFATE)
def test_a_warm_cell_asks_for_less_when_its_standard_potentials_move(name):
    known = PROCESSES[f"{name} electrowinning"]
    at = {"metal_activity": 0.03, "acid_activity": 0.8, "temperature_k": [298.15, 318.15]}

    fixed = reversible_volts(known, **at)
    moved = reversible_volts(known, **at, standard_at_temperature=True)

    assert moved[0] == fixed[0]
    # Oxygen loses 16.9 mV over 20 K, the metals move by less than 3 mV.
    assert moved[1] - fixed[1] == pytest.approx(-0.0169, abs=0.003)


def test_temperature_moves_a_standard_potential_from_25_degc_on():
    moved = metal_potential_v(ZINC, 1.0, 348.15, standard_at_temperature=True)

    # By hand: (41.63 + 112.1 - 130.684) / (2 F) x 50 K above -0.7618 V.
    assert moved == pytest.approx(-0.7618 + 23.046 / (2 * 96485.33212) * 50, abs=1e-9)


def test_a_metal_without_entropies_is_refused_only_when_they_are_asked_for():
    known = process("other", symbol="Te", electrons=4).metal

    assert metal_potential_v(known, temperature_k=330.0) == 0.568
    with pytest.raises(UnknownName, match="entropy"):
        metal_potential_v(known, temperature_k=330.0, standard_at_temperature=True)


def test_arrays_of_metal_acid_and_temperature_broadcast():
    volts = reversible_volts(
        PROCESSES["copper electrowinning"],
        metal_activity=np.full((3, 1), 0.02),
        acid_activity=np.array([0.5, 1.0]),
        temperature_k=318.15,
        standard_at_temperature=True,
    )

    assert volts.shape == (3, 2)
    assert (np.diff(volts, axis=1) > 0).all()


def test_manganese_moved_most_between_the_tables():
    volts = [float(metal_potential_v(MANGANESE, table=table)) for table in TABLES.values()]

    assert max(volts) - min(volts) == pytest.approx(0.156, abs=1e-9)
