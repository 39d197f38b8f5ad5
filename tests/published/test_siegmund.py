"""D. Siegmund, Sequential Analysis (1985): approximate run length of a CUSUM.

Two-sided, k 0.5, h 5. Looked up: 469.111182, 139.776943, 38.006815, 17.030390 and 10.336195 at
shifts of 0 to 1, in a public test suite. 5.6660022 at 1.5: computed from the formula, in a library
of reference values made apart from this program.
"""

import pytest

from server.science.statistics.run_length import cusum_run_length, siegmund_run_length

TABLE = [
    (0.0, 469.111182),
    (0.25, 139.776943),
    (0.5, 38.006815),
    (0.75, 17.030390),
    (1.0, 10.336195),
    (1.5, 5.6660022),
]


@pytest.mark.parametrize(("shift", "printed"), TABLE)
def test_the_formula(shift, printed):
    assert siegmund_run_length(0.5, 5.0, shift, sides=2) == pytest.approx(printed, rel=1e-6)


@pytest.mark.parametrize("shift", [shift for shift, _ in TABLE])
def test_it_is_near_the_integral_equation(shift):
    exact = cusum_run_length(0.5, 5.0, shift, sides=2)

    assert siegmund_run_length(0.5, 5.0, shift, sides=2) == pytest.approx(exact, rel=0.015)
