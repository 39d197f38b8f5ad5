"""JCGM 101:2008 (Supplement 1 to the GUM), clauses 9.2, 9.3 and 9.5: propagation by trial.

Looked up: clause 9.5, gauge block, as reproduced in an open article (Metrology, 2022): 838 nm, 36
nm, 99 % from 745 to 932 nm; its inputs are from memory of table 10. Clauses 9.2 and 9.3: figures
computed by convolution and by four million trials, in a library of reference values made apart from
this program; they agree with the printed ones as recalled (from memory). Tolerances leave room for
the scatter of the trials.
"""

import numpy as np
import pytest

from server.science.uncertainty.monte_carlo import monte_carlo, normal, rectangular
from server.science.uncertainty.propagation import combined, coverage_factor

ROOT_3 = 3.0**0.5
UNIT_RECTANGLE = rectangular(-ROOT_3, ROOT_3)


def total(*inputs):
    """Clause 9.2: the sum of four inputs."""
    return sum(inputs)


def student(mean, scale, degrees):
    """A draw from a scaled and shifted t-distribution (6.4.9)."""
    return lambda rng, trials: mean + scale * rng.standard_t(degrees, trials)


def curvilinear_trapezoid(low, high, doubt):
    """A draw between two limits that are themselves in doubt (6.4.3)."""

    def draw(rng, trials):
        start = (low - doubt) + 2 * doubt * rng.random(trials)
        return start + (low + high - 2 * start) * rng.random(trials)

    return draw


def arc_sine(rng, trials):
    """A temperature that swings by half a kelvin (6.4.6)."""
    return 0.5 * np.sin(2 * np.pi * rng.random(trials))


def test_four_normals():
    result = monte_carlo(total, [normal(0, 1)] * 4, np.random.default_rng(seed=922), 1_000_000)

    assert result.standard_uncertainty == pytest.approx(2.00, abs=0.01)
    assert result.high == pytest.approx(3.92, abs=0.02)
    assert result.low == pytest.approx(-3.92, abs=0.02)
    # The law of propagation has it exactly: 1.95996 x 2.
    by_law = combined(np.ones(4), np.ones(4))
    assert by_law == pytest.approx(2.0)
    assert coverage_factor(0.95) * by_law == pytest.approx(3.9199, abs=5e-5)


def test_four_equal_rectangles():
    # By hand: four rectangles of width one have a sum with P(S > 2 + s) = (2 - s)^4 / 24 (Irwin and
    # Hall); for 2.5 % that is s = 2 - 0.6^(1/4) = 1.1199, and times 2 sqrt 3 it is 3.879.
    result = monte_carlo(total, [UNIT_RECTANGLE] * 4, np.random.default_rng(seed=923), 1_000_000)

    half_width = (2 - 0.6**0.25) * 2 * ROOT_3
    assert half_width == pytest.approx(3.88, abs=0.005)
    assert result.standard_uncertainty == pytest.approx(2.00, abs=0.01)
    assert result.high == pytest.approx(half_width, abs=0.01)
    assert result.low == pytest.approx(-half_width, abs=0.01)


def test_one_rectangle_ten_times_the_others():
    wide = rectangular(-10 * ROOT_3, 10 * ROOT_3)

    result = monte_carlo(
        total, [UNIT_RECTANGLE] * 3 + [wide], np.random.default_rng(seed=924), 1_000_000
    )

    assert result.standard_uncertainty == pytest.approx(10.15, abs=0.02)
    assert result.high == pytest.approx(17.0, abs=0.05)
    by_law = combined(np.ones(4), [1, 1, 1, 10])
    assert by_law == pytest.approx(10.15, abs=0.005)
    # The law with a normal factor claims far too much.
    assert coverage_factor(0.95) * by_law == pytest.approx(19.9, abs=0.05)


def test_calibration_of_a_mass():
    def difference_mg(reference_mg, balance_mg, air, weight, reference):
        buoyancy = (air - 1.2) * (1 / weight - 1 / reference)
        return (reference_mg + balance_mg) * (1 + buoyancy) - 100_000.0

    inputs = [
        normal(100_000.0, 0.050),
        normal(1.234, 0.020),
        rectangular(1.10, 1.30),
        rectangular(7000.0, 9000.0),
        rectangular(7950.0, 8050.0),
    ]

    result = monte_carlo(difference_mg, inputs, np.random.default_rng(seed=93), 1_000_000)

    assert result.estimate == pytest.approx(1.234, abs=0.002)
    assert result.standard_uncertainty == pytest.approx(0.0755, abs=0.0005)
    assert result.low == pytest.approx(1.084, abs=0.002)
    assert result.high == pytest.approx(1.384, abs=0.002)
    # At first order the air has no slope, because it is at its reference: the law sees too little.
    assert combined([1.0, 1.0, 0.0, 0.0, 0.0], [0.050, 0.020, 0.058, 577.0, 29.0]) == pytest.approx(
        0.0539, abs=5e-5
    )


def test_calibration_of_a_gauge_block():
    nominal_nm = 50e6

    def excess_nm(standard, mean, random, systematic, alpha, theta, swing, d_alpha, d_theta):
        warm = theta + swing
        measured = (nominal_nm + standard) * (1 + alpha * (warm - d_theta))
        return (measured + mean + random + systematic) / (1 + (alpha + d_alpha) * warm) - nominal_nm

    inputs = [
        student(623.0, 25.0, 18),
        student(215.0, 6.0, 24),
        student(0.0, 4.0, 5),
        student(0.0, 7.0, 8),
        rectangular(9.5e-6, 13.5e-6),
        normal(-0.1, 0.2),
        arc_sine,
        curvilinear_trapezoid(-1.0e-6, 1.0e-6, 0.1e-6),
        curvilinear_trapezoid(-0.050, 0.050, 0.025),
    ]

    result = monte_carlo(
        excess_nm, inputs, np.random.default_rng(seed=95), trials=1_000_000, level=0.99
    )

    assert result.estimate == pytest.approx(838, abs=0.5 + 0.1)
    assert result.standard_uncertainty == pytest.approx(36, abs=0.5)
    # Half of the last digit printed, and three times the scatter of a million trials, 0.25 nm.
    assert result.low == pytest.approx(745, abs=0.5 + 0.75)
    assert result.high == pytest.approx(932, abs=0.5 + 0.75)
