"""JCGM 100:2008 (GUM), annexes H.1 to H.3, and plain rules of clauses 4 to 6.

Looked up in public test suites and documentation that quote the annex. H.1, end gauge: 50.000838
mm, u = 32 nm, 16 degrees of freedom, k = 2.92, U = 93 nm at 99 %; 31.71 nm and 16.66 unrounded are
computed. H.2, resistance and reactance: the five readings and the results of table H.4. H.3,
thermometer: the eleven readings, -0.1712(29), 0.00218(67), -0.93, -0.1494(41). The budget of a
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
from server.science.uncertainty.sensitivities import propagated, propagated_together

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


def test_its_budget_by_trying_the_model():
    length = propagated(
        lambda standard, difference, alpha, theta, d_alpha, d_theta: (
            standard + difference - standard * (d_alpha * theta + alpha * d_theta)
        ),
        [STANDARD_NM, DIFFERENCE_NM, EXPANSION_PER_K, AWAY_K, 0.0, 0.0],
        ERRORS,
        degrees_of_freedom=DEGREES,
    )

    assert length.value / 1e6 == pytest.approx(50.000838, abs=5e-7)
    assert length.standard_uncertainty == pytest.approx(31.71, abs=0.005)
    assert length.degrees_of_freedom == pytest.approx(16.66, abs=0.06)
    assert list(length.sensitivities.values()) == pytest.approx(list(SENSITIVITIES), rel=1e-7)
    assert sum(length.contributions.values()) == pytest.approx(1.0)


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


def test_the_budget_of_a_current_efficiency_by_trying_it():
    budget = propagated(
        lambda kg, amps, seconds: current_efficiency(kg, amps * seconds, COPPER),
        {"kg": 4850.0, "amps": 30e3, "seconds": 144 * 3600.0},
        {"kg": 5.0, "amps": 150.0, "seconds": 900.0},
    )

    # By hand: 4850 x 2 x 26.8014811454 / (63.546 x 30 x 144) = 259974.37 / 274518.72 = 0.9470187;
    # relative u = sqrt(1.06281e-6 + 2.5e-5 + 3.01408e-6) = 0.0053923.
    assert budget.value == pytest.approx(0.9470187, rel=1e-6)
    assert budget.standard_uncertainty == pytest.approx(0.9470187 * 0.0053923, rel=1e-3)
    assert budget.contributions["amps"] == pytest.approx(0.860, abs=0.0005)


# Annex H.2: five readings of voltage (V), current (A) and phase (rad), table H.2.
READINGS = np.array(
    [
        [5.007, 4.994, 5.005, 4.990, 4.999],
        [19.663e-3, 19.639e-3, 19.640e-3, 19.685e-3, 19.678e-3],
        [1.0456, 1.0438, 1.0468, 1.0428, 1.0433],
    ]
)


def test_resistance_and_reactance_from_the_same_readings():
    of_means = READINGS.std(axis=1, ddof=1) / math.sqrt(5)

    result = propagated_together(
        lambda v, i, phase: [v / i * math.cos(phase), v / i * math.sin(phase), v / i],
        READINGS.mean(axis=1),
        of_means,
        np.corrcoef(READINGS),
    )

    assert of_means * [1e3, 1e6, 1e4] == pytest.approx([3.2, 9.5, 7.5], abs=0.05)
    assert np.corrcoef(READINGS)[np.triu_indices(3, 1)] == pytest.approx(
        [-0.36, 0.86, -0.65], abs=0.005
    )
    assert result.values == pytest.approx([127.732, 219.847, 254.260], abs=0.0006)
    # The annex rounds the correlations first, which moves the last digit of the second.
    assert result.standard_uncertainties == pytest.approx([0.071, 0.295, 0.236], abs=0.0006)
    assert result.correlation[np.triu_indices(3, 1)] == pytest.approx(
        [-0.588, -0.485, 0.993], abs=0.0006
    )


def test_the_correction_of_a_thermometer_from_its_line():
    readings = np.array(
        [21.521, 22.012, 22.512, 23.003, 23.507, 23.999, 24.513, 25.002, 25.503, 26.010, 26.511]
    )
    corrections = -np.array(
        [0.171, 0.169, 0.166, 0.159, 0.164, 0.165, 0.156, 0.157, 0.159, 0.161, 0.160]
    )
    line, covariance = np.polyfit(readings - 20.0, corrections, 1, cov=True)
    slope_u, start_u = np.sqrt(np.diag(covariance))
    relation = covariance[0, 1] / (slope_u * start_u)

    at_30 = propagated(
        lambda start, slope: start + slope * (30.0 - 20.0),
        {"start": line[1], "slope": line[0]},
        {"start": start_u, "slope": slope_u},
        {("start", "slope"): relation},
    )

    assert line == pytest.approx([0.00218, -0.1712], abs=5e-6 + 5e-5)
    assert (start_u, slope_u) == pytest.approx((0.0029, 0.00067), abs=5e-5)
    assert relation == pytest.approx(-0.930, abs=0.0005)
    assert at_30.value == pytest.approx(-0.1494, abs=5e-5)
    assert at_30.standard_uncertainty == pytest.approx(0.0041, abs=5e-5)
