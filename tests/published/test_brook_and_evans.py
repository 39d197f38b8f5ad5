"""D. Brook and D. A. Evans, Biometrika 59 (1972) 539, section 4.3: CUSUM by a Markov chain.

One-sided, k 0.5, h 3. Looked up: 117.59 without a shift and 3.75 with one of 1.5, as quoted in the
manual of the R package spc (xcusum.arl), which calls them the less accurate method.
"""

import pytest

from server.science.statistics.markov_run_length import cusum_markov_run_length
from server.science.statistics.run_length import cusum_run_length


@pytest.mark.parametrize(
    ("shift", "printed", "tolerance"), [(0.0, 117.59, 0.01), (1.5, 3.75, 0.005)]
)
def test_run_lengths_as_printed(shift, printed, tolerance):
    assert cusum_run_length(0.5, 3.0, shift) == pytest.approx(printed, abs=tolerance)


@pytest.mark.parametrize(
    ("shift", "printed", "tolerance"), [(0.0, 117.59, 0.01), (1.5, 3.75, 0.005)]
)
def test_their_own_method_with_more_cells(shift, printed, tolerance):
    found = cusum_markov_run_length(0.5, 3.0, shift, cells=400)

    assert found == pytest.approx(printed, abs=tolerance)
