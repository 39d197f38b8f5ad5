"""Shiryaev-Roberts run lengths: Moustakides et al. (2009) table 4, and Knoth (2006) table 2.

G. V. Moustakides, A. S. Polunchenko and A. G. Tartakovsky, Communications in Statistics: Theory and
Methods 38 (2009) 3225; S. Knoth, Frontiers in Statistical Quality Control 8 (2006) 74. Looked up:
as quoted in the manual of the R package spc (xgrsr.arl, xgrsr.ad, xgrsr.crit).
"""

import numpy as np
import pytest

from server.science.statistics.change_point_design import (
    shiryaev_roberts_run_length,
    shiryaev_roberts_settled_run_length,
    shiryaev_roberts_threshold,
)

# Wanted run length, threshold, run length found, with the shift from the start, and with it late.
MOUSTAKIDES = [
    (50, 28.02, 50.79, 5.46, 4.37),
    (100, 56.04, 100.79, 6.71, 5.46),
    (500, 280.19, 500.80, 9.78, 8.33),
    (1000, 560.37, 1000.79, 11.14, 9.64),
    (5000, 2801.75, 5001.75, 14.34, 12.79),
    (10000, 5603.7, 10000.78, 15.73, 14.17),
]


@pytest.mark.parametrize(("wanted", "threshold", "in_control", "at_once", "late"), MOUSTAKIDES)
def test_moustakides_as_printed(wanted, threshold, in_control, at_once, late):
    found = shiryaev_roberts_run_length(threshold, 1.0, [0.0, 1.0])
    settled = shiryaev_roberts_settled_run_length(threshold, 1.0, 1.0)

    # 5001.75 is printed where the other rows, in proportion, would have 5000.6.
    assert found[0] == pytest.approx(in_control, rel=3e-4 if wanted == 5000 else 1e-5, abs=0.006)
    assert found[1] == pytest.approx(at_once, abs=0.007)
    # Theirs runs through many false alarms, ours through none: it matters for short runs.
    assert settled == pytest.approx(late, rel=0.015 if wanted < 500 else 2e-3)


# They need the run length to be the wanted one at least, and it is that of the threshold + 0.79.
@pytest.mark.parametrize(("wanted", "threshold"), [row[:2] for row in MOUSTAKIDES[:4]])
def test_thresholds(wanted, threshold):
    assert shiryaev_roberts_threshold(wanted + 0.79, 1.0) == pytest.approx(threshold, rel=3e-4)


def test_knoth_as_printed():
    shifts = np.array([0.0, 0.5, 1.0, 1.5, 2.0, 2.5, 3.0])

    at_once = shiryaev_roberts_run_length(390.0, 1.0, shifts)
    late = shiryaev_roberts_settled_run_length(390.0, 1.0, shifts)

    assert at_once[:2] == pytest.approx([697, 33], abs=0.5)
    assert at_once[2:] == pytest.approx([10.4, 6.2, 4.4, 3.5, 2.9], abs=0.051)
    assert late[:2] == pytest.approx([689, 30], abs=0.5)
    assert late[2:] == pytest.approx([8.9, 5.1, 3.6, 2.8, 2.4], abs=0.051)
