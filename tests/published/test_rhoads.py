"""T. R. Rhoads, D. C. Montgomery and C. M. Mastrangelo, Quality Engineering 9 (1996) 317, table 1.

EWMA with weight 0.03 and width 2.437, fixed and opening limits. Looked up: as quoted in the manual
of the R package spc (xewma.arl), which warns that the two figures without a shift are far off;
they are left out. Of the other twelve, seven are met to the printed digit; five are not, and stand
beside what six hundred thousand charts simulated here say.
"""

import pytest

from server.science.statistics.ewma_run_length import ewma_run_length


def test_fixed_limits_as_printed():
    found = ewma_run_length(0.03, 2.437, [1.5, 2.0, 3.0, 4.0])

    assert found == pytest.approx([8.1, 6.0, 4.0, 3.1], abs=0.05)


def test_opening_limits_as_printed():
    found = ewma_run_length(0.03, 2.437, [2.0, 3.0, 4.0], opening_limits=True)

    assert found == pytest.approx([2.2, 1.3, 1.1], abs=0.05)


@pytest.mark.parametrize(
    ("opening", "shift", "printed", "simulated", "three_errors"),
    [
        (False, 0.5, 29.7, 29.324, 0.06),
        (False, 1.0, 12.5, 12.600, 0.015),
        (True, 0.5, 20.0, 20.404, 0.06),
        (True, 1.0, 6.5, 6.435, 0.018),
        (True, 1.5, 3.3, 3.354, 0.009),
    ],
)
def test_figures_that_are_not_met(opening, shift, printed, simulated, three_errors):
    found = ewma_run_length(0.03, 2.437, shift, opening_limits=opening)

    assert found == pytest.approx(simulated, abs=three_errors)
    assert abs(simulated - printed) > 0.05
    assert found == pytest.approx(printed, rel=0.021)
