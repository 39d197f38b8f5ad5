"""Standard reversible voltages of electrowinning with oxygen on the anode, 25 degC, unit activity.

Status: computed from 1.229 V less the metal's standard potential, in a library of reference values
made apart from this program; the potentials are looked up (see the files on potentials). Nickel and
cadmium: computed here. Gibbs energies: NBS tables of chemical thermodynamic properties (Wagman et
al., J. Phys. Chem. Ref. Data 11, Suppl. 2, 1982), from memory.
"""

import pytest

from server.science.equilibrium.potential import reversible_volts
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


@pytest.mark.parametrize(
    ("name", "ion_kj_mol"),
    [
        pytest.param("copper electrowinning", 65.49, id="copper"),
        pytest.param("zinc electrowinning", -147.06, id="zinc"),
    ],
)
def test_gibbs_energies_of_formation_agree(name, ion_kj_mol):
    # M2+ + H2O = M + 1/2 O2 + 2 H+: 237.129 kJ/mol for the water, less that of the ion.
    from_gibbs_v = (237.129 - ion_kj_mol) * 1000 / (2 * 96485.33212)

    assert reversible_volts(PROCESSES[name]) == pytest.approx(from_gibbs_v, abs=0.003)


def test_the_gibbs_voltage_of_copper_as_recomputed():
    assert (237.129 - 65.49) * 1000 / (2 * 96485.33212) == pytest.approx(0.889456, abs=1e-6)
