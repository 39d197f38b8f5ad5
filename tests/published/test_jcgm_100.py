"""JCGM 100:2008 (GUM), annex H.1: calibration of an end gauge; and plain rules of clauses 4 to 6.

Looked up: public test suites that quote the annex: l = 50.000838 mm, u = 32 nm, 16 degrees of
freedom, k = 2.92, U = 93 nm at 99 %. Computed: 31.71 nm and 16.66 unrounded. The budget of a
current efficiency has our own numbers and is worked out by hand.
"""

import math

import numpy as np
import pytest

from server.science.constants import COPPER
from server.science.faraday import current_efficiency
from server.science.uncertainty.propagation import (
    combined,
    coverage_factor,
    effective_degrees_of_freedom,
    expanded,
    relative_product,
    standard_from_limit,
)

# Annex H.1: length of the standard (mm and nm), the difference measured, expansion and temperature.
STANDARD_NM = 50.000623e6
DIFFERENCE_NM = 215.0
EXPANSION_PER_K, AWAY_K = 11.5e-6, -0.1
# Sensitivities: standard, difference, expansion, temperature, and the two small differences.
SENSITIVITIES = np.array(
    [1.0, 1.0, 0.0, 0.0, -STANDARD_NM * AWAY_K, -STANDARD_NM * EXPANSION_PER_K]
)
ERRORS = np.array([25.0, 9.7, 1.2e-6, 0.41, 0.58e-6, 0.029])
DEGREES = np.array([18.0, 25.6, math.inf, math.inf, 50.0, 2.0])


def test_the_length_of_the_gauge():
    assert (STANDARD_NM + DIFFERENCE_NM) / 1e6 == pytest.approx(50.000838, abs=5e-7)


def test_its_combined_standard_uncertainty():
    u_nm = combined(SENSITIVITIES, ERRORS)

    assert u_nm == pytest.approx(32, abs=0.5)
    assert u_nm == pytest.approx(31.71, abs=0.005)


def test_its_effective_degrees_of_freedom():
    degrees = effective_degrees_of_freedom(SENSITIVITIES * ERRORS, DEGREES)

    assert math.floor(degrees) == 16
    assert degrees == pytest.approx(16.66, abs=0.06)


def test_its_coverage_factor_and_expanded_uncertainty():
    k = coverage_factor(0.99, degrees_of_freedom=16)

    assert k == pytest.approx(2.92, abs=0.005)
    assert expanded(combined(SENSITIVITIES, ERRORS), k) == pytest.approx(93, abs=0.5)


@pytest.mark.parametrize(
    ("level", "degrees", "k"),
    [(0.95, math.inf, 1.960), (0.99, math.inf, 2.576), (0.95, 10, 2.23), (0.99, 5, 4.03)],
)
def test_coverage_factors_of_table_g_2(level, degrees, k):
    # From memory of table G.2, to its digits.
    assert coverage_factor(level, degrees) == pytest.approx(k, abs=0.005)


def test_a_limit_becomes_a_standard_uncertainty():
    # Clause 4.3.7: a / sqrt 3, by hand 0.577350.
    assert standard_from_limit(1.0) == pytest.approx(0.577350, abs=5e-7)


def test_ten_resistors_from_one_reference():
    # Clause 5.2.2, example: ten resistors of 1000 ohm, each compared with one standard of 100 mohm
    # uncertainty: fully correlated, the sum has 1 ohm, not 0.32 ohm (figures from memory).
    shared = combined(np.ones(10), np.full(10, 0.100), np.ones((10, 10)))

    assert shared == pytest.approx(1.0, rel=1e-9)
    assert combined(np.ones(10), np.full(10, 0.100)) == pytest.approx(0.32, abs=0.005)


def test_the_budget_of_a_current_efficiency_by_hand():
    # 4850 kg (5), 30.00 kA (0.15), 144 h (0.25), one copper cell. Relative squares: (5/4850)^2 =
    # 1.06281e-6, (0.15/30)^2 = 2.5e-5, (0.25/144)^2 = 3.01408e-6; the current makes 86 % of it.
    squares = np.array([(5 / 4850) ** 2, (0.15 / 30) ** 2, (0.25 / 144) ** 2])
    share = current_efficiency(4850.0, 30e3 * 144 * 3600, COPPER)

    relative = relative_product(5 / 4850, 0.15 / 30, 0.25 / 144)

    assert share == pytest.approx(4850 * 2 * 26.8014811454 / (63.546 * 30 * 144), rel=1e-9)
    assert relative == pytest.approx(math.sqrt(squares.sum()), rel=1e-12)
    assert squares[1] / squares.sum() == pytest.approx(0.860, abs=0.0005)
    slopes = share * np.array([1 / 4850, -1 / 30, -1 / 144])
    assert combined(slopes, [5, 0.15, 0.25]) == pytest.approx(share * relative, rel=1e-9)
