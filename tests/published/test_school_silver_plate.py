"""A school-text question: 200 cm2 of brass, 0.10 mm of silver on both faces, 15 A, 10.5 g/cm3.

Looked up: the question (the page's worked mass prints kg by a slip; 42 g is right). The time is
computed, in a library of reference values made apart from this program, with 107.9 g/mol.
"""

import pytest

from server.science.constants import SILVER
from server.science.faraday import charge_for_c, deposit_thickness_m


def test_the_mass_gives_back_the_thickness():
    both_faces_m2 = 2 * 200e-4

    assert deposit_thickness_m(42.0e-3, both_faces_m2, SILVER) * 1000 == pytest.approx(0.10)


def test_the_time():
    seconds = charge_for_c(42.0e-3, SILVER) / 15.0

    # The question's 107.9 is rounded to its last figure.
    assert seconds == pytest.approx(2503.79, rel=0.05 / 107.9)
