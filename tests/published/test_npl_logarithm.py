"""Cox and Harris, NPL Report DEM-ES-011 (2006), clause 9.2: a logarithm of a wide rectangle.

Looked up: a public test suite that quotes table 9.2: Y = ln X with X rectangular from 0.1 to 1.1.
By the law of propagation -0.511, u 0.481, upper end 0.432; by trial -0.665, u 0.606, shortest 95 %
interval -1.895 to 0.095. Tolerances are those digits, and the scatter of the trials.
"""

import math

import numpy as np
import pytest

from server.science.uncertainty.monte_carlo import monte_carlo, rectangular
from server.science.uncertainty.propagation import coverage_factor, standard_from_limit
from server.science.uncertainty.sensitivities import propagated


def test_by_the_law_of_propagation():
    result = propagated(math.log, [0.6], [float(standard_from_limit(0.5))], step=1e-3)

    assert result.value == pytest.approx(-0.511, abs=0.0005)
    assert result.standard_uncertainty == pytest.approx(0.481, abs=0.0005)
    upper = result.value + coverage_factor(0.95) * result.standard_uncertainty
    assert upper == pytest.approx(0.432, abs=0.0005)
    # The bend, -u^2 / 2 x^2, is a quarter of the uncertainty: the first order is not enough.
    assert result.bends["x1"] == pytest.approx(-(0.481**2) / 2, rel=0.002)


def test_by_trial():
    result = monte_carlo(
        np.log, [rectangular(0.1, 1.1)], np.random.default_rng(seed=92), 2_000_000, shortest=True
    )

    assert result.estimate == pytest.approx(-0.665, abs=0.001)
    assert result.standard_uncertainty == pytest.approx(0.606, abs=0.001)
    assert result.low == pytest.approx(-1.895, abs=0.003)
    assert result.high == pytest.approx(0.095, abs=0.001)
