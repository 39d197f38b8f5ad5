"""University Physics, vol. 2 (OpenStax): magnetic field due to a thin straight wire.

Looked up: the chapter's text with its answers, in the publisher's public repository. Answers are
printed to one or two figures.
"""

import math

import pytest

from server.science.losses.bar_field import flux_density_of_bars_t, flux_density_t

# Three wires at the corners of a square of 1 cm, 2 A each, seen from the fourth corner.
ACROSS_M = (0.0, 0.01, 0.01)
UP_M = (0.01, 0.01, 0.0)


def test_one_wire_at_a_corner():
    assert flux_density_t(2.0, 0.01) == pytest.approx(4e-5, abs=0.5e-5)


def test_the_wire_across_the_corner():
    # The text prints 3e-5, and 2.83e-5 further on.
    assert flux_density_t(2.0, 0.01414) == pytest.approx(2.83e-5, abs=0.005e-5)


def test_three_wires_together():
    # The text prints 8e-5, from components rounded to 6e-5; exactly it is 6 sqrt(2) e-5.
    found = flux_density_of_bars_t([2.0, 2.0, 2.0], ACROSS_M, UP_M)

    assert found == pytest.approx(8e-5, abs=0.5e-5)
    assert found == pytest.approx(6e-5 * math.sqrt(2), rel=1e-6)


def test_the_current_that_cancels_the_field():
    # "4 amps flowing out of the page".
    found = flux_density_of_bars_t([2.0, -4.0, 2.0], ACROSS_M, UP_M)

    assert found == pytest.approx(0.0, abs=1e-18)


def test_twenty_amperes_half_a_metre_away():
    # 8.0 microtesla at 50 cm: the answer is 20 A.
    assert flux_density_t(20.0, 0.50) * 1e6 == pytest.approx(8.0, abs=0.05)


def test_two_wires_with_the_current_in_one_direction():
    # At the middle nothing; outside, 2a from the nearer wire, 3 mu0 I / (8 pi a)... of both:
    # mu0 I / (2 pi) (1 / 2a + 1 / 4a).
    a_m, amps = 0.1, 100.0

    middle = flux_density_of_bars_t([amps, amps], [-a_m, a_m], [0.0, 0.0])
    outside = flux_density_of_bars_t([amps, amps], [2 * a_m, 4 * a_m], [0.0, 0.0])

    assert middle == pytest.approx(0.0, abs=1e-18)
    assert outside == pytest.approx(3 * 4e-7 * math.pi * amps / (8 * math.pi * a_m), rel=1e-6)
