"""L. C. Vance, J. Quality Technology 18 (1986) 189, table 1: CUSUM with k 0 and h 10.

One-sided, from zero; the first to solve the integral equation with Gauss-Legendre points, with the
results of Goel and Wu (Technometrics 13 (1971) 221). Looked up: as quoted in the manual of the R
package spc (xcusum.arl).
"""

import pytest

from server.science.statistics.run_length import cusum_run_length

# Shift, average run length, half of its last digit. The first is printed with six digits, of which
# the last two differ from the converged 2071.57.
TABLE = [
    (-0.25, 2071.51, 0.07),
    (-0.125, 400.28, 0.005),
    (0.0, 124.66, 0.005),
    (0.125, 59.30, 0.005),
    (0.25, 36.71, 0.005),
    (0.50, 20.37, 0.005),
    (0.75, 14.06, 0.005),
    (1.00, 10.75, 0.005),
]


@pytest.mark.parametrize(("shift", "printed", "tolerance"), TABLE)
def test_run_lengths_as_printed(shift, printed, tolerance):
    assert cusum_run_length(0.0, 10.0, shift) == pytest.approx(printed, abs=tolerance)
