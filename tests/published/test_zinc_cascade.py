"""A Polish exercise in technical electrochemistry: a cascade of zinc cells.

Looked up: the problem: 6 cells in series at 10 kA, 92.5 %, 24 h, feed of 100 g/L of which half is
won. The answers are computed, in a library of reference values made apart from this program.
"""

import pytest

from server.science.constants import ZINC
from server.science.faraday import deposited_kg

MADE_KG = 6 * 0.925 * deposited_kg(10e3 * 86_400, ZINC)


def test_zinc_of_a_day():
    assert pytest.approx(1624.65, abs=0.005) == float(MADE_KG)


def test_electrolyte_of_a_day():
    assert MADE_KG / 50.0 == pytest.approx(32.493, abs=0.0005)
