"""S. H. Steiner, J. Quality Technology 31 (1999) 75, table 2: EWMA with opening limits.

Weight 0.05, width 3, fixed and opening limits. Looked up: as quoted in the manual of the R package
spc (xewma.arl). Eleven of the 22 figures are met to the printed digit; the other eleven are not,
and stand below by themselves beside what charts simulated here say (sixty thousand without a shift,
three hundred thousand at 0.25, a million at the others), which is taken to be right.
"""

import pytest

from server.science.statistics.ewma_run_length import ewma_run_length

# Shift and average run length, as printed.
FIXED = [
    (0.00, "1379.0"),
    (0.75, "20.0"),
    (1.00, "13.5"),
    (1.50, "8.3"),
    (2.00, "6.0"),
    (2.50, "4.8"),
    (3.00, "4.0"),
    (3.50, "3.4"),
    (4.00, "3.0"),
]
OPENING = [(3.00, "1.6"), (3.50, "1.3")]

# Opening limits or fixed ones, shift, printed, simulated here with three standard errors.
NOT_MET = [
    (False, 0.25, 135.0, 133.877, 0.62),
    (False, 0.50, 37.4, 37.317, 0.07),
    (True, 0.00, 1353.0, 1337.5, 17.0),
    (True, 0.25, 127.0, 125.884, 0.62),
    (True, 0.50, 32.5, 32.230, 0.07),
    (True, 0.75, 15.6, 15.334, 0.03),
    (True, 1.00, 9.0, 9.241, 0.018),
    (True, 1.50, 4.5, 4.633, 0.009),
    (True, 2.00, 2.8, 2.907, 0.003),
    (True, 2.50, 2.0, 2.078, 0.003),
    (True, 4.00, 1.1, 1.162, 0.0015),
]


# Without a shift the digit printed after the point is a zero: 1379 is what is known.
@pytest.mark.parametrize(("shift", "printed"), FIXED)
def test_fixed_limits_as_printed(shift, printed):
    half_digit = 0.5 if shift == 0.0 else 0.05

    assert ewma_run_length(0.05, 3.0, shift) == pytest.approx(float(printed), abs=half_digit)


@pytest.mark.parametrize(("shift", "printed"), OPENING)
def test_opening_limits_as_printed(shift, printed):
    found = ewma_run_length(0.05, 3.0, shift, opening_limits=True)

    assert found == pytest.approx(float(printed), abs=0.05)


@pytest.mark.parametrize(("opening", "shift", "printed", "simulated", "three_errors"), NOT_MET)
def test_figures_that_are_not_met(opening, shift, printed, simulated, three_errors):
    found = ewma_run_length(0.05, 3.0, shift, opening_limits=opening)

    assert found == pytest.approx(simulated, abs=three_errors)
    assert abs(simulated - printed) > 0.05
    assert found == pytest.approx(printed, rel=0.06)
