"""D. M. Hawkins, J. Quality Technology 25 (1993) 248, in Montgomery, ISQC, table 9.4: limits.

Pairs of k and h for a two-sided run length of about 370. Looked up: in a public teaching script
that lists them; the article from memory. The last is not met: 1.61 is printed, 1.604 found. Three
limits for about 1730 readings, one-sided: C. Zou, Y. Liu and Z. Wang, Metrika 70 (2009) 141, table
1: looked up, as quoted in the manual of the R package spc (xDcusum.arl). None of the three is met
to its three digits: found are 9.648, 5.613 and 3.902.
"""

import pytest

from server.science.statistics.chart_design import cusum_limit
from server.science.statistics.run_length import cusum_run_length

PAIRS = [(0.25, 8.01), (0.50, 4.77), (0.75, 3.34), (1.00, 2.52), (1.25, 1.99)]


# A symmetrical Shewhart chart of three standard deviations runs for 370.4 readings.
@pytest.mark.parametrize(("k", "h"), PAIRS)
def test_limits_as_printed(k, h):
    assert cusum_limit(370.4, k, sides=2) == pytest.approx(h, abs=0.005)


def test_the_limit_that_is_not_met():
    assert cusum_limit(370.4, 1.5, sides=2) == pytest.approx(1.6045, abs=5e-4)
    # The printed limit runs for longer.
    assert cusum_run_length(1.5, 1.61, sides=2) == pytest.approx(376.3, abs=0.05)


@pytest.mark.parametrize(
    ("k", "h", "found"), [(0.25, 9.660, 9.648), (0.50, 5.620, 5.613), (0.75, 3.904, 3.902)]
)
def test_limits_for_a_long_run_are_not_met(k, h, found):
    exact = cusum_limit(1730.0, k)

    assert exact == pytest.approx(found, abs=5e-4)
    assert exact == pytest.approx(h, abs=0.0125)
    assert abs(exact - h) > 5e-4
