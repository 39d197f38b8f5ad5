"""A voltammetry simulator's own test of a rotating disc against the Levich current.

Looked up: public notebook of the simulator, with its printed output. One electron, D = 1e-5 cm2/s,
nu = 0.01 cm2/s, c = 1e-6 mol/cm3, a disc of 0.178412412 cm radius at 261.7994 rad/s (2500 turns per
minute): Levich 9.67915187198e-05 A, simulated at steady state 9.6369741909e-05 A.
"""

import math

import pytest

from server.science.electrode.film import levich_limiting_a_m2

RADIUS_M = 0.178412412e-2
LIMIT_A = math.pi * RADIUS_M**2 * levich_limiting_a_m2(1, 1e-9, 1e-6, 1.0, 261.79938779914943)


def test_the_levich_current_is_the_one_printed():
    # Its Faraday constant, 96485.33289, is 8 in 10^9 larger than today's.
    assert LIMIT_A == pytest.approx(9.67915187198e-05, rel=1e-8)


def test_the_simulation_agrees_within_its_own_half_per_cent():
    assert LIMIT_A / 9.6369741909e-05 == pytest.approx(1.00437665, abs=5e-8)
