"""NIST/SEMATECH e-Handbook of Statistical Methods, 6.3.2.3 and 6.3.2.4: two worked charts.

Looked up: values, sums, averages and limits, in several public test suites that quote the handbook.
"""

import numpy as np
import pytest

from server.science.statistics.cusum import cusum, first_crossings
from server.science.statistics.ewma import ewma, ewma_half_width, ewma_start

WEIGHED = [
    324.925, 324.675, 324.725, 324.35, 325.35, 325.225, 324.125, 324.525, 325.225, 324.6, 324.625,
    325.15, 328.325, 327.25, 327.825, 328.5, 326.675, 327.775, 326.875, 328.35,
]  # fmt: skip
READ = [
    52.0, 47.0, 53.0, 49.3, 50.1, 47.0, 51.0, 50.1, 51.2, 50.5, 49.6, 47.6, 49.9, 51.3, 47.8, 51.2,
    52.6, 52.4, 53.6, 52.1,
]  # fmt: skip
AVERAGES = [
    50.6, 49.52, 50.56, 50.18, 50.16, 49.21, 49.75, 49.85, 50.26, 50.33, 50.11, 49.36, 49.52,
    50.05, 49.38, 49.92, 50.73, 51.23, 51.94, 51.99,
]  # fmt: skip


def test_cusum():
    deviations = np.array(WEIGHED)[:, np.newaxis] - 325.0

    upper = cusum(deviations, k=0.3175)
    lower = cusum(deviations, k=0.3175, sense=-1)

    printed = [3.01, 4.94, 7.45, 10.63, 11.99, 14.44, 16.0, 19.04]
    assert upper.sums[12:, 0] == pytest.approx(printed, abs=0.006)
    assert lower.sums[6:11, 0] == pytest.approx([0.56, 0.72, 0.17, 0.25, 0.31], abs=0.006)
    assert first_crossings(upper.sums, h=4.1959).tolist() == [13]
    assert first_crossings(lower.sums, h=4.1959).tolist() == [-1]


def test_ewma():
    chart = ewma(np.array(READ)[:, np.newaxis], 0.3, ewma_start(1, start=50.0))
    half_width = ewma_half_width(2.0539, 0.3, 3.0)

    assert chart.averages[:, 0] == pytest.approx(AVERAGES, abs=0.0051)
    assert 50.0 + half_width == pytest.approx(52.5884, abs=1e-4)
    # Printed without its last digit: 47.41157.
    assert 50.0 - half_width == pytest.approx(47.4115, abs=1e-4)
    assert (np.abs(chart.averages - 50.0) < half_width).all()
