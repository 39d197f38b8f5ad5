"""K.-H. Waldmann, Technometrics 28 (1986) 61 and Applied Statistics 35 (1986) 151: bounds.

Run lengths and their distribution between bounds, of CUSUM and EWMA. Looked up: as quoted in the
manual of the R package spc (xcusum.arl, xcusum.q, xewma.arl). Four of the ten figures are not met
in their last digit, and stand by themselves below.
"""

import pytest

from server.science.statistics.ewma_run_length import ewma_run_length
from server.science.statistics.run_length import (
    cusum_run_length,
    cusum_run_length_quantile,
    cusum_signal_probability,
)


@pytest.mark.parametrize(
    ("shift", "printed", "half_digit"), [(-0.5, 1963, 0.5), (0.5, 17.35, 0.005)]
)
def test_one_sided_cusum(shift, printed, half_digit):
    assert cusum_run_length(0.5, 3.0, shift) == pytest.approx(printed, abs=half_digit)


@pytest.mark.parametrize(("share", "printed"), [(0.5, 82), (0.05, 9)])
def test_quantiles_of_a_cusum(share, printed):
    assert cusum_run_length_quantile(0.5, 3.0, share) == printed


def ewma_at_two(weight: float, sides: int) -> float:
    """Limits at 2 of the readings' standard deviations; ours are the chart's own ones."""
    return float(ewma_run_length(weight, 2.0 * ((2.0 - weight) / weight) ** 0.5, sides=sides))


def test_ewma():
    assert ewma_at_two(0.75, sides=1) == pytest.approx(209.3, abs=0.05)
    assert ewma_at_two(0.75, sides=2) == pytest.approx(104.0, abs=0.05)
    assert ewma_at_two(0.5, sides=2) == pytest.approx(1952, abs=0.5)


def test_figures_that_are_not_met():
    # Printed 117.4; a million charts simulated here say 117.54, standard error 0.11.
    assert cusum_run_length(0.5, 3.0) == pytest.approx(117.596, abs=0.001)
    # Printed 65.4; six hundred thousand say 65.56, standard error 0.08.
    assert cusum_run_length(0.6, 3.0, -0.2, sides=2) == pytest.approx(65.465, abs=0.001)
    # Printed 345, by which 0.94977 of the charts have signalled: not yet 0.95.
    assert cusum_signal_probability(0.5, 3.0, [345, 346]) == pytest.approx(
        [0.94977, 0.95021], abs=1e-5
    )
    assert cusum_run_length_quantile(0.5, 3.0, 0.95) == 346
    # Printed 3907.5, 0.04 % more than the integral equation gives.
    assert ewma_at_two(0.5, sides=1) == pytest.approx(3906.05, abs=0.005)
