"""General libraries: the same sums with SciPy's constants and periodictable's weights.

Looked up: scipy.constants (CODATA) and periodictable (IUPAC weights), as installed beside the
tests. Nothing of this program stands on the right-hand sides.
"""

import math

import numpy as np
import periodictable
import pytest
from scipy import constants as codata

from server.science.constants import METALS
from server.science.equilibrium.gibbs import equilibrium_ln_constant, gibbs_j_mol
from server.science.equilibrium.potential import nernst_slope_v, nernst_v
from server.science.faraday import charge_for_c, deposited_kg, equivalent_kg_c
from server.science.processes import PROCESSES
from server.science.stoichiometry import (
    SULFURIC_ACID_KG_MOL,
    hydrogen_made_m3,
    oxygen_made_kg,
    sulfuric_acid_made_kg,
)

FARADAY = codata.elementary_charge * codata.Avogadro


def weight_kg_mol(formula):
    """Molar mass of a formula from the library."""
    return periodictable.formula(formula).mass / 1000


@pytest.mark.parametrize("known", METALS.values(), ids=METALS)
def test_equivalents_of_every_metal(known):
    library = weight_kg_mol(known.symbol) / (known.electrons * FARADAY)

    assert equivalent_kg_c(known) == pytest.approx(library, rel=1e-7)


@pytest.mark.parametrize("name", PROCESSES)
def test_a_day_at_thirty_kiloamperes(name):
    known = PROCESSES[name].metal
    library = 30e3 * codata.day * weight_kg_mol(known.symbol) / (known.electrons * FARADAY)

    assert deposited_kg(30e3 * 86_400, known) == pytest.approx(library, rel=1e-7)
    assert charge_for_c(library, known) == pytest.approx(30e3 * 86_400, rel=1e-7)


@pytest.mark.parametrize("kelvin", [288.15, 298.15, 318.15, 338.15])
@pytest.mark.parametrize("electrons", [1, 2, 3, 4])
def test_the_slope_of_nernst(kelvin, electrons):
    library = math.log(10) * codata.Boltzmann * kelvin / (electrons * codata.elementary_charge)

    assert nernst_slope_v(kelvin, electrons) == pytest.approx(library, rel=1e-12)
    one_decade = nernst_v(0.0, electrons, 10.0, kelvin)
    assert one_decade == pytest.approx(library, rel=1e-12)


def test_an_electronvolt_for_each_electron_is_a_faraday():
    library = 2 * codata.value("Avogadro constant") * codata.eV

    assert gibbs_j_mol(-1.0, electrons=2) == pytest.approx(library, rel=1e-12)


def test_the_exponent_of_an_equilibrium():
    library = 2 * 0.5 * codata.eV / (codata.k * 300.0)

    assert equilibrium_ln_constant(0.5, 2, 300.0) == pytest.approx(library, rel=1e-12)


def test_the_weight_of_sulfuric_acid():
    # Conventional weights against the library's own for sulfur, 32.06 and 32.065 or alike.
    assert weight_kg_mol("H2SO4") == pytest.approx(SULFURIC_ACID_KG_MOL, rel=1e-4)


@pytest.mark.parametrize("known", METALS.values(), ids=METALS)
def test_oxygen_and_acid_beside_every_metal(known):
    moles = 1.0 / weight_kg_mol(known.symbol)
    oxygen = moles * known.electrons / 4 * weight_kg_mol("O2")
    acid = moles * known.electrons / 2 * weight_kg_mol("H2SO4")

    assert oxygen_made_kg(1.0, known) == pytest.approx(oxygen, rel=1e-4)
    assert sulfuric_acid_made_kg(1.0, known) == pytest.approx(acid, rel=1e-4)


def test_hydrogen_in_place_of_metal():
    molar_m3 = codata.value("molar volume of ideal gas (273.15 K, 101.325 kPa)")

    made = hydrogen_made_m3(np.array([3600.0, 2 * FARADAY]))

    assert made == pytest.approx([3600.0 / (2 * FARADAY) * molar_m3, molar_m3], rel=1e-9)
