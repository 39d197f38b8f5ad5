"""S. H. Steiner, J. Quality Technology 31 (1999) 75, table 2: EWMA with opening limits.

Weight 0.05, width 3, fixed and opening limits. Looked up: as quoted in the manual of the R package
spc (xewma.arl). The figures for opening limits are a coarse approximation: two hundred thousand
simulated charts say 9.25 (standard error 0.01) where 9.0 is printed, and 2.913 where 2.8 is; so
those are held to four hundredths, the fixed ones to about one, as 135.0 is printed for 133.6.
"""

import pytest

from server.science.statistics.ewma_run_length import ewma_run_length

# Shift, average run length with fixed and with opening limits.
TABLE = [
    (0.00, 1379.0, 1353.0),
    (0.25, 135.0, 127.0),
    (0.50, 37.4, 32.5),
    (0.75, 20.0, 15.6),
    (1.00, 13.5, 9.0),
    (1.50, 8.3, 4.5),
    (2.00, 6.0, 2.8),
    (2.50, 4.8, 2.0),
    (3.00, 4.0, 1.6),
    (3.50, 3.4, 1.3),
    (4.00, 3.0, 1.1),
]


@pytest.mark.parametrize(("shift", "fixed", "opening"), TABLE)
def test_fixed_limits_as_printed(shift, fixed, opening):
    assert ewma_run_length(0.05, 3.0, shift) == pytest.approx(fixed, abs=0.1, rel=0.011)


def test_opening_limits_as_printed():
    shifts = [shift for shift, _, _ in TABLE]

    found = ewma_run_length(0.05, 3.0, shifts, opening_limits=True)

    for one, (_, _, printed) in zip(found, TABLE, strict=True):
        assert one == pytest.approx(printed, rel=0.04, abs=0.07)


def test_opening_limits_as_simulated():
    found = ewma_run_length(0.05, 3.0, [0.5, 1.0, 2.0], opening_limits=True)

    assert found == pytest.approx([32.21, 9.249, 2.913], rel=0.003)
