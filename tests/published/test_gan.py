"""F. F. Gan, J. Stat. Comput. Simulation 45 (1993) 169, table 1: EWMA with a median run of 500.

Limits in standard deviations of a reading, to three digits; each should give a median run length of
500 readings. Looked up: as quoted in the manual of the R package spc (xewma.q). A unit in the
last digit of a limit is worth about three readings.
"""

import pytest

from server.science.statistics.ewma_run_length import ewma_chain


@pytest.mark.parametrize(
    ("weight", "limit"), [(0.05, 0.441), (0.10, 0.675), (0.15, 0.863), (0.20, 1.027), (0.25, 1.177)]
)
def test_the_median_is_500(weight, limit):
    width = limit / (weight / (2.0 - weight)) ** 0.5

    assert ewma_chain(weight, width, 0.0).quantile(0.0, 0.5) == pytest.approx(500, abs=4)
