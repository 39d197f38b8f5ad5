"""S. V. Crowder, Technometrics 29 (1987) 401 and J. Quality Technology 21 (1989) 155: EWMA.

Two-sided with fixed limits. Looked up: table 1 of the first and the widths for a run length of 250
of the second, as quoted in the manual of the R package spc (xewma.arl, xewma.crit). The value at a
shift of 1.25 and weight 0.5 is printed 3.95, which that manual takes for a misprint; the integral
equation and the Markov chain both say 3.59, and it is left out here.
"""

import pytest

from server.science.statistics.chart_design import ewma_width
from server.science.statistics.ewma_run_length import ewma_run_length
from server.science.statistics.markov_run_length import ewma_markov_run_length

# Shift, average run length with weight 0.5 and with weight 0.05, limits at 2.
TABLE = [
    (0.00, 26.45, 127.53),
    (0.25, 20.12, 43.94),
    (0.50, 11.89, 18.97),
    (0.75, 7.29, 11.64),
    (1.00, 4.91, 8.38),
    (1.25, None, 6.56),
    (1.50, 2.80, 5.41),
    (1.75, 2.29, 4.62),
    (2.00, 1.94, 4.04),
    (2.25, 1.70, 3.61),
    (2.50, 1.51, 3.26),
    (2.75, 1.37, 2.99),
    (3.00, 1.26, 2.76),
    (3.25, 1.18, 2.56),
    (3.50, 1.12, 2.39),
    (3.75, 1.08, 2.26),
    (4.00, 1.05, 2.15),
]


@pytest.mark.parametrize(("shift", "heavy", "light"), TABLE)
def test_run_lengths_as_printed(shift, heavy, light):
    # 1.9452 is printed as 1.94, the greatest difference.
    if heavy is not None:
        assert ewma_run_length(0.5, 2.0, shift) == pytest.approx(heavy, abs=0.0053)
    assert ewma_run_length(0.05, 2.0, shift) == pytest.approx(light, abs=0.0053)


def test_the_misprint():
    assert ewma_run_length(0.5, 2.0, 1.25) == pytest.approx(3.59, abs=0.005)
    assert ewma_markov_run_length(0.5, 2.0, 1.25) == pytest.approx(3.59, abs=0.005)


@pytest.mark.parametrize(
    ("weight", "printed"), [(0.05, 2.32), (0.10, 2.55), (0.15, 2.65), (0.20, 2.72), (0.25, 2.76)]
)
def test_widths_for_250_readings(weight, printed):
    assert ewma_width(250.0, weight) == pytest.approx(printed, abs=0.011)
