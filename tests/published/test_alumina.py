"""Alumina in molten cryolite: reversible voltages with a carbon and with an inert anode.

Looked up: lecture slides on the decomposition of alumina dissolved in cryolite (2.2 V to oxygen,
2.21 V by another model, 1.19 V to carbon dioxide, 1.05 V to carbon monoxide, near the working
temperature, which they do not state in what could be read). "1.2 V" in textbooks: from memory.
Gibbs energies of the NIST-JANAF tables (Chase, 1998): from memory. Those of NASA TM-4513 (1993):
worked out here from its coefficients as a public library (Cantera 3.2) ships them.
"""

import pytest

from server.science.equilibrium.alumina import FORMATION_LINES, alumina_volts
from server.science.equilibrium.potential import ALUMINA_CARBON_VOLTS, reversible_volts
from server.science.processes import PROCESSES

# Kelvin: Al2O3, CO2, CO, kJ/mol.
NASA = {
    1100.0: (-1328.100, -395.974, -209.088),
    1200.0: (-1294.996, -396.069, -217.833),
    1300.0: (-1261.987, -396.146, -226.525),
    1400.0: (-1229.074, -396.207, -235.166),
}
JANAF_FROM_MEMORY = {
    1100.0: (-1328.286, -396.001, -209.075),
    1200.0: (-1295.228, -396.098, -217.819),
    1300.0: (-1262.264, -396.177, -226.509),
    1400.0: (-1229.393, -396.240, -235.149),
}


def line_kj_mol(species, kelvin):
    """Gibbs energy of formation on the straight line."""
    at_zero, slope = FORMATION_LINES[species]
    return (at_zero + slope * kelvin) / 1000


@pytest.mark.parametrize("kelvin", NASA)
@pytest.mark.parametrize(("place", "species"), [(0, "Al2O3"), (1, "CO2"), (2, "CO")])
def test_gibbs_energies_of_formation(kelvin, place, species):
    found = line_kj_mol(species, kelvin)

    assert found == pytest.approx(NASA[kelvin][place], abs=0.1)
    assert found == pytest.approx(JANAF_FROM_MEMORY[kelvin][place], abs=0.4)


def test_carbon_dioxide_by_hand():
    # 2 Al2O3 + 3 C = 4 Al + 3 CO2, 12 F, at 1200 K: (3 x -396.069 + 2 x 1294.996) kJ / (12 F).
    by_hand = (2 * 1294.996 - 3 * 396.069) / (12 * 96.48533212)

    assert alumina_volts(1200.0) == pytest.approx(by_hand, abs=0.0002)


@pytest.mark.parametrize(
    ("gas", "volts", "tolerance"),
    [
        # The digits of the slides; for carbon monoxide other data move the figure by 0.02 V.
        pytest.param("CO2", 1.19, 0.005, id="carbon dioxide"),
        pytest.param("CO", 1.05, 0.03, id="carbon monoxide"),
        pytest.param("O2", 2.21, 0.015, id="oxygen"),
        pytest.param("O2", 2.2, 0.05, id="oxygen, rounded"),
    ],
)
def test_the_voltages_of_the_slides_at_960_degc(gas, volts, tolerance):
    assert alumina_volts(1233.15, gas) == pytest.approx(volts, abs=tolerance)


def test_the_figure_of_the_literature_stands_where_no_temperature_is_asked_for():
    process = PROCESSES["aluminium electrolysis"]

    assert reversible_volts(process) == pytest.approx(1.19, abs=0.005)
    assert reversible_volts(process) == pytest.approx(1.2, abs=0.05)
    at_960 = reversible_volts(process, temperature_k=1233.15, standard_at_temperature=True)
    assert at_960 == pytest.approx(ALUMINA_CARBON_VOLTS, abs=0.005)
