"""SAS/QC manual (1999), functions CUSUMARL and EWMAARL: run lengths to eleven digits.

Looked up: the EWMA in the manual itself (function EWMAARL), the CUSUM as quoted in the manual of
the R package spc (xcusum.arl). Their CUSUM has 24 quadrature points for a range of 8 standard
deviations, which makes 1e-7 of it; in the two-sided figure the other side, which practically never
signals, takes away 1e-6, which is not in the converged answer.
"""

import pytest

from server.science.statistics.ewma_run_length import ewma_run_length
from server.science.statistics.run_length import cusum_run_length


def test_one_sided_cusum():
    assert cusum_run_length(0.25, 8.0, 2.5) == pytest.approx(4.1500836225, rel=5e-8)
    ahead = cusum_run_length(0.25, 8.0, 2.5, head_start=0.1)
    assert ahead == pytest.approx(4.1061588131, rel=5e-8)


def test_two_sided_cusum():
    assert cusum_run_length(0.25, 8.0, 2.5, sides=2) == pytest.approx(4.1500826715, rel=5e-7)


def test_ewma():
    assert ewma_run_length(0.25, 3.0, 1.0) == pytest.approx(11.154267016, rel=1e-9)
