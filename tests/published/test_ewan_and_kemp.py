"""W. D. Ewan and K. W. Kemp, Biometrika 47 (1960) 363, table 2: CUSUM for two run lengths.

Reference value and limit of the one-sided CUSUM with two wanted run lengths, the second at a shift
of 2 k. Looked up: as quoted in the manual of the R package spc (xcusum.crit.L0L1). They were found
with the approximations of their time. Three of the twelve printed figures are met to their digit;
the others are not: k lies up to 0.037 and h up to 0.053 from what the integral equation says, and
the printed charts have run lengths up to 7.4 % and 4.3 % from those wanted. Two hundred thousand
charts simulated here side with the integral equation: 249.0 (standard error 0.6) and 2.987 (0.004)
for the chart that is printed for 250 and 3.
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


def test_what_is_met_to_the_digit():
    assert cusum_for_run_lengths(250, 3).k == pytest.approx(0.94, abs=0.005)
    assert cusum_for_run_lengths(250, 7).k == pytest.approx(0.54, abs=0.005)
    assert cusum_for_run_lengths(500, 7).h == pytest.approx(3.80, abs=0.005)


def test_the_simulated_chart():
    assert cusum_run_length(0.94, 2.11) == pytest.approx(249.03, abs=1.7)
    assert cusum_run_length(0.94, 2.11, 1.88) == pytest.approx(2.987, abs=0.012)


# No check of digits: how far the approximations of 1960 are off, and no further.
@pytest.mark.parametrize(("in_control", "out_of_control", "k", "h"), ONE_SIDED)
def test_printed_charts_come_near_the_run_lengths_wanted(in_control, out_of_control, k, h):
    assert cusum_run_length(k, h) == pytest.approx(in_control, rel=0.075)
    assert cusum_run_length(k, h, 2.0 * k) == pytest.approx(out_of_control, rel=0.043)


@pytest.mark.parametrize(("in_control", "out_of_control", "k", "h"), ONE_SIDED[::5])
def test_exact_charts_come_near_the_printed_ones(in_control, out_of_control, k, h):
    found = cusum_for_run_lengths(in_control, out_of_control)

    assert found.k == pytest.approx(k, abs=0.037)
    assert found.h == pytest.approx(h, abs=0.053)
