"""L. A. Jones, C. W. Champ and S. E. Rigdon, Technometrics 43 (2001) 156: EWMA with estimates.

Weight 0.2, width 2.636, twenty samples of five behind the estimates. Looked up: a hundred million
simulated charts in the manual of the R package spc (xewma.arl.prerun): 200.325 (standard error
0.020) with known parameters, 144.458 (0.022) with estimated ones and the limit divided by c4, the
bias of the standard deviation.
"""

import math

import pytest

from server.science.statistics.doubtful_run_length import ewma_run_length_estimated
from server.science.statistics.ewma_run_length import ewma_run_length


def test_known_parameters():
    assert ewma_run_length(0.2, 2.636) == pytest.approx(200.325, abs=3 * 0.020)


def test_estimated_parameters():
    degrees = 80
    c4 = math.sqrt(2.0 / degrees) * math.exp(
        math.lgamma((degrees + 1) / 2.0) - math.lgamma(degrees / 2.0)
    )

    found = ewma_run_length_estimated(0.2, 2.636 / c4, 0.0, readings=20, degrees_of_freedom=degrees)

    assert found == pytest.approx(144.458, abs=3 * 0.022)
