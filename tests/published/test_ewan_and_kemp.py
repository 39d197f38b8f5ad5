"""W. D. Ewan and K. W. Kemp, Biometrika 47 (1960) 363, table 2: CUSUM for two run lengths.

Reference value and limit of the one-sided CUSUM with two wanted run lengths, the second at a shift
of 2 k. Looked up: as quoted in the manual of the R package spc (xcusum.crit.L0L1). They were found
with the approximations of their time: up to 4 hundredths off in k, with a limit that makes up for
it.
"""

import pytest

from server.science.statistics.chart_design import cusum_for_run_lengths
from server.science.statistics.run_length import cusum_run_length

# Run length without a fault and with it, k, h.
ONE_SIDED = [
    (1000, 3, 1.12, 2.40),
    (1000, 7, 0.65, 4.06),
    (500, 3, 1.04, 2.26),
    (500, 7, 0.60, 3.80),
    (250, 3, 0.94, 2.11),
    (250, 7, 0.54, 3.51),
]


@pytest.mark.parametrize(("in_control", "out_of_control", "k", "h"), ONE_SIDED[::5])
def test_one_sided_charts_as_printed(in_control, out_of_control, k, h):
    found = cusum_for_run_lengths(in_control, out_of_control)

    assert found.k == pytest.approx(k, abs=0.04)
    assert found.h == pytest.approx(h, abs=0.055)


@pytest.mark.parametrize(("in_control", "out_of_control", "k", "h"), ONE_SIDED)
def test_run_lengths_of_the_printed_charts(in_control, out_of_control, k, h):
    assert cusum_run_length(k, h) == pytest.approx(in_control, rel=0.08)
    assert cusum_run_length(k, h, 2.0 * k) == pytest.approx(out_of_control, rel=0.045)
