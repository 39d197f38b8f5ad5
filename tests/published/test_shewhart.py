"""W. A. Shewhart's chart (1931): run length of single readings against limits of three.

Status: computed from normal tail areas, in a library of reference values made apart from this
program.
"""

import pytest

from server.science.statistics.ewma_run_length import ewma_run_length, shewhart_run_length


@pytest.mark.parametrize(
    ("shift", "readings"), [(0.0, 370.4), (1.0, 43.895), (2.0, 6.303), (3.0, 2.0)]
)
def test_three_standard_deviations(shift, readings):
    assert shewhart_run_length(3.0, shift) == pytest.approx(readings, rel=1e-3)
    # An EWMA that takes the newest reading alone is the same chart.
    assert ewma_run_length(1.0, 3.0, shift) == pytest.approx(readings, rel=1e-3)
