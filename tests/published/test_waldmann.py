"""K.-H. Waldmann, Technometrics 28 (1986) 61 and Applied Statistics 35 (1986) 151: bounds.

Run lengths and their distribution between bounds, of CUSUM and EWMA. Looked up: as quoted in the
manual of the R package spc (xcusum.arl, xcusum.q, xewma.arl). The figures are between bounds and
not always right in the last digit; the tolerances are one or two of it.
"""

import pytest

from server.science.statistics.ewma_run_length import ewma_run_length
from server.science.statistics.run_length import cusum_run_length, cusum_run_length_quantile


@pytest.mark.parametrize(
    ("shift", "printed", "tolerance"), [(-0.5, 1963, 1.0), (0.0, 117.4, 0.25), (0.5, 17.35, 0.005)]
)
def test_one_sided_cusum(shift, printed, tolerance):
    assert cusum_run_length(0.5, 3.0, shift) == pytest.approx(printed, abs=tolerance)


def test_two_sided_cusum():
    assert cusum_run_length(0.6, 3.0, -0.2, sides=2) == pytest.approx(65.4, abs=0.1)


@pytest.mark.parametrize(("share", "printed"), [(0.95, 345), (0.5, 82), (0.05, 9)])
def test_quantiles_of_a_cusum(share, printed):
    assert abs(cusum_run_length_quantile(0.5, 3.0, share) - printed) <= 1


# Weight, one-sided and two-sided run length, of limits at plus 2 (and minus 2) readings' standard
# deviations; ours are the chart's own standard deviations.
@pytest.mark.parametrize(
    ("weight", "one_sided", "two_sided"), [(0.75, "209.3", "104.0"), (0.5, "3907.5", "1952")]
)
def test_ewma(weight, one_sided, two_sided):
    width = 2.0 * ((2.0 - weight) / weight) ** 0.5

    above = ewma_run_length(weight, width, sides=1)
    both = ewma_run_length(weight, width)

    assert above == pytest.approx(float(one_sided), rel=5e-4)
    assert both == pytest.approx(float(two_sided), rel=5e-4)
