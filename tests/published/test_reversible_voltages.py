"""Standard reversible voltages of electrowinning with oxygen on the anode, 25 degC, unit activity.

Status: computed from 1.229 V less the metal's standard potential, in a library of reference values
made apart from this program; the potentials are looked up (see the files on potentials). Nickel and
cadmium: computed here. Gibbs energies: NBS tables of chemical thermodynamic properties (Wagman et
al., J. Phys. Chem. Ref. Data 11, Suppl. 2, 1982), see test_nbs_tables.py. The bands of a working
cell: computed in the same library.
"""

import pytest

from server.science.constants import COPPER, NICKEL, ZINC
from server.science.equilibrium.gibbs import (
    thermoneutral_volts,
    volts_from_gibbs,
    winning_enthalpy_j_mol,
    winning_gibbs_j_mol,
)
from server.science.equilibrium.potential import reversible_volts
from server.science.equilibrium.tables import TABLES
from server.science.processes import PROCESSES


@pytest.mark.parametrize(
    ("name", "volts"),
    [
        pytest.param("copper electrowinning", 0.8871, id="copper, recomputed"),
        pytest.param("zinc electrowinning", 1.9908, id="zinc, recomputed"),
        pytest.param("cobalt electrowinning", 1.509, id="cobalt, recomputed"),
        pytest.param("manganese electrowinning", 2.414, id="manganese, recomputed"),
        pytest.param("nickel electrowinning", 1.229 + 0.257, id="nickel, by hand"),
        pytest.param("cadmium electrowinning", 1.229 + 0.403, id="cadmium, by hand"),
    ],
)
def test_what_the_reaction_asks_for(name, volts):
    assert reversible_volts(PROCESSES[name]) == pytest.approx(volts, abs=1e-9)


# By hand from each print: 1.229 V less the metal's figure.
IN_OTHER_TABLES = {
    ("crc 54th edition", "copper electrowinning"): 1.229 - 0.3419,
    ("crc 54th edition", "zinc electrowinning"): 1.229 + 0.7628,
    ("crc 54th edition", "nickel electrowinning"): 1.229 + 0.230,
    ("crc 54th edition", "manganese electrowinning"): 1.229 + 1.029,
    ("bard 1985", "copper electrowinning"): 1.229 - 0.340,
    ("bard 1985", "zinc electrowinning"): 1.229 + 0.7626,
    ("bard 1985", "nickel electrowinning"): 1.229 + 0.257,
    ("bard 1985", "cobalt electrowinning"): 1.229 + 0.277,
    ("bard 1985", "manganese electrowinning"): 1.229 + 1.18,
    ("bard 1985", "cadmium electrowinning"): 1.229 + 0.4025,
    ("corrosion textbook", "copper electrowinning"): 1.229 - 0.3402,
    ("corrosion textbook", "cobalt electrowinning"): 1.229 + 0.28,
}


@pytest.mark.parametrize(("key", "name"), IN_OTHER_TABLES)
def test_what_it_asks_for_in_another_table(key, name):
    found = reversible_volts(PROCESSES[name], table=TABLES[key])

    assert found == pytest.approx(IN_OTHER_TABLES[key, name], abs=1e-9)


@pytest.mark.parametrize(
    ("name", "known", "by_hand_v"),
    [
        # M2+ + H2O = M + 1/2 O2 + 2 H+: 237.129 kJ/mol for the water, less that of the ion.
        pytest.param("copper electrowinning", COPPER, 0.889456, id="copper, recomputed"),
        pytest.param(
            "zinc electrowinning",
            ZINC,
            (237.129 + 147.06) * 1000 / (2 * 96485.33212),
            id="zinc, by hand",
        ),
    ],
)
def test_gibbs_energies_of_formation_agree(name, known, by_hand_v):
    from_gibbs_v = -volts_from_gibbs(winning_gibbs_j_mol(known), electrons=2)

    assert from_gibbs_v == pytest.approx(by_hand_v, abs=1e-6)
    assert reversible_volts(PROCESSES[name]) == pytest.approx(from_gibbs_v, abs=0.003)


def test_nickel_from_gibbs_energies_lies_with_the_other_generation():
    # By hand, 237.129 + 45.6 kJ/mol over two electrons: 1.4651 V, between the -0.230 V of the older
    # tables (1.459 V) and the -0.257 V of the newer (1.486 V).
    from_gibbs_v = -volts_from_gibbs(winning_gibbs_j_mol(NICKEL), electrons=2)

    assert from_gibbs_v == pytest.approx((237.129 + 45.6) / (2 * 96.48533212), abs=1e-6)
    assert 1.459 < from_gibbs_v < 1.486


def test_heat_of_splitting_water():
    # Common practice in electrolysis of water: 1.48 V thermoneutral, 1.23 V reversible.
    assert thermoneutral_volts(285_830.0, 2) == pytest.approx(1.48, abs=0.005)
    assert -volts_from_gibbs(237_129.0, 2) == pytest.approx(1.23, abs=0.005)


@pytest.mark.parametrize(
    ("known", "enthalpy_kj_mol"),
    [
        # By hand: 285.83 less the ion's 64.77, -153.89 and -54.0 kJ/mol.
        pytest.param(COPPER, 285.83 - 64.77, id="copper"),
        pytest.param(ZINC, 285.83 + 153.89, id="zinc"),
        pytest.param(NICKEL, 285.83 + 54.0, id="nickel"),
    ],
)
def test_the_voltage_above_which_a_cell_heats_its_bath(known, enthalpy_kj_mol):
    found = thermoneutral_volts(winning_enthalpy_j_mol(known), electrons=2)

    assert found == pytest.approx(enthalpy_kj_mol * 1000 / (2 * 96485.33212), rel=1e-9)


@pytest.mark.parametrize("known", [p for p in PROCESSES.values() if p.kind == "electrorefining"])
def test_refining_has_none(known):
    assert reversible_volts(known) == 0.0


@pytest.mark.parametrize(
    ("name", "low", "high", "metal", "acid", "kelvin"),
    [
        # Activities of our own choosing, as such electrolytes have them.
        pytest.param("copper electrowinning", 0.89, 0.95, 0.03, 0.8, 318.15, id="copper"),
        pytest.param("zinc electrowinning", 1.99, 2.05, 0.04, 0.8, 311.15, id="zinc"),
    ],
)
def test_working_cells_lie_in_the_computed_bands(name, low, high, metal, acid, kelvin):
    volts = reversible_volts(PROCESSES[name], metal, acid, kelvin)

    assert low <= volts <= high
