"""A. Possolo, NIST Technical Note 1900 (2015), example E13: coefficient of thermal expansion.

Looked up: a public test suite that quotes the note: 1.7266e-5 per K, u 1.76e-6 by the law of
propagation; 1.7268e-5, u 1.74e-6 by trial with t-distributions of three degrees of freedom that
have the standard deviations stated.
"""

import math

import numpy as np
import pytest

from server.science.uncertainty.draws import student
from server.science.uncertainty.monte_carlo import monte_carlo
from server.science.uncertainty.sensitivities import propagated

# Lengths in m and temperatures in K, before and after, with their standard uncertainties.
ESTIMATES = {"l0": 1.4999, "l1": 1.5021, "t0": 288.15, "t1": 373.10}
ERRORS = {"l0": 0.0001, "l1": 0.0002, "t0": 0.02, "t1": 0.05}


def expansion_per_k(l0, l1, t0, t1):
    """Share by which a bar grows per kelvin."""
    return (l1 - l0) / (l0 * (t1 - t0))


def test_by_the_law_of_propagation():
    result = propagated(expansion_per_k, ESTIMATES, ERRORS)

    assert result.value * 1e5 == pytest.approx(1.7266, abs=0.0001)
    assert result.standard_uncertainty * 1e6 == pytest.approx(1.76, abs=0.006)


def test_by_trial():
    inputs = [student(ESTIMATES[name], ERRORS[name] / math.sqrt(3.0), 3) for name in ESTIMATES]

    result = monte_carlo(expansion_per_k, inputs, np.random.default_rng(seed=13), 1_000_000)

    assert result.estimate * 1e5 == pytest.approx(1.7268, rel=1e-3)
    # With three degrees of freedom the deviation settles slowly.
    assert result.standard_uncertainty * 1e6 == pytest.approx(1.74, rel=0.015)
