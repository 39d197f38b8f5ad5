"""R. Llancaqueo, note on current efficiency as an indicator of copper electrorefining (web page).

Looked up: 40 cells in series, 8400 kAh each, 1.185 kg/kAh, 398 160 kg; 33.8 kA, 265 A/m2, 55
cathodes. The mass with the exact equivalent, the hours and the area are computed.
"""

import pytest

from server.science.constants import COPPER
from server.science.faraday import current_density_a_m2, deposited_kg
from server.science.units import coulombs_from_kah


def test_the_mass_of_the_section_to_the_notes_rounded_constant():
    kg = 40 * deposited_kg(coulombs_from_kah(8400.0), COPPER)

    # 1.185 is rounded to its last figure: 0.0005 in 1.185.
    assert kg == pytest.approx(398_160, rel=0.0005 / 1.185)


def test_the_mass_of_the_section_with_the_exact_constant():
    # By hand: 63.546 / (2 x 26.8014811454) = 1.18549420 kg/kAh; x 8400 x 40.
    kg = 40 * deposited_kg(coulombs_from_kah(8400.0), COPPER)

    assert kg == pytest.approx(63.546 / (2 * 26.8014811454) * 8400 * 40, rel=1e-9)


def test_the_length_of_the_cycle():
    hours = 8400.0 / 33.8

    assert hours == pytest.approx(248.521, abs=0.0005)
    assert deposited_kg(33.8e3 * hours * 3600, COPPER) == pytest.approx(
        deposited_kg(coulombs_from_kah(8400.0), COPPER)
    )


def test_the_plated_area_of_a_cathode():
    # Computed: 2.319 m2, both faces; it must give back the note's 265 A/m2.
    assert current_density_a_m2(33_800.0, 55 * 2.319) == pytest.approx(265.0, abs=0.05)
