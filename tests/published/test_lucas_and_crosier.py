"""J. M. Lucas and R. B. Crosier, Technometrics 24 (1982) 199, table 1: CUSUM with a head start.

Two-sided, k 0.5, h 4, from zero and from half of the limit. Looked up: as quoted in the manual of
the R package spc (xcusum.arl). That half of the limit is the usual head start: looked up in a
public design note.
"""

import pytest

from server.science.statistics.cusum import HEAD_START_SHARE, cusum_start
from server.science.statistics.run_length import cusum_run_length

# Shift, average run length from zero, and with a head start of half of the limit.
TABLE = [
    (0.00, "168", "149"),
    (0.25, "74.2", "62.7"),
    (0.50, "26.6", "20.1"),
    (0.75, "13.3", "8.97"),
    (1.00, "8.38", "5.29"),
    (1.50, "4.75", "2.86"),
    (2.00, "3.34", "2.01"),
    (2.50, "2.62", "1.59"),
    (3.00, "2.19", "1.32"),
    (4.00, "1.71", "1.07"),
    (5.00, "1.31", "1.01"),
]


def half_digit(printed: str) -> float:
    """Half of the last digit that is printed, and a little: 1.3254 is printed as 1.32."""
    return 0.55 * 10.0 ** -len(printed.partition(".")[2])


@pytest.mark.parametrize(("shift", "printed", "ahead"), TABLE)
def test_run_lengths_as_printed(shift, printed, ahead):
    from_zero = cusum_run_length(0.5, 4.0, shift, sides=2)
    with_head_start = cusum_run_length(0.5, 4.0, shift, head_start=2.0, sides=2)

    assert from_zero == pytest.approx(float(printed), abs=half_digit(printed))
    assert with_head_start == pytest.approx(float(ahead), abs=half_digit(ahead))


def test_the_head_start_is_half_of_the_limit():
    assert HEAD_START_SHARE == 0.5
    assert cusum_start(1, h=4.0, head_start_share=HEAD_START_SHARE).sums == pytest.approx(2.0)
