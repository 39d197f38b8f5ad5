"""S. Knoth's thousand million simulated charts: one-sided EWMA with opening limits.

Weight 0.1, limit for a run length of 500. Looked up: in the manual of the R package spc
(xewma.arl), with standard errors, 0.016 without a shift and below 0.001 with one.
"""

import pytest

from server.science.statistics.chart_design import ewma_width
from server.science.statistics.ewma_run_length import ewma_run_length


def test_run_lengths_as_simulated():
    width = ewma_width(500.0, 0.1, sides=1, opening_limits=True)

    found = ewma_run_length(
        0.1, width, [0.0, 0.5, 1.0, 1.5, 2.0, 2.5, 3.0], sides=1, opening_limits=True
    )

    printed = [500.0, 21.637, 6.7596, 3.5398, 2.3038, 1.7004, 1.3675]
    errors = [0.016, 0.0006, 0.0001, 0.0001, 0.00005, 0.00005, 0.00005]
    for one, simulated, error in zip(found, printed, errors, strict=True):
        assert one == pytest.approx(simulated, abs=3.0 * error)
