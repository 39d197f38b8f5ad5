"""T. R. Rhoads, D. C. Montgomery and C. M. Mastrangelo, Quality Engineering 9 (1996) 317, table 1.

EWMA with weight 0.03 and width 2.437, fixed and opening limits. Looked up: as quoted in the manual
of the R package spc (xewma.arl), which warns that the two figures without a shift are far off;
they are left out.
"""

import pytest

from server.science.statistics.ewma_run_length import ewma_run_length

SHIFTS = [0.5, 1.0, 1.5, 2.0, 3.0, 4.0]


def test_fixed_limits_as_printed():
    found = ewma_run_length(0.03, 2.437, SHIFTS)

    # The first is a rounding of 29.32 and simulated noise.
    assert found[0] == pytest.approx(29.7, rel=0.015)
    assert found[1:] == pytest.approx([12.5, 8.1, 6.0, 4.0, 3.1], abs=0.11)


def test_opening_limits_as_printed():
    found = ewma_run_length(0.03, 2.437, SHIFTS, opening_limits=True)

    assert found == pytest.approx([20.0, 6.5, 3.3, 2.2, 1.3, 1.1], abs=0.07, rel=0.022)
