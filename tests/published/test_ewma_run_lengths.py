"""Run lengths of two-sided EWMA charts with fixed limits, weights from 0.05 to 0.5.

Status: the rows with figures are computed by integral equation with 301 points, in a library of
reference values made apart from this program; which widths belong to 500 and 370 readings: Lucas
and Saccucci and Montgomery, ISQC, table 9.11 (partly from memory). The other rows are compared
with a Markov chain worked out here.
"""

import numpy as np
import pytest
from scipy import stats

from server.science.statistics.ewma_run_length import ewma_run_length

SHIFTS = [0.0, 0.25, 0.5, 0.75, 1.0, 1.5, 2.0, 3.0]
RECOMPUTED = {
    (0.4, 3.054): [500, 223.7, 71.2, 28.42, 14.26, 5.875, 3.522, 2.019],
    (0.25, 2.998): [499.8, 170.3, 48.29, 20.11, 11.14, 5.464, 3.614, 2.258],
    (0.1, 2.814): [499.6, 106.3, 31.3, 15.85, 10.33, 6.084, 4.362, 2.868],
    (0.05, 2.615): [499.9, 84.01, 28.76, 16.37, 11.38, 7.112, 5.225, 3.496],
    (0.2, 2.86): [371.1, 121.2, 36.2, 16.45, 9.802, 5.231, 3.593, 2.309],
    (0.2, 3.0): [559.9, 163.1, 44.13, 18.84, 10.84, 5.605, 3.801, 2.408],
}
OTHERS = [(0.2, 2.962), (0.5, 3.071), (0.1, 2.7), (0.3, 3.0)]


@pytest.mark.parametrize(("weight", "width"), RECOMPUTED)
def test_recomputed_rows(weight, width):
    found = ewma_run_length(weight, width, SHIFTS)

    assert found == pytest.approx(RECOMPUTED[weight, width], rel=6e-4)


def chain(weight: float, width: float, shift: float, cells: int) -> float:
    """Cells of equal width between the limits, written out; the start is the middle one."""
    limit = width * (weight / (2 - weight)) ** 0.5
    edges = np.linspace(-limit, limit, cells + 1)
    middles = (edges[1:] + edges[:-1]) / 2
    upto = stats.norm.cdf((edges[None, :] - (1 - weight) * middles[:, None]) / weight - shift)
    moves = upto[:, 1:] - upto[:, :-1]
    return float(np.linalg.solve(np.eye(cells) - moves, np.ones(cells))[cells // 2])


@pytest.mark.parametrize(("weight", "width"), [*OTHERS, *RECOMPUTED])
def test_rows_against_a_markov_chain(weight, width):
    expected = []
    for shift in SHIFTS:
        coarse, fine = chain(weight, width, shift, 61), chain(weight, width, shift, 183)
        # The error falls with the square of the cells: nine times less with three times as many.
        expected.append(fine + (fine - coarse) / 8.0)

    assert ewma_run_length(weight, width, SHIFTS) == pytest.approx(expected, rel=2e-4)


@pytest.mark.parametrize(("weight", "width"), [(0.2, 2.962), (0.5, 3.071)])
def test_the_pairs_are_for_500_readings(weight, width):
    assert ewma_run_length(weight, width) == pytest.approx(500, rel=1e-3)
