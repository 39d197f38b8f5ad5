"""University course notes on copper electrowinning, scheme of 2024 (a public repository).

Looked up: cell potential -0.89 V, |dG| 171.7 kJ/mol. The notes print 63.07 for |ln K| at 328 K;
n F E / (R T) gives 62.98, so the print is a slip. Computed with F and R rounded to four or five
figures it is 62.979, with the exact ones 62.976.
"""

import pytest

from server.science.equilibrium.gibbs import equilibrium_ln_constant, gibbs_j_mol
from server.science.equilibrium.potential import nernst_slope_v, reversible_volts
from server.science.processes import PROCESSES

COPPER_ELECTROWINNING = PROCESSES["copper electrowinning"]


def test_the_standard_cell_voltage():
    assert reversible_volts(COPPER_ELECTROWINNING) == pytest.approx(0.89, abs=0.005)


def test_the_gibbs_energy_of_the_notes():
    # The notes work with 0.89 V; 2 F E in kJ/mol, to the digits printed.
    assert gibbs_j_mol(-0.89, electrons=2) / 1000 == pytest.approx(171.7, abs=0.05)


def test_the_equilibrium_constant_without_the_slip():
    ln_k = float(equilibrium_ln_constant(0.89, electrons=2, temperature_k=328.0))

    assert ln_k == pytest.approx(62.979, abs=0.01)
    # By hand with the exact constants: 2 x 96485.33212 x 0.89 / (8.314462618 x 328).
    by_hand = 2 * 96485.33212 * 0.89 / (8.314462618 * 328)
    assert ln_k == pytest.approx(by_hand, rel=1e-9)
    # The same through the slope: E over the slope, in decades.
    assert 0.89 / float(nernst_slope_v(328.0, 2)) * 2.302585093 == pytest.approx(ln_k, rel=1e-9)
