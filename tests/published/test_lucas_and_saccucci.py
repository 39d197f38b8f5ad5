"""J. M. Lucas and M. S. Saccucci, Technometrics 32 (1990) 1, table 3: EWMA with fixed limits.

Two-sided, zero-state and steady-state. Looked up: the columns of weights 0.5 and 0.03 as quoted in
the manual of the R package spc (xewma.arl, xewma.ad); the widths 2.615, 2.814, 2.998 and 3.071 for
a run length of 500 and 10.3 at one standard deviation for the weight 0.10, in a public method card
that quotes the table. The widths 2.962 and 3.054: from memory of the same table.
"""

import pytest

from server.science.statistics.chart_design import ewma_width
from server.science.statistics.ewma_run_length import ewma_run_length, ewma_settled_run_length

SHIFTS = [0.0, 0.25, 0.5, 0.75, 1.0, 1.5, 2.0, 2.5, 3.0, 3.5, 4.0, 5.0]
ZERO_STATE = {
    (0.5, 3.071): "500 255 88.8 35.9 17.5 6.53 3.63 2.50 1.93 1.58 1.34 1.07",
    (0.03, 2.437): "500 76.7 29.3 17.6 12.6 8.07 5.99 4.80 4.03 3.49 3.11 2.55",
}
STEADY_STATE = {
    (0.5, 3.071): "499 254 88.4 35.7 17.3 6.44 3.58 2.47 1.91 1.58 1.36 1.10",
    (0.03, 2.437): "480 74.1 28.6 17.3 12.5 8.00 5.95 4.78 4.02 3.49 3.09 2.55",
}


def cases(table):
    """Weight, width, shift, printed figure."""
    return [
        (weight, width, shift, printed)
        for (weight, width), row in table.items()
        for shift, printed in zip(SHIFTS, row.split(), strict=True)
    ]


@pytest.mark.parametrize(("weight", "width", "shift", "printed"), cases(ZERO_STATE))
def test_zero_state_as_printed(weight, width, shift, printed):
    last_digit = 10.0 ** -len(printed.partition(".")[2])

    found = ewma_run_length(weight, width, shift)

    assert found == pytest.approx(float(printed), abs=0.51 * last_digit)


# They start the shift after fifty readings without one, we after infinitely many; with the weight
# 0.03 that is worth up to a hundredth.
@pytest.mark.parametrize(("weight", "width", "shift", "printed"), cases(STEADY_STATE))
def test_steady_state_as_printed(weight, width, shift, printed):
    last_digit = 10.0 ** -len(printed.partition(".")[2])
    share = 0.009 if weight == 0.03 else 0.0

    found = ewma_settled_run_length(weight, width, shift)

    assert found == pytest.approx(float(printed), abs=0.51 * last_digit + share * float(printed))


@pytest.mark.parametrize(
    ("weight", "printed"),
    [(0.05, 2.615), (0.10, 2.814), (0.20, 2.962), (0.25, 2.998), (0.40, 3.054), (0.50, 3.071)],
)
def test_widths_for_500_readings(weight, printed):
    assert ewma_width(500.0, weight) == pytest.approx(printed, abs=0.00075)


def test_one_standard_deviation_is_found_in_ten_readings():
    assert ewma_run_length(0.10, 2.814, 1.0) == pytest.approx(10.3, abs=0.05)
