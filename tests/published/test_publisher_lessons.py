"""A textbook publisher's Faraday calculator page and its analytical-chemistry lesson.

Looked up: the questions, and for aluminium the answer, 2.2e3 s, two figures. The other answers are
computed, copper's in a library of reference values made apart from this program, silver's by hand.
"""

import pytest

from server.science.constants import ALUMINIUM, COPPER, SILVER
from server.science.faraday import charge_for_c, deposited_kg


def test_copper_from_half_an_hour():
    assert deposited_kg(2.50 * 1800, COPPER) * 1000 == pytest.approx(1.48187, abs=5e-6)


def test_time_for_half_a_gram_of_silver():
    # By hand: 0.500 / 107.8682 x 96485.33212 / 0.750 A.
    seconds = charge_for_c(0.500e-3, SILVER) / 0.750

    assert seconds == pytest.approx(0.500 / 107.8682 * 96485.33212 / 0.750, rel=1e-9)
    assert seconds == pytest.approx(596.3, abs=0.05)


def test_time_to_plate_aluminium_as_published():
    seconds = charge_for_c(0.825e-3, ALUMINIUM) / 4.1

    assert seconds == pytest.approx(2.2e3, abs=50)
    # Computed with 26.982 g/mol: 2158.67 s.
    assert seconds == pytest.approx(2158.67, rel=2e-5)
