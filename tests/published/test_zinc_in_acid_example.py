"""Callister, Fundamentals of Materials Science and Engineering, 3rd ed., example 16.2: zinc.

Looked up: the book's page 677. Zinc, -0.763 V, i0 = 1e-7 A/cm2, slope +0.09 V per decade; hydrogen,
0 V, i0 = 1e-10 A/cm2, slope -0.08 V. Solved for the current at which both potentials meet: log10 of
A/cm2 is -3.924. The current 1.19e-4 A/cm2 and the potential -0.486 V are printed in Princeton's
notes on the same example (looked up).
"""

import math

import pytest

from server.science.electrode.tafel import tafel_current_a_m2, tafel_overpotential_v

ZINC = {"exchange_a_m2": 1e-3, "slope_v": 0.09}
HYDROGEN = {"exchange_a_m2": 1e-6, "slope_v": 0.08}
CURRENT_A_M2 = 1e4 * 10**-3.924


def test_both_reactions_meet_at_the_potential_printed():
    zinc_v = -0.763 + tafel_overpotential_v(CURRENT_A_M2, **ZINC)
    hydrogen_v = 0.0 - tafel_overpotential_v(CURRENT_A_M2, **HYDROGEN)

    assert zinc_v == pytest.approx(-0.486, abs=0.0005)
    assert hydrogen_v == pytest.approx(-0.486, abs=0.0005)
    # Half a digit of the logarithm, times the slope.
    assert zinc_v == pytest.approx(hydrogen_v, abs=0.0005 * 0.17)


@pytest.mark.parametrize(
    ("overpotential_v", "kinetics"), [(0.763 - 0.486, ZINC), (0.486, HYDROGEN)]
)
def test_the_current_at_that_potential(overpotential_v, kinetics):
    current_a_m2 = tafel_current_a_m2(overpotential_v, **kinetics)

    # Half a millivolt over the slope, in decades.
    assert math.log10(current_a_m2 / 1e4) == pytest.approx(-3.924, abs=0.0005 / 0.08)
    assert current_a_m2 == pytest.approx(1.19, rel=0.015)
