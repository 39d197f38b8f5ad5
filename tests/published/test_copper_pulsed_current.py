"""Copper under pulsed current on a rotating disc, J. Appl. Electrochem., doi 10.1007/bf00620584.

Looked up: the abstract estimates the exchange current densities of the two steps, copper(II) to
copper(I) and copper(I) to copper, as 0.034 and 0.024 mA/cm2.
"""

import pytest

from server.science.electrode.parameters import COPPER_EXCHANGE_REPORTED_A_M2


@pytest.mark.parametrize(
    ("step", "ma_cm2"),
    [("pulsed current, first electron", 0.034), ("pulsed current, second electron", 0.024)],
)
def test_our_copy_in_amperes_a_square_metre(step, ma_cm2):
    # 1 mA/cm2 is 10 A/m2.
    assert COPPER_EXCHANGE_REPORTED_A_M2[step] == pytest.approx((10 * ma_cm2, 10 * ma_cm2))
