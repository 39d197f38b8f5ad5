"""D. M. Hawkins, J. Quality Technology 25 (1993) 248, in Montgomery, ISQC, table 9.4: limits.

Pairs of k and h for a two-sided run length of about 370. Looked up: in a public teaching script
that lists them; the article from memory. Three limits for about 1730 readings, one-sided: C. Zou,
Y. Liu and Z. Wang, Metrika 70 (2009) 141, table 1: looked up, as quoted in the manual of the R
package spc (xDcusum.arl).
"""

import pytest

from server.science.statistics.chart_design import cusum_limit
from server.science.statistics.run_length import cusum_run_length

PAIRS = [(0.25, 8.01), (0.50, 4.77), (0.75, 3.34), (1.00, 2.52), (1.25, 1.99), (1.50, 1.61)]


@pytest.mark.parametrize(("k", "h"), PAIRS)
def test_limits_as_printed(k, h):
    assert cusum_limit(370.4, k, sides=2) == pytest.approx(h, abs=0.006)
    assert cusum_run_length(k, h, sides=2) == pytest.approx(370, rel=0.018)


@pytest.mark.parametrize(("k", "h"), [(0.25, 9.660), (0.50, 5.620), (0.75, 3.904)])
def test_limits_for_a_long_run(k, h):
    assert cusum_run_length(k, h) == pytest.approx(1730, rel=0.007)
