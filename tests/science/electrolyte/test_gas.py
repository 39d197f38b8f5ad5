import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.science.electrolyte.gas import bruggeman_risen_s_m, bruggeman_s_m
from server.science.errors import OutOfRange

BOTH = pytest.mark.parametrize("mixed", [bruggeman_s_m, bruggeman_risen_s_m])


@BOTH
def test_without_gas_the_conductivity_is_unchanged(mixed):
    assert mixed(60.0, 0.0) == 60.0


@BOTH
@given(share=st.floats(0.0, 0.9), more=st.floats(1e-3, 0.09))
def test_more_gas_conducts_less(mixed, share, more):
    assert mixed(60.0, share + more) < mixed(60.0, share)


@given(share=st.floats(0.0, 0.02))
def test_a_little_gas_costs_one_and_a_half_times_its_volume(share):
    # Maxwell's formula for few bubbles, (1 - gas) / (1 + gas / 2), begins the same way.
    maxwell = (1.0 - share) / (1.0 + share / 2.0)

    assert bruggeman_s_m(1.0, share) == pytest.approx(1.0 - 1.5 * share, abs=4e-4)
    assert bruggeman_s_m(1.0, share) == pytest.approx(maxwell, abs=4e-4)


@given(top=st.floats(1e-9, 0.99))
def test_rising_gas_is_the_mean_of_its_slices(top):
    # Gauss-Legendre, exact far below the tolerance for so smooth a curve.
    nodes, weights = np.polynomial.legendre.leggauss(60)
    slices = bruggeman_s_m(60.0, top * (nodes + 1.0) / 2.0)

    assert bruggeman_risen_s_m(60.0, top) == pytest.approx((weights * slices).sum() / 2, rel=1e-6)


def test_half_the_top_share_is_nearly_the_same():
    assert bruggeman_s_m(60.0, 0.10) == pytest.approx(bruggeman_risen_s_m(60.0, 0.20), rel=0.002)


@BOTH
def test_missing_numbers_stay_missing_and_spare_their_neighbours(mixed):
    found = mixed([60.0, math.nan, 60.0], [0.05, 0.05, math.nan])

    assert np.isnan(found).tolist() == [False, True, True]
    assert found[0] == mixed(60.0, 0.05)


@BOTH
@pytest.mark.parametrize("share", [-0.01, 1.0, 5.0])
def test_a_share_that_is_none_is_refused(mixed, share):
    with pytest.raises(OutOfRange, match="gas_share"):
        mixed(60.0, [0.05, share])


@BOTH
def test_a_negative_conductivity_is_refused(mixed):
    with pytest.raises(OutOfRange, match="conductivity_s_m"):
        mixed(-1.0, 0.05)
