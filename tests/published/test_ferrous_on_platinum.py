"""Atkins, Physical Chemistry, 8th ed., example on a Tafel plot: ferrous ions on 2 cm2 of platinum.

Looked up: the currents, 8.8, 25.0, 58.0, 131 and 298 mA at 50 to 250 mV and 25 degC, in two public
copies of the exercise; one prints 299 for the last. From memory: the answers, a coefficient of 0.58
and 2.4 mA/cm2, and the whole cathodic exercise beside it, 1.5, 6.4, 27.6, 118.6 and 510 mA at -100
to -300 mV with 0.75 and 0.041 mA/cm2. The first point lies too near equilibrium for a line.
"""

import pytest

from server.science.electrode.tafel import tafel_line, transfer_from_slope

# mA on 2 cm2, as A/m2: 1 mA / 2 cm2 is 5 A/m2.
ANODIC_A_M2 = [5.0 * ma for ma in (25.0, 58.0, 131.0, 298.0)]
CATHODIC_A_M2 = [5.0 * ma for ma in (1.5, 6.4, 27.6, 118.6, 510.0)]


@pytest.mark.parametrize("last_ma", [298.0, 299.0])
def test_the_anodic_line(last_ma):
    line = tafel_line([0.10, 0.15, 0.20, 0.25], [*ANODIC_A_M2[:3], 5.0 * last_ma])

    # The anodic direction has 1 - alpha of the one electron.
    assert 1.0 - transfer_from_slope(line.slope_v, 298.15) == pytest.approx(0.58, abs=0.005)
    assert line.exchange_a_m2 / 10 == pytest.approx(2.4, abs=0.05)


def test_the_cathodic_line():
    line = tafel_line([0.10, 0.15, 0.20, 0.25, 0.30], CATHODIC_A_M2)

    assert transfer_from_slope(line.slope_v, 298.15) == pytest.approx(0.75, abs=0.005)
    assert line.exchange_a_m2 / 10 == pytest.approx(0.041, abs=0.001)


def test_the_slope_by_its_two_ends_by_hand():
    # ln(298 / 25) = 2.478208 over 150 mV is 16.5214 per volt; ln 10 over that is 139.370 mV.
    line = tafel_line([0.10, 0.15, 0.20, 0.25], ANODIC_A_M2)

    assert line.slope_v == pytest.approx(0.13937, abs=2 * line.slope_u_v)
