"""Small worked sums on public teaching pages: Nernst's equation and adding Gibbs energies.

Looked up: a publisher's Nernst calculator page (1.159, 0.829 and 1.164 V); an answer page for a
Daniell cell (1.0704 V, with the rounded slope 0.0592 V); lecture notes "Chem 215, lecture 25"
(iron: -74.38 kJ for the first electron, +84.91 kJ for the other two, 0.0363 V for the three; the
sign is lost in the copy; silver and ferric iron: 0.029 V and K = 3.09).
"""

import math

import pytest

from server.science.equilibrium.gibbs import (
    equilibrium_ln_constant,
    gibbs_j_mol,
    volts_from_gibbs,
)
from server.science.equilibrium.potential import nernst_v


@pytest.mark.parametrize(
    ("standard_v", "electrons", "ratio", "kelvin", "volts"),
    [
        pytest.param(1.10, 2, 1 / 0.010, 298.15, 1.159, id="zinc and copper"),
        pytest.param(0.77, 1, 1 / 0.10, 298.15, 0.829, id="iron"),
    ],
)
def test_the_calculator_page(standard_v, electrons, ratio, kelvin, volts):
    found = nernst_v(standard_v, electrons, ratio, kelvin)

    assert found == pytest.approx(volts, abs=0.0005)


def test_the_calculator_page_at_310_kelvin_prints_a_slip():
    # 1.164 V is printed; its formula, 1.10 - (8.314 x 310 / (2 x 96485)) ln 0.010, gives 1.1615.
    by_hand = 1.10 - 8.314 * 310 / (2 * 96485) * math.log(0.010)

    found = nernst_v(1.10, 2, 1 / 0.010, 310.0)

    assert found == pytest.approx(by_hand, abs=5e-5)
    assert found == pytest.approx(1.164, abs=0.003)


def test_the_daniell_cell_of_the_answer_page():
    assert nernst_v(1.10, 2, 0.01 / 0.1, 298.0) == pytest.approx(1.0704, abs=0.00005)


def test_gibbs_energies_add_where_potentials_do_not():
    first, others = gibbs_j_mol(0.771, electrons=1), gibbs_j_mol(-0.440, electrons=2)

    assert first / 1000 == pytest.approx(-74.38, abs=0.02)
    assert others / 1000 == pytest.approx(84.91, abs=0.005)
    together = volts_from_gibbs(first + others, electrons=3)
    assert together == pytest.approx(-0.0363, abs=0.0001)


def test_the_constant_of_silver_and_iron():
    assert equilibrium_ln_constant(0.029, 1) == pytest.approx(math.log(3.09), abs=0.005)
