"""Copper's diffusion by temperature, from activation energies of two articles.

19.2 kJ/mol: Moats and Hiskey, Hydrometallurgy 56 (2000) 255, 40 to 65 degC. 26.8 kJ/mol: J. Appl.
Electrochem. 37 (2007) 1093, industrial refining electrolytes, 20 to 60 degC. Both energies looked
up in the abstracts. The first ratio is computed, in a library of reference values made apart from
this program; the second by hand. The two-temperature example: the page of a public calculator
(looked up), ten times the rate from 298 to 320 K, 82,983.82 J/mol.
"""

import pytest

from server.science.electrode.arrhenius import activation_j_mol, arrhenius_at, arrhenius_ratio


def test_from_40_to_65_degc():
    assert arrhenius_ratio(19_200.0, 313.15, 338.15) == pytest.approx(1.7249, abs=0.00005)


def test_from_20_to_60_degc_by_hand():
    # 1/293.15 - 1/333.15 = 4.09572e-4; times 26800 / 8.3144626 = 3223.299 is 1.320173; e^1.320173.
    assert arrhenius_ratio(26_800.0, 293.15, 333.15) == pytest.approx(3.7441, rel=1e-4)


def test_the_energy_comes_back_from_the_ratio():
    # The ratio's last digit is worth half of 1/17249 of R / 2.361e-4, about 1 J/mol.
    assert activation_j_mol(1.7249, 313.15, 338.15) == pytest.approx(19_200.0, abs=2.0)


def test_ten_times_the_rate_in_22_kelvin():
    assert activation_j_mol(10.0, 298.0, 320.0) == pytest.approx(82_983.82, abs=0.005)
    assert arrhenius_at(0.001, 82_983.82, 298.0, 320.0) == pytest.approx(0.01, rel=1e-6)
