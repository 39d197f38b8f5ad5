"""Voltage over strings of cells in series.

Status: computed, in a library of reference values made apart from this program: 100 copper cells
at 2.05 V, 200 zinc cells at 3.4 V.
"""

import pytest

from server.science.losses.leakage import string_volts


@pytest.mark.parametrize(("volts", "cells", "string"), [(2.05, 100, 205.0), (3.4, 200, 680.0)])
def test_the_string(volts, cells, string):
    assert string_volts(volts, cells) == pytest.approx(string, rel=1e-12)
