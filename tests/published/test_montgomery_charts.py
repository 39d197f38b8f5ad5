"""D. C. Montgomery, Introduction to Statistical Quality Control, ch. 9: thirty values, two charts.

Target 10, standard deviation 1, the last ten values from a mean of 11. Looked up: the values, the
upper sums 1 to 29 and the second lower sum in several public test suites that quote the book. The
other lower sums and the EWMA are worked out here by hand. The book says in its text that the EWMA
signals at the 28th value (from memory); that is not met: by its own values the average there is
10.573, below the limit of 10.619, and passes it with the 29th, 10.647.
"""

import numpy as np
import pytest

from server.science.statistics.cusum import cusum, first_crossings, shift_began
from server.science.statistics.ewma import ewma, ewma_half_width, ewma_start

VALUES = [
    9.45, 7.99, 9.29, 11.66, 12.16, 10.18, 8.04, 11.46, 9.2, 10.34, 9.03, 11.47, 10.51, 9.4, 10.08,
    9.37, 10.62, 10.31, 8.52, 10.84, 10.9, 9.33, 12.29, 11.5, 10.6, 11.08, 10.38, 11.62, 11.31,
    10.52,
]  # fmt: skip
UPPER = [
    0, 0, 0, 1.16, 2.82, 2.50, 0.04, 1.00, 0, 0, 0, 0.97, 0.98, 0, 0, 0, 0.12, 0, 0, 0.34, 0.74, 0,
    1.79, 2.79, 2.89, 3.47, 3.35, 4.47, 5.28, 5.30,
]  # fmt: skip
DEVIATIONS = np.array(VALUES)[:, np.newaxis] - 10.0


def test_upper_sums_as_printed():
    chart = cusum(DEVIATIONS, k=0.5)

    assert chart.sums[:, 0] == pytest.approx(UPPER, abs=0.0051)


def test_the_signal_its_count_and_its_beginning():
    chart = cusum(DEVIATIONS[:29], k=0.5)

    # Counted from 1, the signal is at the 29th value; the count says that it began with the 23rd.
    assert first_crossings(chart.sums, h=5.0).tolist() == [28]
    assert chart.since_zero[28, 0] == 7
    assert chart.state.zero_at.tolist() == [21]
    assert shift_began(chart.state).tolist() == [22]


def test_lower_sums():
    # By hand, 9.5 - x + the sum before: 9.5 - 9.45 = 0.05; 9.5 - 7.99 + 0.05 = 1.56 (printed so);
    # 9.5 - 9.29 + 1.56 = 1.77; 11.66 clears it, 12.16 and 10.18 leave it; 9.5 - 8.04 = 1.46; the
    # 18th value leaves zero, and 9.5 - 8.52 = 0.98.
    chart = cusum(DEVIATIONS, k=0.5, sense=-1)

    assert chart.sums[[0, 1, 2, 6, 18], 0] == pytest.approx([0.05, 1.56, 1.77, 1.46, 0.98])
    assert first_crossings(chart.sums, h=5.0).tolist() == [-1]


def test_ewma_with_opening_limits():
    # Weight 0.1, width 2.7. By hand: 0.1 x 9.45 + 0.9 x 10 = 9.945; 0.1 x 7.99 + 0.9 x 9.945 =
    # 9.7495. Limits: 10 + 2.7 x 0.1 = 10.27, and after 29 values sqrt(0.1 / 1.9 (1 - 0.9^58)).
    weights = 0.1 * 0.9 ** np.arange(30)
    by_sum = [10.0 + weights[:n] @ (np.array(VALUES[:n])[::-1] - 10.0) for n in range(1, 31)]

    chart = ewma(np.array(VALUES)[:, np.newaxis], 0.1, ewma_start(1, start=10.0))
    upper = 10.0 + ewma_half_width(1.0, 0.1, 2.7, np.arange(1, 31))

    assert chart.averages[:2, 0] == pytest.approx([9.945, 9.7495])
    assert chart.averages[:, 0] == pytest.approx(by_sum, abs=1e-9)
    assert upper[0] == pytest.approx(10.27)
    assert upper[28] == pytest.approx(10.0 + 2.7 * (0.1 / 1.9 * (1.0 - 0.9**58)) ** 0.5)
    assert chart.averages[27:29, 0] == pytest.approx([10.573, 10.647], abs=0.0005)
    assert int(np.argmax(chart.averages[:, 0] > upper)) + 1 == 29
