"""NIST Statistical Reference Datasets, linear regression: NoInt1 and NoInt2, lines through zero.

Looked up: data and certified values, as public test suites of several libraries quote them
(www.itl.nist.gov/div898/strd, NoInt1 and NoInt2). Certified to fifteen figures.
"""

import numpy as np
import pytest

from server.science.losses.calibration import through_origin


def test_noint1():
    found = through_origin(np.arange(60.0, 71.0), np.arange(130.0, 141.0))

    assert found.value == pytest.approx(2.07438016528926, rel=1e-13)
    assert found.standard_uncertainty == pytest.approx(0.0165289256198347, rel=1e-12)
    assert found.degrees_of_freedom == 10


def test_noint2():
    found = through_origin([4.0, 5.0, 6.0], [3.0, 4.0, 4.0])

    assert found.value == pytest.approx(0.727272727272727, rel=1e-13)
    assert found.standard_uncertainty == pytest.approx(0.0420827318078432, rel=1e-12)
    assert found.degrees_of_freedom == 2
