"""Run lengths of two-sided CUSUM charts from zero, k from 0.25 to 1.

Status: the rows with figures are computed by integral equation, in a library of reference values
made apart from this program; of k 0.5, h 4 and 5, looked up too: 168, 26.6, 8.38, 3.34 and 465,
139, 38.0, 17.0, 10.4 in public notes and test suites that quote D. C. Montgomery, Introduction to
Statistical Quality Control, table 9.3. The pairs for about 370 readings: Hawkins (from memory). The
rows of k 0.25 and 0.75 are compared with a Markov chain worked out here.
"""

import numpy as np
import pytest
from scipy import stats

from server.science.statistics.run_length import cusum_run_length

SHIFTS = [0.0, 0.25, 0.5, 0.75, 1.0, 1.5, 2.0, 3.0]
RECOMPUTED = {
    (0.5, 4.0): [167.7, 74.22, 26.63, 13.29, 8.383, 4.747, 3.343, 2.194],
    (0.5, 5.0): [465.4, 139.5, 38.0, 17.05, 10.38, 5.747, 4.009, 2.573],
    (0.5, 4.77): [368.6, 121.3, 35.21, 16.17, 9.917, 5.517, 3.855, 2.484],
    (1.0, 2.52): [372.8, 197.8, 69.3, 27.68, 13.58, 5.462, 3.267, 1.862],
}


@pytest.mark.parametrize(("k", "h"), RECOMPUTED)
def test_recomputed_rows(k, h):
    assert cusum_run_length(k, h, SHIFTS, sides=2) == pytest.approx(RECOMPUTED[k, h], rel=6e-4)


@pytest.mark.parametrize(
    ("h", "shift", "printed", "tolerance"),
    [
        (4.0, 0.0, 168, 0.5),
        (4.0, 0.5, 26.6, 0.05),
        (4.0, 1.0, 8.38, 0.005),
        (4.0, 2.0, 3.34, 0.005),
        (5.0, 0.0, 465, 0.5),
        # Printed without its last half.
        (5.0, 0.25, 139, 0.6),
        (5.0, 0.5, 38.0, 0.05),
        (5.0, 0.75, 17.0, 0.055),
        (5.0, 1.0, 10.4, 0.05),
    ],
)
def test_montgomery_as_printed(h, shift, printed, tolerance):
    assert cusum_run_length(0.5, h, shift, sides=2) == pytest.approx(printed, abs=tolerance)


# Looked up: about 335 and 928 in a public design note; the rest recomputed.
@pytest.mark.parametrize(("h", "recomputed", "printed"), [(4.0, 335.37, 335), (5.0, 930.89, 928)])
def test_one_side_runs_twice_as_long(h, recomputed, printed):
    found = cusum_run_length(0.5, h)

    assert found == pytest.approx(recomputed, abs=0.0051)
    assert found == pytest.approx(printed, rel=0.004)


def one_side(k: float, h: float, shift: float, cells: int) -> float:
    """Brook and Evans, written out: cells of equal width, the first about zero."""
    wide = 2 * h / (2 * cells - 1)
    at = wide * np.arange(cells)
    upto = stats.norm.cdf(at[None, :] + wide / 2 - at[:, None] + k - shift)
    moves = np.column_stack([upto[:, 0], upto[:, 1:] - upto[:, :-1]])
    return float(np.linalg.solve(np.eye(cells) - moves, np.ones(cells))[0])


def chain(k: float, h: float, shift: float) -> float:
    """Both sides, extrapolated to infinitely many cells."""

    def extrapolated(drift: float) -> float:
        coarse, fine = one_side(k, h, drift, 60), one_side(k, h, drift, 120)
        return fine + (fine - coarse) / 3.0

    return 1.0 / (1.0 / extrapolated(shift) + 1.0 / extrapolated(-shift))


@pytest.mark.parametrize(("k", "h"), [(0.25, 8.01), (0.75, 3.34), *RECOMPUTED])
def test_rows_against_a_markov_chain(k, h):
    expected = [chain(k, h, shift) for shift in SHIFTS]

    assert cusum_run_length(k, h, SHIFTS, sides=2) == pytest.approx(expected, rel=1e-4)


@pytest.mark.parametrize(("k", "h"), [(0.25, 8.01), (0.75, 3.34)])
def test_the_pairs_are_for_370_readings(k, h):
    assert cusum_run_length(k, h, sides=2) == pytest.approx(370, rel=0.01)
